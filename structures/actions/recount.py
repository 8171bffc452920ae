"""What counts of each reading, worked out anew from what was sent, what was decided, and the marks.

Whoever changes a mark or a decision calls this under the lock of the well; nobody else sets a level
or a standing.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, replace
from datetime import datetime
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from structures.models import Reading, Repair
from structures.queries.wells import marks_of
from structures.water.marks import level_below_m, mark_on

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from uuid import UUID

    from structures.models import Well
    from structures.water.marks import Mark

AT_ONCE: Final = 1000  # rows of one statement
YES: Final = "yes"


@dataclass(frozen=True, slots=True)
class Counted:
    """A reading as it counts; `mark` is set where a decision names one, else the day's own counts."""

    read_at: datetime
    state: str
    dry: bool
    depth_m: float | None
    mark: str | None
    standing: str


@dataclass(frozen=True, slots=True)
class Moved:
    """A reading whose level came out otherwise; None is not known."""

    reading_id: UUID
    read_at: datetime
    before_m: float | None
    after_m: float | None


def counted(reading: Reading, repairs: Iterable[Repair]) -> Counted:
    """Give a reading as it counts: open doubts hold it, decisions in force stand in its place."""
    rows = list(repairs)
    reversed_ones = {one.reverses_id for one in rows}
    in_force = [one for one in rows if one.decision and one.pk not in reversed_ones]
    found = Counted(
        reading.read_at,
        reading.state,
        reading.dry,
        reading.depth_m,
        None,
        Reading.Standing.TAKEN,
    )
    for one in sorted(in_force, key=lambda one: (one.decided_at, one.pk)):
        found = _with(found, one)
    if any(one.decision == Repair.Decision.LEAVE_OUT for one in in_force):
        return replace(found, standing=Reading.Standing.LEFT_OUT)
    if any(not one.decision for one in rows):
        return replace(found, standing=Reading.Standing.HELD)
    return found


def _with(found: Counted, one: Repair) -> Counted:
    if one.decision == Repair.Decision.RAW:
        # Whoever keeps the mark that was named says that the depth was read from it.
        return replace(found, mark=one.raw) if one.field == "mark" and one.raw else found
    if one.decision == Repair.Decision.LEAVE_OUT:
        return found
    value: object = one.value
    if one.field == "depth_m":
        value = float(one.value)
    elif one.field == "read_at":
        value = datetime.fromisoformat(one.value)
    elif one.field == "dry":
        value = one.value == YES
    elif one.field not in {"mark", "state"}:
        return replace(found, standing=Reading.Standing.REPAIRED)
    return replace(found, standing=Reading.Standing.REPAIRED, **{one.field: value})


def recount(well: Well, readings: Sequence[Reading] | None = None) -> list[Moved]:
    """Work out level and standing of a well's readings anew; gives those whose level changed."""
    rows = list(well.readings.all()) if readings is None else list(readings)
    repairs: dict[UUID, list[Repair]] = defaultdict(list)
    for one in Repair.objects.filter(reading__in=[row.pk for row in rows]):
        repairs[one.reading_id].append(one)
    zone = ZoneInfo(well.watershed.district.zone)
    marks = marks_of(well)
    moved, changed = [], []
    for row in rows:
        now = counted(row, repairs[row.pk])
        level_m = level_of(now, marks, zone)
        if level_m != row.level_m:
            moved.append(Moved(row.pk, row.read_at, row.level_m, level_m))
        if (level_m, now.standing) != (row.level_m, row.standing):
            row.level_m, row.standing = level_m, now.standing
            changed.append(row)
    Reading.objects.bulk_update(changed, ["level_m", "standing"], batch_size=AT_ONCE)
    return moved


def level_of(now: Counted, marks: Sequence[Mark], zone: ZoneInfo) -> float | None:
    """Level of a reading as it counts."""
    if now.mark is None:
        mark = mark_on(marks, now.read_at.astimezone(zone).date())
    else:
        mark = next((one for one in marks if one.mark == now.mark), None)
    return level_below_m(now.depth_m, mark)
