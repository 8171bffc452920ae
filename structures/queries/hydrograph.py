"""What a hydrograph shows of wells that a user may see."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from structures.drawing.hydrograph import Point, Track
from structures.models import MeasuringPoint, Reading
from structures.queries.wells import visible_wells
from structures.queries.wells_of_wall import completed_on, rain_of, rain_rows

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date, datetime

    from structures.models import User, Well

WELLS_MOST: Final = 12
MOVING: Final = (Reading.State.PUMPING, Reading.State.RECOVERING)


@dataclass(frozen=True, slots=True)
class Hydrograph:
    """Wells with their tracks, the rain of their watershed and the day the wall was completed."""

    wells: tuple[Well, ...]
    tracks: tuple[Track, ...]
    rain: tuple[tuple[date, float | None], ...]
    completed: date | None
    rows: tuple[tuple[str, datetime, float | None, float | None, str, bool, str], ...]


def hydrograph_of(user: User, codes: Sequence[str]) -> Hydrograph:
    """Read what the drawing needs; rain and completion are those of the first well."""
    found = {one.code: one for one in visible_wells(user).filter(code__in=codes[:WELLS_MOST])}
    wells = [found[code] for code in dict.fromkeys(codes) if code in found]
    marks: dict[int, list[MeasuringPoint]] = defaultdict(list)
    for mark in MeasuringPoint.objects.filter(well__in=wells).order_by("valid_from"):
        marks[mark.well_id].append(mark)
    readings: dict[int, list[Reading]] = defaultdict(list)
    rows = Reading.objects.filter(well__in=wells).exclude(standing=Reading.Standing.LEFT_OUT)
    for row in rows.defer("rules", "read_by").order_by("read_at"):
        readings[row.well_id].append(row)
    first = wells[0] if wells else None
    rain = rain_rows(rain_of(first.watershed)) if first else []
    days = [row.read_at.date() for each in readings.values() for row in each]
    if days:
        rain = [row for row in rain if row[0] >= min(days).replace(day=1)]
    site = first.site if first else None
    completed = completed_on(site) if site is not None else None
    return Hydrograph(
        tuple(wells),
        tuple(_track(one, readings[one.pk], marks[one.pk]) for one in wells),
        tuple(rain),
        completed,
        tuple(
            (one.code, row.read_at, row.depth_m, row.level_m, row.state, row.dry, row.standing)
            for one in wells
            for row in readings[one.pk]
        ),
    )


def _track(well: Well, readings: Sequence[Reading], marks: Sequence[MeasuringPoint]) -> Track:
    zone = ZoneInfo(well.watershed.district.zone)
    ground = well.ground_level_m
    bottom = None
    if None not in (ground, well.bottom_below_ground_m):
        bottom = ground - well.bottom_below_ground_m
    return Track(
        well.code,
        well.role,
        tuple(
            Point(
                row.read_at.astimezone(zone).date(),
                row.level_m,
                row.dry,
                row.standing == Reading.Standing.HELD,
                row.state in MOVING,
            )
            for row in readings
            if row.level_m is not None
        ),
        tuple(
            (
                later.valid_from,
                None
                if None in (later.level_m, earlier.level_m)
                else round(later.level_m - earlier.level_m, 3),
            )
            for earlier, later in pairwise(marks)
        ),
        bottom,
        ground,
    )
