"""Readings and rain of a wall as the comparisons take them: what counts, and why the rest does not."""

from __future__ import annotations

import calendar
from collections import defaultdict
from dataclasses import dataclass
from datetime import date, datetime
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from structures.intake.rain import Rain
from structures.intake.readings import WellReading
from structures.life.stages import STAGES
from structures.models import Gauge, RainDay, RainMonth, Reading, Repair, Well
from structures.queries.settings import settings_in_force
from structures.queries.wells import marks_of, wells_of_site
from structures.water.effect import measure_effect
from structures.water.head import head_across
from structures.water.marks import mark_on
from structures.water.rules import EffectRules

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence
    from uuid import UUID

    from structures.intake.rain import Month
    from structures.models import District, Site, Watershed
    from structures.water.effect import Effect
    from structures.water.head import HeadAcross

COVERED: Final = "covered"
DECEMBER: Final = 12
OUT: Final[dict[str, str]] = {
    Reading.Standing.HELD: "waits for a decision",
    Reading.Standing.LEFT_OUT: "left out by decision",
}


@dataclass(frozen=True, slots=True)
class WallWells:
    """What stands on the page of a wall's effect; `effect` is None where no wall is completed."""

    completed: date | None
    wells: tuple[Well, ...]
    readings: tuple[WellReading, ...]
    rain: Rain | None
    rules: EffectRules
    effect: Effect | None
    head: HeadAcross | None
    pipes: tuple[str, str] | None
    waiting: int


def completed_on(site: Site) -> date | None:
    """Day on which the last strip was covered, else on which the structure moved to covered."""
    structure = site.structure
    strips = list(structure.strips.values_list("covered_on", flat=True))
    if strips and None not in strips:
        return max(strips)
    order = list(STAGES)
    if order.index(structure.stage) < order.index(COVERED):
        return None
    moves = structure.moves.filter(to_stage=COVERED).order_by("number")
    first = moves.first()
    return None if first is None else first.day


def wall_wells(site: Site) -> WallWells:
    """Compare the wells of a wall with control wells, before and after it was completed.

    Source: handbook 10.1, 10.10 and 10.11.
    """
    completed = completed_on(site)
    wells = wells_of_site(site)
    readings = readings_for(wells, site)
    rain = rain_of(site.watershed)
    rules = rules_of(site.watershed.district)
    waiting = sum(one.left_out == OUT[Reading.Standing.HELD] for one in readings)
    if completed is None:
        return WallWells(None, tuple(wells), readings, rain, rules, None, None, None, waiting)
    compared = _compared(wells, site)
    affected = [one for one in readings if one.well in compared]
    effect = measure_effect(affected, completed, rain=rain, rules=rules)
    pipes = pair_of_pipes(wells, site)
    head = None
    if pipes is not None:
        head = head_across(readings, *pipes, completed, rules)
    return WallWells(completed, tuple(wells), readings, rain, rules, effect, head, pipes, waiting)


def _compared(wells: Iterable[Well], site: Site) -> set[str]:
    """Upstream wells of the wall and control wells; downstream and other wells are shown apart."""
    return {
        one.code
        for one in wells
        if one.role == Well.Role.CONTROL
        or (one.role == Well.Role.UPSTREAM and one.site_id == site.pk)
    }


def pair_of_pipes(wells: Iterable[Well], site: Site) -> tuple[str, str] | None:
    """Give the pipes nearest to the wall on both sides; None where one is lacking."""
    pipes = [one for one in wells if one.kind == Well.Kind.PIPE and one.site_id == site.pk]
    sides = []
    for role in (Well.Role.UPSTREAM, Well.Role.DOWNSTREAM):
        mine = [one for one in pipes if one.role == role]
        if not mine:
            return None
        sides.append(min(mine, key=lambda one: (abs(one.upstream_of_wall_m or 0.0), one.code)).code)
    return sides[0], sides[1]


