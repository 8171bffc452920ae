"""Asking for an estimate, and freezing what the worker found; neither ever alters an old one."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max

from costing.appraisal import METHOD, SEED
from costing.documents.result import as_json
from costing.models import Estimate, EstimateLine, RateSchedule
from costing.queries.schedules import schedules_valid_on
from structures.access import Act, insist
from structures.actions.design import draw_design, freeze_design, settled_line
from structures.actions.register import append
from structures.errors import Refused
from structures.intake.practice import practice_document
from structures.models import Run, Site, Survey
from structures.queries.districts import today_of
from structures.queries.runs import site_subject
from structures.queries.settings import counted_in
from structures.queries.sites import newest_survey
from structures.runs.book import input_digest
from structures.runs.queue import start_run

if TYPE_CHECKING:
    from collections.abc import Mapping
    from uuid import UUID

    from costing.appraisal import Appraisal
    from costing.queries.estimates import PriceInputs
    from structures.models import User

PRICE: Final = "estimate.price"
FROZEN: Final = "estimate frozen"  # the act of the register


@transaction.atomic
def request_estimate(
    *,
    site_id: int,
    by: User,
    survey_id: int | None = None,
    schedule_id: int | None = None,
    rock_line_id: int | None = None,
    wall: Mapping[str, Any] | None = None,
) -> Run:
    """Start the run that prices a site; what is not named is the newest there is.

    The same inputs by the same method give the run that there is already.

    Parameters
    ----------
    wall
        Settings of the wall, before those of the survey and the district.

    Raises
    ------
    Refused
        If there is no survey or no schedule, the schedule does not hold today (ES-02), or a
        setting of the wall cannot be.
    """
    site = Site.objects.select_related("watershed__district").get(pk=site_id)
    insist(by, Act.REQUEST_ESTIMATE, site)
    survey = _survey(site, survey_id)
    schedule = _schedule(site, schedule_id)
    line = settled_line(survey, rock_line_id)
    design = draw_design(survey=survey, rock_line=line, wall=wall or {}, by=by)
    counted = counted_in(site.watershed.district)
    params = {
        "site": site.code,
        "design_id": design.pk,
        "design": design.digest,
        "schedule_id": schedule.pk,
        "schedule": schedule.digest,
        "wall": dict(wall or {}),
        "draws": counted.draws,
        "practice": practice_document(counted.practice),
        "seed": SEED,
    }
    return start_run(kind=PRICE, params=params, subject=site_subject(site.code), asked_by=by)


def freeze_estimate(run_id: UUID, inputs: PriceInputs, found: Appraisal) -> Estimate:
    """Write an estimate with its lines and freeze the design under it; part of ending its run."""
    run = Run.objects.select_related("asked_by").get(pk=run_id)
    design, site = inputs.design, inputs.design.survey.site
    # The site row locks its versions.
    Site.objects.select_for_update().get(pk=site.pk)
    newest = Estimate.objects.filter(site=site).aggregate(newest=Max("version"))["newest"] or 0
    abstract, spread = found.estimate, found.spread
    estimate = Estimate.objects.create(
        site=site,
        version=newest + 1,
        design=design,
        survey=design.survey,
        rock_line=design.rock_line,
        wall=design.wall,
        schedule=inputs.schedule,
        run=run,
        input_digest=input_digest({**run.params, "method": METHOD}),
        method=found.method,
        complete=found.complete,
        currency=abstract.currency,
        subtotal=abstract.subtotal,
        contingency=abstract.contingency,
        overhead=abstract.overhead,
        total=abstract.total,
        sanction=abstract.sanction,
        p10=None if spread is None else spread.p10,
        p50=None if spread is None else spread.p50,
        p90=None if spread is None else spread.p90,
        open_flank_share=None if spread is None else spread.open_flank_share,
        result=as_json(found),
        asked_by=run.asked_by,
    )
    EstimateLine.objects.bulk_create(
        EstimateLine(
            estimate=estimate,
            order=order,
            item=line.item,
            from_m=line.from_m,
            to_m=line.to_m,
            unit=line.unit,
            quantity=line.quantity,
            rate=line.rate,
            amount=line.amount,
        )
        for order, line in enumerate(abstract.lines, start=1)
    )
    freeze_design(design.pk)
    if run.asked_by is not None:
        append(
            district=site.watershed.district,
            by=run.asked_by,
            act=FROZEN,
            subject=f"estimate {estimate.version} of {site.code}",
            structure=design.structure,
            content=frozen_content(estimate),
        )
    return estimate


def frozen_content(estimate: Estimate) -> dict[str, Any]:
    """Give an estimate as the register freezes it."""
    return {
        "currency": estimate.currency,
        "estimate": estimate.input_digest,
        "estimate_version": estimate.version,
        "design": estimate.design.digest,
        "design_version": estimate.design.version,
        "schedule": estimate.schedule.code,
        "method": estimate.method,
        "complete": estimate.complete,
        "total": f"{estimate.total:f}",
        "for_sanction": None if estimate.sanction is None else f"{estimate.sanction:f}",
    }


def _survey(site: Site, survey_id: int | None) -> Survey:
    if survey_id is not None:
        return site.surveys.select_related("site__watershed__district").get(pk=survey_id)
    survey = newest_survey(site)
    if survey is None:
        raise Refused(
            f"{site.code} has no survey.", where=site.code, remedy="Hand in its survey first."
        )
    survey.site = site
    return survey


def _schedule(site: Site, schedule_id: int | None) -> RateSchedule:
    """Give the schedule named, or the newest that holds today; one that does not is refused."""
    district = site.watershed.district
    today = today_of(district)
    if schedule_id is None:
        found = schedules_valid_on(district, today).first()
        if found is None:
            raise Refused(
                f"No rate schedule of {district.name} holds on {today}.",
                where=site.code,
                remedy="Bring in the rates of this year.",
            )
        return found
    schedule = RateSchedule.objects.get(pk=schedule_id, district=district)
    if schedule.valid_to is not None and schedule.valid_to < today:
        what = f"Schedule {schedule.code} ended {schedule.valid_to}."
        raise Refused(what, where=site.code, remedy="Price by a schedule that holds today.")
    if schedule.valid_from is not None and schedule.valid_from > today:
        what = f"Schedule {schedule.code} begins on {schedule.valid_from}."
        raise Refused(what, where=site.code, remedy="Price by a schedule that holds today.")
    return schedule
