"""Nine hold points, strip by strip: inspect before going on, and what was covered unseen.

Source: the office's practice, "nine hold points" and rules HP-01 to HP-05. Which readings belong to
a hold point stands in `intake.field_records`; here is who may see it, when and with what photo.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.intake.field_records import HOLD, HOLDS, point_of
from structures.life.stages import COVERED, DIGGING, RISING

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from datetime import date

LAYERS: Final = "H7"
LAST: Final = "H9"
MUST_SEE: Final = ("H3", "H4", "H6", "H8")  # with a photo; covered before: covered unseen for ever
WENT_ON: Final = ("go", "go with note")
# What each stage asks to have been seen of a strip.
OF_STAGE: Final[dict[str, tuple[str, ...]]] = {
    DIGGING: ("H1",),
    RISING: ("H2", "H3", "H4", "H5"),
    COVERED: ("H6", "H7", "H8", "H9"),
}


@dataclass(frozen=True, slots=True)
class HoldPoint:
    """One hold point: name, what is looked at, what is written down, what follows without it."""

    code: str
    name: str
    looked_at: str
    evidence: str
    without: str


NINE: Final[dict[str, HoldPoint]] = {
    point.code: point
    for point in (
        HoldPoint(
            "H1",
            "line and level pegs",
            "line on the drawing, two pegs off the trench, benchmark read",
            "peg readings; a photo if wanted",
            "the whole strip is in doubt: set the pegs again",
        ),
        HoldPoint(
            "H2",
            "trench to rock",
            "depth at both ends and in the middle, sides at the drawn slope",
            "three levels with their datum; a photo with the staff if wanted",
            "no payment for depth",
        ),
        HoldPoint(
            "H3",
            "rock cleaned and seen",
            "sheet rock or boulder, joints, weathered skin off",
            "close photo, sound of the hammer, who saw it",
            "covered unseen for ever",
        ),
        HoldPoint(
            "H4",
            "key cut",
            "width, depth, continuous with the next strip",
            "two readings and a photo",
            "covered unseen for ever",
        ),
        HoldPoint(
            "H5",
            "water out",
            "floor dry enough to puddle, sump outside the wall line",
            "pump hours; a photo if wanted",
            "the clay is rejected",
        ),
        HoldPoint(
            "H6",
            "film, lower face",
            "whole, lapped, tucked into the key",
            "width of the lap and a photo",
            "covered unseen for ever",
        ),
        HoldPoint(
            "H7",
            "each clay layer",
            "thickness, wetness, passes of feet or roller, no dry joint",
            "one entry a layer: H7.1, H7.2 and so on",
            "the layer is not paid",
        ),
        HoldPoint(
            "H8",
            "film, upper face and top",
            "whole, folded over the top",
            "photo",
            "covered unseen for ever",
        ),
        HoldPoint(
            "H9",
            "backfill",
            "drained sand upstream, layers, bed restored",
            "level of the bed; one photo of the restored bed for the whole wall",
            "the structure is not covered",
        ),
    )
}


@dataclass(frozen=True, slots=True)
class HoldRecord:
    """A hold point of a strip as it was asked for and, if so, seen.

    `result` is "" while it waits, then "go", "go with note" or "no"; `seen_on` is the day at the
    place. Records of one hold point stand in the order in which they were asked for.
    """

    hold: str
    asked_by: str
    seen_by: str = ""
    seen_on: date | None = None
    result: str = ""


@dataclass(frozen=True, slots=True)
class StripSoFar:
    """A strip and what was asked and seen of it; `halted` waits for the option paper."""

    number: int
    records: tuple[HoldRecord, ...] = ()
    covered_on: date | None = None
    halted: bool = False

    def seen(self, *, by_cover: bool = False) -> frozenset[str]:
        """Give the hold points whose last record let the work go on, layers with their number.

        With `by_cover` only what was seen up to the day of covering counts.
        """
        last: dict[str, HoldRecord] = {}
        for record in self.records:
            late = self.covered_on and record.seen_on and record.seen_on > self.covered_on
            if not (by_cover and late):
                last[record.hold] = record
        return frozenset(
            record.hold for record in last.values() if record.result in WENT_ON and record.seen_by
        )


@dataclass(frozen=True, slots=True)
class Sight:
    """What somebody wants to see: the hold point, who asked for it, who sees, with what photos.

    `photos` counts those that satisfy a hold point (`photo_counts`); `lets_go` is False where the
    answer is "no", which needs neither a photo nor the points before.
    """

    hold: str
    asked_by: str
    seen_by: str
    photos: int = 0
    lets_go: bool = True


def judge_hold(strip: StripSoFar, sight: Sight) -> tuple[Finding, ...]:
    """Give what stands against seeing a hold point now; empty where it may be signed.

    Raises
    ------
    ValueError
        If there is no such hold point.
    """
    if not HOLD.fullmatch(sight.hold):
        raise ValueError(f"there is no hold point {sight.hold!r}")
    where, point = f"strip {strip.number}", point_of(sight.hold)
    found = []
    if sight.hold == LAYERS:
        found.append(Finding(where, "hold", "Which layer of clay?", "Write H7.1, H7.2 and so on."))
    if sight.seen_by == sight.asked_by:
        what = "You asked for this; another person must see it."
        found.append(Finding(where, "seen_by", what, "Call whom you can reach.", rule="HP-02"))
    if not sight.lets_go:
        return tuple(found)
    if strip.halted:
        what = f"Strip {strip.number} is halted."
        found.append(Finding(where, "hold", what, "Wait for the option paper.", rule="HP-05"))
    before = _first_unseen_before(strip, sight.hold)
    if before:
        what = f"{sight.hold} of strip {strip.number} cannot be seen before {before}."
        remedy = f"See {before} first: {NINE[point_of(before)].looked_at}."
        found.append(Finding(where, "hold", what, remedy, rule="HP-01"))
    if point in MUST_SEE and sight.photos < 1:
        what = f"No photo of {NINE[point].name} on strip {strip.number}."
        remedy = (
            "Take it from the edge if the day's look says stop; no photo is worth going in. The "
            "strip board, the place and the day belong to it."
        )
        found.append(Finding(where, "photo", what, remedy, rule="HP-03"))
    if strip.covered_on is not None and point != LAST:
        what = f"Strip {strip.number} was covered on {strip.covered_on}; {sight.hold} is past."
        found.append(Finding(where, "hold", what, "Nobody can see it now.", rule="HP-04"))
    return tuple(found)


def judge_cover(strip: StripSoFar) -> tuple[Finding, ...]:
    """Give what a covered strip leaves in doubt: HP-04 first, then what nobody saw besides.

    What lies under the ground is written down all the same, so nothing here blocks.
    """
    where, found = f"strip {strip.number}", []
    unseen = covered_unseen(strip)
    if unseen:
        names = ", ".join(f"{hold} {NINE[hold].name}" for hold in unseen)
        what = (
            f"Strip {strip.number} was covered on {strip.covered_on} before {names} was seen. "
            "Marked *covered unseen* for ever; its lines wait."
        )
        remedy = "Decide each line with a reason; the mark stays."
        found.append(Finding(where, "covered_on", what, remedy, "hold", "HP-04"))
    seen = _points(strip.seen())
    for hold in HOLDS:
        if strip.covered_on and hold not in seen and hold not in MUST_SEE:
            what = f"{hold} {NINE[hold].name} of strip {strip.number} was not seen."
            remedy = f"Without it: {NINE[hold].without}."
            found.append(Finding(where, hold, what, remedy, "hold"))
    return tuple(found)


def covered_unseen(strip: StripSoFar) -> tuple[str, ...]:
    """Give what was covered before it was seen; whoever finds any keeps the mark for ever."""
    if strip.covered_on is None:
        return ()
    seen = _points(strip.seen(by_cover=True))
    return tuple(hold for hold in MUST_SEE if hold not in seen)


def next_hold(strip: StripSoFar) -> str | None:
    """Give the hold point that comes next, None after the last; after a layer, the next layer.

    Whether another layer follows is seen at the trench: after one layer was seen both H7.n and H8
    may be asked for, and the layer is named.
    """
    seen = strip.seen()
    for hold in HOLDS:
        if hold == LAYERS and "H8" not in seen:
            return f"{LAYERS}.{len(_layers(seen)) + 1}"
        if hold not in _points(seen):
            return hold
    return None


def holds_not_seen(stage: str, strips: Sequence[StripSoFar]) -> tuple[str, ...] | None:
    """Give what is not seen for a stage: "H3 of strip 2"; None where no strip was cut.

    Digging and rising need one strip of which all was seen, and the nearest to it is told; covered
    needs every strip, or its lasting mark.

    Raises
    ------
    KeyError
        If the stage asks for no hold point.
    """
    asked = OF_STAGE[stage]
    if not strips:
        return None
    lacking = []
    for strip in strips:
        seen = _points(strip.seen())
        marked = stage == COVERED and covered_unseen(strip)
        unseen = () if marked else tuple(hold for hold in asked if hold not in seen)
        lacking.append(tuple(f"{hold} of strip {strip.number}" for hold in unseen))
    if stage == COVERED:
        return tuple(name for names in lacking for name in names)
    return min(lacking, key=len)


def photo_counts(*, taken_on: date | None, has_position: bool, day: date) -> bool:
    """Tell whether a photo satisfies a hold point: it says its place, and its day is the day.

    Source: the office's practice, "what really arrives", row 44.
    """
    return has_position and taken_on == day


def _first_unseen_before(strip: StripSoFar, hold: str) -> str:
    """Give the first hold point that has to be seen before another and was not; "" for none."""
    seen, point = strip.seen(), point_of(hold)
    for before in HOLDS[: HOLDS.index(point)]:
        if before not in _points(seen):
            return f"{LAYERS}.1" if before == LAYERS else before
    if point == LAYERS and hold != LAYERS:
        number = int(hold.partition(".")[2])
        for layer in range(1, number):
            if f"{LAYERS}.{layer}" not in seen:
                return f"{LAYERS}.{layer}"
    return _waiting_layer(strip, seen) if HOLDS.index(point) > HOLDS.index(LAYERS) else ""


def _waiting_layer(strip: StripSoFar, seen: frozenset[str]) -> str:
    """Give a layer that was asked for and not let go: the film does not go over it."""
    asked = _layers(record.hold for record in strip.records)
    return next((layer for layer in asked if layer not in seen), "")


def _layers(holds: Iterable[str]) -> list[str]:
    found = {hold for hold in holds if hold.startswith(f"{LAYERS}.")}
    return sorted(found, key=lambda hold: int(hold.partition(".")[2]))


def _points(holds: Iterable[str]) -> frozenset[str]:
    return frozenset(map(point_of, holds))
