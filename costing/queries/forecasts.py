"""What a forecast of one structure is computed with, and forecasts and option papers as they stand."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from costing.forecast import Books, Drawn
from costing.models import Estimate, Forecast, OptionPaper
from costing.options.site import OnSite, season_on
from costing.price.money import gated
from costing.price.sanctioned import Sums
from costing.queries.measured import accepted, measured_book
from costing.queries.schedules import schedule_record
from costing.queries.standing import standing_of
from structures import access
from structures.access import Act
from structures.errors import Refused
from structures.ground.found_lines import DrawnRange
from structures.models import FoundLevel, Structure
from structures.queries.as_dug import found_levels
from structures.queries.districts import today_of
from structures.queries.drawn_wall import drawn_wall
from structures.queries.runs import runs_of_kind
from structures.queries.season import plan_of
from structures.queries.settings import counted_in, settings_in_force
from structures.queries.surveys import pack_of
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from datetime import date
    from decimal import Decimal

    from django.db.models import QuerySet

    from costing.options.site import Season
    from costing.queries.standing import Standing
    from structures.ground.found import FoundLevel as Found
    from structures.intake.pack import SurveyPack
    from structures.intake.practice import Practice
    from structures.models import Run, User
    from structures.queries.drawn_wall import DrawnWall

WORKS_FORECAST = "works.forecast"


@dataclass(frozen=True, eq=False, slots=True)
class ForecastInputs:
    """Everything that a forecast and the four ways of one structure are computed with."""

    structure: Structure
    drawn: Drawn
    found: tuple[Found, ...]
    books: Books
    season: Season
    draws: int
    practice: Practice
    on: date

    def on_site(self, spent: Decimal | None) -> OnSite:
        """Give what is covered and what stands open; `spent` is the worth of the work so far."""
        strips = list(self.structure.strips.filter(opened_on__isnull=False).order_by("number"))
        return OnSite(
            covered=tuple((one.from_m, one.to_m) for one in strips if one.covered_on is not None),
            open=tuple((one.from_m, one.to_m) for one in strips if one.covered_on is None),
            spent=spent,
        )


def forecast_inputs(structure_id: int) -> ForecastInputs:
    """Fetch what a forecast is computed with, as it is now.

    Raises
    ------
    Refused
        If no drawing is frozen, or no estimate was made: there is nothing to forecast.
    """
    structure = Structure.objects.select_related("site__watershed__district", "site__stream").get(
        pk=structure_id
    )
    drawn, standing = drawn_wall(structure), standing_of(structure)
    estimate = priced_by(standing)
    if drawn is None or estimate is None:
        raise Refused(
            "No drawing is frozen here." if drawn is None else "No estimate was made here.",
            where=structure.site.code,
            remedy="Without drawing and estimate no cost can be forecast.",
        )
    district = structure.site.watershed.district
    counted, today = counted_in(district), today_of(district)
    plan, progress = plan_of(structure)
    return ForecastInputs(
        structure=structure,
        drawn=Drawn(drawn.pack, ranges_of(drawn)),
        found=found_levels(structure),
        books=Books(
            schedule_record(estimate.schedule),
            sums_of(structure, standing),
            accepted(measured_book(structure)),
        ),
        season=season_on(plan, today, progress),
        draws=counted.draws,
        practice=counted.practice,
        on=today,
    )


def priced_by(standing: Standing) -> Estimate | None:
    """Give the estimate that was sanctioned; where none was, the newest."""
    given = standing.technical
    return standing.estimate if given is None or given.estimate is None else given.estimate


def sums_of(structure: Structure, standing: Standing) -> Sums:
    """Give what was sanctioned and approved, with the office's two limits."""
    lines = settings_in_force(structure.site.watershed.district)
    technical, administrative = standing.technical, standing.administrative
    return Sums(
        None if technical is None else technical.amount,
        None if administrative is None else administrative.amount,
        gated(lines["excess_technical_percent"].value).normalize(),
        gated(lines["excess_administrative_percent"].value).normalize(),
    )


def ranges_of(drawn: DrawnWall) -> tuple[DrawnRange, ...]:
    """Give the range recorded beside a settled line; none where it has none, or none was settled."""
    if drawn.range_offset_m is None or drawn.pack.rock_line is None:
        return ()
    found = []
    for offset in drawn.range_offset_m.tolist():
        low, high = drawn.range_at(offset)
        found.append(DrawnRange(offset, low, drawn.line_at(offset), high))
    return tuple(found)


def other_line(structure: Structure, version: int) -> SurveyPack:
    """Give the survey of another line with the rock line settled on it.

    Raises
    ------
    Refused
        If there is no such survey.
    """
    survey = structure.site.surveys.filter(version=version).first()
    if survey is None:
        what = f"{structure.site.code} has no survey {version}."
        raise Refused(what, where="other_survey", remedy="Name one that was handed in.")
    line = survey.rock_lines.order_by("-version").first()
    return pack_of(survey, points=None if line is None else line.points)


def seen_so_far(structure: Structure) -> str:
    """Give the digest of all that a forecast rests on and that changes while the trench is open."""
    standing = standing_of(structure)
    levels = FoundLevel.objects.filter(strip__structure=structure).values_list("pk", flat=True)
    checked = structure.measurements.filter(checked_by__isnull=False).values_list("pk", flat=True)
    told = {
        "found": sorted(map(str, levels)),
        "measured": sorted(map(str, checked)),
        "sanctions": [one and one.pk for one in (standing.technical, standing.administrative)],
        "strips": list(
            structure.strips.order_by("number").values_list("number", "opened_on", "covered_on")
        ),
        "on": today_of(structure.site.watershed.district),
    }
    return input_digest({key: _plain(value) for key, value in told.items()})


def visible_forecasts(user: User) -> QuerySet[Forecast]:
    found = Forecast.objects.filter(structure__site__in=access.sites(user, Act.SEE_MONEY))
    return found.select_related("structure__site__watershed__district", "run__asked_by").order_by(
        "-at", "-pk"
    )


def visible_papers(user: User) -> QuerySet[OptionPaper]:
    """Option papers where the user may see money, newest first."""
    found = OptionPaper.objects.filter(structure__site__in=access.sites(user, Act.SEE_MONEY))
    return (
        found.select_related(
            "structure__site__watershed__district", "forecast", "opened_by", "decided_by", "entry"
        )
        .prefetch_related("strips")
        .order_by("-opened_at", "-pk")
    )


def forecast_run(structure: Structure) -> Run | None:
    """The newest run that forecasts a structure."""
    found = runs_of_kind(WORKS_FORECAST).filter(params__structure=structure.pk)
    return found.order_by("-created_at").first()


def _plain(value: Any) -> Any:
    if isinstance(value, (list, tuple)):
        return [_plain(one) for one in value]
    return value if value is None or isinstance(value, (int, str)) else str(value)
