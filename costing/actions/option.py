"""Forecasts frozen as they come, the option paper that they open, and what is decided on it."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from datetime import date
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max
from django.utils import timezone

from costing.appraisal import METHOD
from costing.documents.result import as_json
from costing.models import Forecast, OptionPaper
from costing.queries.forecasts import WORKS_FORECAST, seen_so_far
from costing.queries.standing import standing_of
from structures.access import Act, insist
from structures.actions.refusals import as_documents
from structures.actions.register import append
from structures.actions.second_factor import insist_given
from structures.actions.stage import locked
from structures.errors import Refused
from structures.life.chain import content_digest
from structures.models import Run, Strip
from structures.queries.delegation import delegator_of
from structures.queries.districts import today_of
from structures.queries.runs import site_subject
from structures.runs.queue import start_run

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import datetime
    from decimal import Decimal
    from uuid import UUID

    from costing import forecast as pure
    from costing.options.ways import Option
    from costing.queries.forecasts import ForecastInputs
    from structures.models import Structure, User

OPENED: Final = "option paper opened"
WEIGHED: Final = "option paper weighed again"
DECIDED: Final = "option paper decided"
RESUMED: Final = "strips go on"
GOING_ON: Final = ("go on", "step")  # ways by which this trench is worked on


@dataclass(frozen=True, slots=True)
class Asked:
    """What the engineer gives for the ways that need more than the forecast; None is not given."""

    shelf_m: float | None = None
    reach_m: float | None = None
    licensed_design: str = ""
    other_survey: int | None = None


@transaction.atomic
def request_forecast(*, structure_id: int, by: User, asked: Asked | None = None) -> Run:
    """Start a forecast by hand; the same levels, measurements and wishes give the run there is.

    Raises
    ------
    Refused
        If the user may not ask for prices here.
    """
    structure = locked(structure_id)
    insist(by, Act.REQUEST_ESTIMATE, structure)
    params = {
        "structure": structure.pk,
        "cause": seen_so_far(structure),
        "asked": asdict(asked or Asked()),
    }
    return start_run(
        kind=WORKS_FORECAST,
        params=params,
        subject=site_subject(structure.site.code),
        asked_by=by,
    )


def asked_before(structure: Structure) -> Asked:
    """What was given for the open paper; a new level found changes none of it."""
    paper = structure.option_papers.filter(way="").first()
    return Asked(**paper.ways["asked"]) if paper is not None and paper.ways else Asked()


def freeze_forecast(
    run_id: UUID,
    inputs: ForecastInputs,
    found: pure.Forecast,
    ways: tuple[Option, ...],
    asked: Asked,
) -> None:
    """Write a forecast, and open the option paper that it asks for; part of ending its run."""
    run = Run.objects.select_related("asked_by").get(pk=run_id)
    structure = locked(inputs.structure.pk)
    frozen = None if found.total is None else _freeze(run, structure, found)
    halted = list(structure.strips.filter(halted=True, covered_on__isnull=True))
    paper = structure.option_papers.filter(way="").first()
    if paper is None and not _asks_anew(structure, found, halted):
        return
    strips = halted or _hold(structure, found)
    document = {
        "asked": asdict(asked),
        "on": inputs.on.isoformat(),
        "days_left": inputs.season.days_left,
        "why_no_clock": inputs.season.why,
        "reasons": list(found.reasons),
        "ways": [_told(one, found) for one in ways],
    }
    values = {
        "forecast": frozen,
        "cause": _cause(found, strips),
        "ways": document,
        "digest": content_digest({"ways": document, "forecast": run.digest}),
    }
    if paper is None:
        newest = structure.option_papers.aggregate(newest=Max("version"))["newest"] or 0
        paper = OptionPaper.objects.create(
            structure=structure, version=newest + 1, opened_by=run.asked_by, **values
        )
        act = OPENED
    else:
        for key, value in values.items():
            setattr(paper, key, value)
        paper.save(update_fields=list(values))
        act = WEIGHED
    paper.strips.set(strips)
    if run.asked_by is not None:
        _enter(paper, act, run.asked_by, found.appraisal.schedule.currency, {"ways": document})


@transaction.atomic
def decide_option(
    *,
    paper_id: int,
    way: str,
    why: str,
    seen: str,
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
) -> OptionPaper:
    """Decide how it goes on. On "go on" and "step" the strips go on once nothing is to be revised.

    Parameters
    ----------
    seen
        Digest of the figures that were looked at; others by now make the act void.
    signed_in_at
        When the person signed in; None for a device's token, which decides nothing.
    factor_given_at
        When a one-time code was last given in that session; None where none was.

    Raises
    ------
    Refused
        If the way is blocked, or blocked by today's season; the figures changed since; it is the
        user's own paper; or no reason is given.
    """
    paper = _locked_paper(paper_id)
    structure = paper.structure
    if signed_in_at is None:
        raise Refused(
            "A device's token decides nothing.", remedy="Sign in on the page and decide there."
        )
    insist(by, Act.DECIDE_OPTIONS, structure)
    district = structure.site.watershed.district
    insist_given(by=by, district=district, given_at=factor_given_at)
    _insist_open(paper, seen, why, by)
    chosen = next((one for one in paper.ways["ways"] if one["way"] == way), None)
    if chosen is None:
        raise Refused(f"{way!r} is no way.", where="way", remedy="Choose one of the four.")
    _insist_way(paper, chosen)
    paper.way, paper.why = way, why.strip()
    paper.decided_by, paper.decided_at = by, timezone.now()
    instead_of = delegator_of(by, Act.DECIDE_OPTIONS, structure)
    paper.entry = _enter(
        paper,
        DECIDED,
        by,
        _currency(paper),
        {
            "way": way,
            "why": paper.why,
            "chosen": chosen,
            "signed_in_at": signed_in_at.isoformat(timespec="seconds"),
            **({} if instead_of is None else {"instead_of": instead_of.username}),
        },
    )
    paper.save(update_fields=["way", "why", "decided_by", "decided_at", "entry"])
    if way in GOING_ON and not standing_of(structure).facts["revisions_missing"]:
        _resume(paper, by)
    return paper


@transaction.atomic
def resume_strips(*, paper_id: int, by: User) -> list[Strip]:
    """Let the strips of a decided paper go on, once what had to be revised is revised.

    Raises
    ------
    Refused
        If it was not decided to go on here, or a revised sanction or approval is missing.
    """
    paper = _locked_paper(paper_id)
    insist(by, Act.DECIDE_OPTIONS, paper.structure)
    if paper.way not in GOING_ON:
        said = paper.way or "not decided"
        raise Refused(
            f"The option paper says: {said}.",
            where=str(paper),
            remedy="Only on go on or step work goes on here.",
        )
    missing = standing_of(paper.structure).facts["revisions_missing"]
    if missing:
        raise Refused(
            f"Missing: {', '.join(missing)}.",
            where=str(paper),
            remedy="Have it given first; then the strips go on.",
        )
    return _resume(paper, by)


def _freeze(run: Run, structure: Structure, found: pure.Forecast) -> Forecast:
    sums, spread = found.sums, found.spread
    return Forecast.objects.create(
        structure=structure,
        run=run,
        input_digest=run.digest,
        method=METHOD,
        currency=found.appraisal.schedule.currency,
        total=found.total,
        p10=spread and spread.p10,
        p90=spread and spread.p90,
        measured_value=found.measured and found.measured.amount,
        to_complete=found.to_complete,
        technical_excess_percent=excess_percent(sums.technical, found.total),
        administrative_excess_percent=excess_percent(sums.administrative, found.total),
        asks_for_paper=found.asks_for_paper,
        result={
            "appraisal": as_json(found.appraisal),
            "technical": _text(sums.technical),
            "administrative": _text(sums.administrative),
            "technical_percent": f"{sums.technical_percent:f}",
            "administrative_percent": f"{sums.administrative_percent:f}",
            "surprises": [asdict(one) for one in found.surprises],
            "found": [asdict(one) for one in found.as_found.found],
            "findings": as_documents(found.findings),
            "reasons": list(found.reasons),
        },
    )


def excess_percent(sanctioned: Decimal | None, total: Decimal | None) -> float | None:
    """Excess in per cent, not rounded: a hundredth over the limit is over it (handbook 8.6, 8.g)."""
    if sanctioned is None or total is None:
        return None
    return float((total - sanctioned) * 100 / sanctioned)


def _asks_anew(structure: Structure, found: pure.Forecast, halted: list[Strip]) -> bool:
    """Whether a paper is to be opened: for what no paper was decided on yet."""
    if not (found.asks_for_paper or halted):
        return False
    last = structure.option_papers.order_by("-version").first()
    if last is None or last.forecast is None or found.total is None:
        return True
    known = set(last.strips.values_list("pk", flat=True))
    return found.total > last.forecast.total or any(one.pk not in known for one in halted)


def _hold(structure: Structure, found: pure.Forecast) -> list[Strip]:
    """Put work on hold where rock surprised; where it did not, on every strip that is not covered."""
    left = list(structure.strips.filter(covered_on__isnull=True).order_by("number"))
    surprised = {one.strip for one in found.surprises}
    affected = [one for one in left if one.number in surprised] or left
    Strip.objects.filter(pk__in=[one.pk for one in affected]).update(halted=True)
    return affected


def _cause(found: pure.Forecast, strips: list[Strip]) -> str:
    said = [f"On hold: {', '.join(str(one) for one in strips)}."] if strips else []
    said += [
        f"Strip {one.strip}: rock at {one.found_m:.2f} m, drawn {one.low_m:.2f} to {one.high_m:.2f}."
        for one in found.surprises
    ]
    return " ".join([*said, *(one.what for one in found.findings)])


def _told(option: Option, found: pure.Forecast) -> dict[str, Any]:
    """Give a way as the paper keeps it."""
    leak = option.leak
    return {
        "way": option.way,
        "words": option.words,
        "total": _text(option.total),
        "to_complete": _text(option.to_complete),
        "technical_excess_percent": excess_percent(found.sums.technical, option.total),
        "administrative_excess_percent": excess_percent(found.sums.administrative, option.total),
        "days": option.days,
        "depth_m": option.depth_m,
        "leak": None
        if leak is None
        else {
            "least_m3_per_day": leak.least_m3_per_day,
            "most_m3_per_day": leak.most_m3_per_day,
            "words": leak.words,
        },
        "findings": as_documents(option.findings),
        "reasons": list(option.reasons),
        "may_be_chosen": option.may_be_chosen,
    }


def _text(amount: Decimal | None) -> str | None:
    return None if amount is None else f"{amount:f}"


def _locked_paper(paper_id: int) -> OptionPaper:
    owner = OptionPaper.objects.values_list("structure_id", flat=True).get(pk=paper_id)
    structure = locked(owner)
    paper = OptionPaper.objects.select_related("forecast").get(pk=paper_id)
    paper.structure = structure
    return paper


def _insist_open(paper: OptionPaper, seen: str, why: str, by: User) -> None:
    where = str(paper)
    if paper.way:
        raise Refused(f"It was decided: {paper.way}.", where=where, remedy="Look at it again.")
    if seen != paper.digest:
        what = "The figures changed since you looked at them."
        raise Refused(what, where=where, remedy="Look at the four ways again.")
    if paper.opened_by_id == by.pk:
        what = "Your own work, which somebody else must decide on: option paper."
        raise Refused(what, where=where, remedy="Ask another person.")
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write why this way.")


def _insist_way(paper: OptionPaper, chosen: Mapping[str, Any]) -> None:
    """Refuse a way that a rule blocks, or that today leaves no days for any more (SG-01)."""
    blocks = [one for one in chosen["findings"] if one["level"] == "block"]
    if blocks:
        raise Refused(
            f'"{chosen["way"]}" cannot be chosen: {blocks[0]["what"]}',
            where="way",
            remedy=blocks[0]["remedy"],
        )
    document, today = paper.ways, today_of(paper.structure.site.watershed.district)
    if chosen["way"] == "close" or document["days_left"] is None or chosen["days"] is None:
        return
    left = document["days_left"] - (today - date.fromisoformat(document["on"])).days
    if chosen["days"] > left:
        what = f"It needs {chosen['days']} days and {max(left, 0)} are left today."
        raise Refused(what, where="way", remedy="Choose another way, or have it weighed again.")


def _resume(paper: OptionPaper, by: User) -> list[Strip]:
    strips = list(paper.strips.filter(halted=True).order_by("number"))
    if strips:
        Strip.objects.filter(pk__in=[one.pk for one in strips]).update(halted=False)
        _enter(paper, RESUMED, by, None, {"strips": [one.number for one in strips]})
    return strips


def _currency(paper: OptionPaper) -> str:
    if paper.forecast is not None:
        return paper.forecast.currency
    return paper.structure.site.watershed.district.currency


def _enter(
    paper: OptionPaper, act: str, by: User, currency: str | None, content: Mapping[str, Any]
) -> Any:
    structure = paper.structure
    return append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"option paper {paper.version} of {structure.site.code}",
        structure=structure,
        content={
            **({} if currency is None else {"currency": currency}),
            "paper": paper.version,
            "digest": paper.digest,
            "cause": paper.cause,
            **content,
        },
    )