def readings_for(wells: Sequence[Well], site: Site) -> tuple[WellReading, ...]:
    """Give readings as they count, with the reason of those that take no part."""
    zone = ZoneInfo(site.watershed.district.zone)
    marks = {one.pk: marks_of(one) for one in wells}
    roles = {one.pk: "control" if one.role == Well.Role.CONTROL else "affected" for one in wells}
    codes = {one.pk: one.code for one in wells}
    rows = list(Reading.objects.filter(well__in=codes).order_by("read_at"))
    moved = _decided_times([row.pk for row in rows if row.standing == Reading.Standing.REPAIRED])
    found = []
    for row in rows:
        at = moved.get(row.pk, row.read_at).astimezone(zone)
        mark = mark_on(marks[row.well_id], at.date())
        height = None if mark is None else mark.level_m
        # The level that counts says which depth and which mark a decision took.
        depth = None if row.level_m is None or height is None else height - row.level_m
        found.append(
            WellReading(
                codes[row.well_id],
                roles[row.well_id],
                at,
                row.state,
                row.dry,
                None if depth is None else round(depth, 6),
                height,
                left_out=_why(row, height),
            )
        )
    return tuple(found)


def _decided_times(ids: list[UUID]) -> dict[UUID, datetime]:
    decided = Repair.objects.filter(reading__in=ids, field="read_at", reversed_by__isnull=True)
    return {
        one.reading_id: datetime.fromisoformat(one.value)
        for one in decided.exclude(decision="")
        if one.value
    }


def _why(row: Reading, height: float | None) -> str:
    if row.standing in OUT:
        return OUT[row.standing]
    if row.state == Reading.State.NOT_KNOWN:
        return "state not known"
    if row.state != Reading.State.STATIC:
        return row.state
    return "level of the measuring point not known" if height is None or row.level_m is None else ""


def rain_of(watershed: Watershed) -> Rain | None:
    """Rain of a watershed's gauges by months, by their weights; a month one of them lacks is None."""
    weights = {one.gauge: one.weight for one in watershed.gauges.all()}
    gauges = Gauge.objects.filter(district=watershed.district_id, code__in=weights)
    by_gauge = {one.code: months_of(one) for one in gauges}
    if not by_gauge or len(by_gauge) < len(weights):
        return None
    months: dict[Month, float | None] = {}
    for month in sorted({month for known in by_gauge.values() for month in known}):
        parts = [(known.get(month), weights[code]) for code, known in by_gauge.items()]
        total = sum(weight for _, weight in parts)
        lacking = any(mm is None for mm, _ in parts)
        months[month] = None if lacking else sum(mm * weight for mm, weight in parts) / total
    return Rain(months)


def months_of(gauge: Gauge) -> dict[Month, float | None]:
    """Rain of a gauge by months: of its days where none is missing, else of what came by months."""
    days: dict[Month, list[tuple[float | None, int]]] = defaultdict(list)
    rows = RainDay.objects.filter(gauge=gauge).values_list("day", "rain_mm", "days", "rules")
    for day, rain_mm, count, rules in rows:
        # Doubted amounts (RN-02) are kept and count in no sum before somebody looked at them.
        days[day.year, day.month].append((None if "RN-02" in rules else rain_mm, count))
    found: dict[Month, float | None] = {
        (month.year, month.month): mm
        for month, mm in RainMonth.objects.filter(gauge=gauge).values_list("month", "rain_mm")
    }
    for month, parts in days.items():
        length = calendar.monthrange(*month)[1]
        whole = sum(count for _, count in parts) >= length
        lacking = any(mm is None for mm, _ in parts)
        total = sum(mm for mm, _ in parts if mm is not None) if whole and not lacking else None
        if total is not None or month not in found:
            found[month] = total
    return found


def rules_of(district: District) -> EffectRules:
    """What the district set for comparing wells."""
    lines = settings_in_force(district)

    def value(key: str) -> float | None:
        return lines[key].value

    lag = value("serial_lag")
    return EffectRules(
        least_full_years=int(value("effect_least_full_years")),
        least_effect_m=value("effect_least_m"),
        confidence=value("effect_confidence"),
        least_pairs=int(value("effect_least_pairs")),
        months_of_full_year=int(value("effect_months_of_full_year")),
        serial_lag=None if lag is None else int(lag),
        year_starts=(district.water_year_month, district.water_year_day),
    )


def rain_rows(rain: Rain | None) -> list[tuple[date, float | None]]:
    """Months as the drawing takes them; one that nobody named inside the time is a gap as well."""
    if rain is None or not rain.months:
        return []
    known: Mapping[Month, float | None] = rain.months
    first, last = min(known), max(known)
    rows = []
    year, month = first
    while (year, month) <= last:
        rows.append((date(year, month, 1), known.get((year, month))))
        year, month = (year + 1, 1) if month == DECEMBER else (year, month + 1)
    return rows
