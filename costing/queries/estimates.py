"""Estimates as they were frozen, with what makes them stale; nothing here alters one."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from django.db.models import DateField, F, OuterRef, Q, Subquery, Value
from django.db.models.functions import Coalesce
from django.utils import timezone

from costing.appraisal import METHOD
from costing.models import Estimate, EstimateLine, RateSchedule
from costing.queries.schedules import schedule_record
from structures import access
from structures.intake.defaults import EVERY, WALL
from structures.intake.practice import KEYS, practice_of
from structures.models import Design, RockLine, Survey
from structures.queries.settings import counted_in
from structures.queries.sites import SiteSheet, site_sheet
from structures.queries.surveys import pack_of
from structures.validators import DRAWS

if TYPE_CHECKING:
    from collections.abc import Mapping
    from uuid import UUID

    from django.db.models import QuerySet

    from costing.price import rates
    from structures.intake.pack import SurveyPack
    from structures.models import User
    from structures.queries.settings import Counted


def visible_estimates(user: User) -> QuerySet[Estimate]:
    """Estimates of all sites the user may see, newest first, with what they are judged stale by."""
    found = Estimate.objects.filter(site__in=access.sites(user, access.Act.SEE_MONEY)).defer(
        "result", "run__result"
    )
    return _judged(found).order_by("-frozen_at", "-pk")


def estimates_of(user: User, code: str) -> QuerySet[Estimate]:
    return visible_estimates(user).filter(site__code=code)


def estimate_of_run(user: User, run_id: UUID) -> Estimate | None:
    return visible_estimates(user).filter(run_id=run_id).first()


def lines_of(estimate: Estimate) -> QuerySet[EstimateLine]:
    return estimate.lines.order_by("order")


def stale_reasons(estimate: Estimate, counted: Counted | None = None) -> tuple[str, ...]:
    """Say why an estimate is stale; empty where it is not. For rows of `visible_estimates`.

    Parameters
    ----------
    counted
        Settings in force in its district, where the caller has asked for them already.
    """
    reasons = []
    if estimate.newest_survey != estimate.survey.version:
        reasons.append(
            f"Survey {estimate.newest_survey} came in; this is priced on "
            f"survey {estimate.survey.version}."
        )
    settled = 0 if estimate.rock_line is None else estimate.rock_line.version
    if (estimate.newest_line or 0) != settled:
        reasons.append(f"Rock line {estimate.newest_line} was settled on this survey since.")
    if estimate.valid_schedule_id is None:
        reasons.append(_ended(estimate))
    elif estimate.valid_schedule_id != estimate.schedule_id:
        reasons.append(f"Other rates hold today: {estimate.valid_schedule_code}.")
    counted = counted or counted_in(estimate.site.watershed.district)
    settings = _changed_settings(estimate, counted)
    if settings:
        reasons.append(f"Settings were changed since: {', '.join(settings)}.")
    if estimate.method != METHOD:
        reasons.append(f"The method is {METHOD} now; this was computed by {estimate.method}.")
    return tuple(reasons)


@dataclass(frozen=True, slots=True)
class PricedSheet:
    """One site with everything newest, its estimate and why that is stale."""

    sheet: SiteSheet
    estimate: Estimate | None
    stale: tuple[str, ...]


def priced_sheet(user: User, code: str) -> PricedSheet:
    """Everything on one site, money included.

    Raises
    ------
    Site.DoesNotExist
        If there is no such site where the user serves.
    """
    sheet = site_sheet(user, code)
    newest = estimates_of(user, code).first()
    return PricedSheet(sheet, newest, () if newest is None else stale_reasons(newest))


@dataclass(frozen=True, slots=True)
class PriceInputs:
    """What a run of `estimate.price` computes with."""

    design: Design
    schedule: RateSchedule
    pack: SurveyPack
    rates: rates.RateSchedule


def price_inputs(params: Mapping[str, Any]) -> PriceInputs:
    """Fetch what the parameters of such a run name."""
    design = Design.objects.select_related(
        "survey__site__watershed__district", "rock_line", "structure"
    ).get(pk=params["design_id"])
    schedule = RateSchedule.objects.prefetch_related("rates").get(pk=params["schedule_id"])
    points = None if design.rock_line is None else design.rock_line.points
    return PriceInputs(
        design=design,
        schedule=schedule,
        pack=pack_of(design.survey, points=points, wall=design.wall),
        rates=schedule_record(schedule),
    )


def _judged(found: QuerySet[Estimate]) -> QuerySet[Estimate]:
    surveys = Survey.objects.filter(site=OuterRef("site")).order_by("-version")
    lines = RockLine.objects.filter(survey=OuterRef("survey")).order_by("-version")
    day = OuterRef("day")
    valid = RateSchedule.objects.filter(
        Q(valid_from__isnull=True) | Q(valid_from__lte=day),
        Q(valid_to__isnull=True) | Q(valid_to__gte=day),
        district=OuterRef("site__watershed__district"),
    ).order_by("-at", "-pk")
    today = Value(timezone.localdate())
    return found.select_related(
        "site__watershed__district",
        "survey",
        "rock_line",
        "schedule",
        "design",
        "run",
        "asked_by",
    ).annotate(
        day=Coalesce(F("site__watershed__district__as_of"), today, output_field=DateField()),
        newest_survey=Subquery(surveys.values("version")[:1]),
        newest_line=Subquery(lines.values("version")[:1]),
        valid_schedule_id=Subquery(valid.values("pk")[:1]),
        valid_schedule_code=Subquery(valid.values("code")[:1]),
    )


def _changed_settings(estimate: Estimate, counted: Counted) -> list[str]:
    """Name the settings that count now and did not then, or counted with another value.

    What the survey says of its wall, and what was asked for with the estimate, goes before any
    setting; what changes below it changes nothing.
    """
    params = estimate.run.params
    own = {*estimate.survey.pack.get("wall", {}), *params["wall"]}
    then, now = estimate.wall, counted.wall
    pairs = [
        (WALL[key], then.get(key, WALL[key].value), now.get(key, WALL[key].value))
        for key in WALL
        if key not in own
    ]
    before = practice_of(params["practice"])
    pairs += [(EVERY[key], getattr(before, key), getattr(counted.practice, key)) for key in KEYS]
    pairs.append((EVERY[DRAWS], params["draws"], counted.draws))
    return [
        f"{default.words} {default.written(now)}, was {default.written(then)}"
        for default, then, now in pairs
        if then != now
    ]


def _ended(estimate: Estimate) -> str:
    ended = estimate.schedule.valid_to
    if ended is None:
        return "No rate schedule of the district holds today."
    return f"Its rates {estimate.schedule.code} ended on {ended} and no others hold today."
