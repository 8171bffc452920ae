"""What is doubtful about a measured quantity before anybody speaks of its price.

Source: the office's practice, rules BL-02 (maker is not checker), BL-03 (measured while it could be
seen) and BL-06 (the hold points relied on were seen); "two dates are kept for every measurement".
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.errors import Finding

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

# Hold points that an item of a strip rests on; what is measured over the whole wall rests on none.
RELIES_ON: Final[dict[str, tuple[str, ...]]] = {
    "excavation": ("H2",),
    "rock_key": ("H3", "H4"),
    "clay": ("H5", "H7"),
    "film": ("H6", "H8"),
    "centering": ("H7",),
    "backfill": ("H9",),
    "surplus": ("H9",),
}


@dataclass(frozen=True, slots=True)
class HoldSeen:
    """One hold point of a strip ("H3", "H7.2"): the day it was seen with leave to go on, or None."""

    hold: str
    seen_on: date | None


@dataclass(frozen=True, slots=True)
class MeasuredWork:
    """One entry of the measurement book without its quantity.

    `strip` is None for the whole wall, `covered_on` None where nothing is covered yet or ever,
    `checked_by` "" while nobody has checked it.
    """

    entry: str
    measured_by: str
    measured_on: date
    strip: int | None = None
    covered_on: date | None = None
    checked_by: str = ""
    relies_on: tuple[str, ...] = ()
    holds: tuple[HoldSeen, ...] = ()


def judge_measurement(work: MeasuredWork) -> tuple[Finding, ...]:
    """Give what stands against an entry: its check, its day, its hold points."""
    where, found = f"entry {work.entry}", []
    if work.checked_by == work.measured_by:
        what = f"{work.measured_by} measured and checked entry {work.entry}."
        remedy = "Another person must check."
        found.append(Finding(where, "checked_by", what, remedy, rule="BL-02"))
    if measured_late(work.measured_on, work.covered_on):
        what = (
            f"Entry {work.entry}: measured {work.measured_on}, covered {work.covered_on}. "
            "Nobody could see it."
        )
        remedy = "Its line is held until the district decides."
        found.append(Finding(where, "measured_on", what, remedy, "hold", "BL-03"))
    missing = unseen(work.relies_on, work.holds, work.covered_on)
    if missing:
        strip = "" if work.strip is None else f" of strip {work.strip}"
        what = f"Entry {work.entry} relies on {', '.join(missing)}{strip}, not seen."
        remedy = "Its line is held until the district decides."
        found.append(Finding(where, "relies_on", what, remedy, "hold", "BL-06"))
    return tuple(found)


def measured_late(measured_on: date, covered_on: date | None) -> bool:
    """Tell whether something was measured after it was covered. Source: BL-03."""
    return covered_on is not None and measured_on > covered_on


def unseen(
    relies_on: Iterable[str], holds: Iterable[HoldSeen], covered_on: date | None
) -> tuple[str, ...]:
    """Give the hold points relied on that nobody saw while they could be seen. Source: BL-06.

    "H7" stands for all layers of the strip; each that was not seen is named, and the point itself
    where no record of it is there at all.
    """
    there = tuple(holds)
    return tuple(
        name
        for relied in relies_on
        for name in _unseen_of(
            relied, [one for one in there if f"{one.hold}.".startswith(f"{relied}.")], covered_on
        )
    )


def _unseen_of(relied: str, records: list[HoldSeen], covered_on: date | None) -> list[str]:
    if not records:
        return [relied]
    return [one.hold for one in records if not _in_time(one.seen_on, covered_on)]


def _in_time(seen_on: date | None, covered_on: date | None) -> bool:
    return seen_on is not None and (covered_on is None or seen_on <= covered_on)
