"""The day at a trench: what is asked of it, which look counts, and why nobody goes in."""

from __future__ import annotations

from datetime import datetime
from typing import TYPE_CHECKING
from zoneinfo import ZoneInfo

import numpy as np

from structures.errors import Finding
from structures.intake.defaults import LEAST_SLOPE
from structures.life.holds import HoldRecord, StripSoFar
from structures.life.trench import Asked
from structures.models import TrenchLook
from structures.queries.drawn_wall import drawn_wall
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from structures.models import Alarm, HoldPoint, Strip, Structure
    from structures.queries.drawn_wall import DrawnWall


def zone_of(structure: Structure) -> ZoneInfo:
    return ZoneInfo(structure.site.watershed.district.zone)


def asked_of_trench(structure: Structure, strip: Strip | None) -> Asked:
    """Give the slope and the ladder asked for: as drawn, steeper than the rule only by a design."""
    drawn = drawn_wall(structure)
    depth_m = settings_in_force(structure.site.watershed.district)["depth_without_entry_m"].value
    slope = LEAST_SLOPE if drawn is None else _drawn_slope(drawn, strip)
    if drawn is None or not drawn.pack.works.support_design:
        slope = max(slope, LEAST_SLOPE)
    return Asked(slope=slope, ladder_from_m=depth_m)


def look_that_counts(
    structure: Structure, day: date, strip: Strip | None = None
) -> TrenchLook | None:
    """Give the look of a day that counts for a strip, or for the whole trench; None where none does."""
    looks = structure.looks.filter(day=day).select_related("by", "strip")
    return last_look(looks.order_by("looked_at", "received_at"), strip)


def last_look(looks: Iterable[TrenchLook], strip: Strip | None = None) -> TrenchLook | None:
    """Choose among the looks of one trench and day, given in the order of looking.

    The last one counts, one of the whole trench for every strip. For the whole trench a stop at
    one strip stands until somebody looked there again: a later look elsewhere takes nothing back.
    """
    last: dict[int | None, TrenchLook] = {}
    for look in looks:
        if strip is not None and look.strip_id not in (None, strip.pk):
            continue
        if look.strip_id is None or strip is not None:
            last.clear()
        last.pop(look.strip_id, None)
        last[look.strip_id] = look
    stops = [one for one in last.values() if one.result != TrenchLook.Result.NONE_FOUND]
    return (stops or list(last.values()) or [None])[-1]


def against_entering(
    look: TrenchLook | None, alarms: Iterable[Alarm], structure: Structure, where: str
) -> tuple[Finding, ...]:
    """Say why nobody goes in: no look, a stop, an alarm, rain since (TR-01, TR-02).

    Where nothing is said, no reason to stop was written down; that is no promise of safety.
    """
    found = []
    standing = [one for one in alarms if one.lifted_at is None]
    if look is None:
        what = "No trench look today. Nobody goes in."
        remedy = "The trained person looks and writes it down first."
        found.append(Finding(where, "look", what, remedy, rule="TR-01"))
    elif look.result != TrenchLook.Result.NONE_FOUND:
        at = f"{look.looked_at:%H:%M}" + ("" if look.strip is None else f" into {look.strip}")
        what = f"The look of {at} says {look.result}. Nobody goes in."
        found.append(Finding(where, "look", what, "Mend the cause and look again.", rule="TR-01"))
    elif not standing and (wet := alarm_since(look, alarms, structure)) is not None:
        what = f"Since the look of {look.looked_at:%H:%M} there was an alarm: {wet.why}."
        remedy = "Nobody goes in until the trench was looked at again."
        found.append(Finding(where, "look", what, remedy, rule="TR-02"))
    for alarm in standing:
        what = f"An alarm is set: {alarm.why}."
        found.append(Finding(where, "alarm", what, "Everybody out until it is lifted."))
    return tuple(found)


def alarm_since(look: TrenchLook, alarms: Iterable[Alarm], structure: Structure) -> Alarm | None:
    """Give an alarm that was set after a look, lifted or not; the look does not answer it (TR-02).

    Where a district stands still on a day, both are compared by when they came.
    """
    if structure.site.watershed.district.as_of is not None:
        looked = look.received_at
    else:
        looked = datetime.combine(look.day, look.looked_at, zone_of(structure))
    return next((one for one in alarms if one.set_at >= looked), None)


def _drawn_slope(drawn: DrawnWall, strip: Strip | None) -> float:
    stations = drawn.pack.wall.side_slope
    if strip is None or len(stations) == 1:
        return max(one.slope for one in stations)
    offsets, slopes = zip(*((one.offset_m, one.slope) for one in stations), strict=True)
    ends = np.interp((strip.from_m, strip.to_m), offsets, slopes)
    inside = [one.slope for one in stations if strip.from_m <= one.offset_m <= strip.to_m]
    return float(max(*ends, *inside))


def moment_in(structure: Structure, moment: datetime) -> datetime:
    """Give a moment in the place's own zone; on a day that stands still, the same hour of that day."""
    local = moment.astimezone(zone_of(structure))
    still = structure.site.watershed.district.as_of
    if still is None or local.date() <= still:
        return local
    return datetime.combine(still, local.timetz())


def so_far(strip: Strip) -> StripSoFar:
    """Give a strip with its hold points, in the order of asking, as the rules of `life` judge it."""
    zone = zone_of(strip.structure)
    holds = sorted(strip.holds.all(), key=lambda one: (one.asked_at, one.attempt))
    records = tuple(_record(one, zone) for one in holds)
    return StripSoFar(strip.number, records, strip.covered_on, strip.halted)


def _record(hold: HoldPoint, zone: ZoneInfo) -> HoldRecord:
    return HoldRecord(
        hold.hold,
        hold.asked_by.username,
        "" if hold.seen_by is None else hold.seen_by.username,
        None if hold.seen_at is None else hold.seen_at.astimezone(zone).date(),
        hold.result,
    )
