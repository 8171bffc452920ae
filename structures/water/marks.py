"""Measuring points of a well: which one counted on a day, and what is doubted about their row."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import timedelta
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from structures.errors import Finding

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from datetime import date

LEVEL_DECIMALS: Final = 3  # of a level of water: a millimetre, as marks are levelled
MOVED_M: Final = 0.05  # MM-03: from here on a photo and a second person are asked for
HEIGHT_LEAST_M: Final = -1.0  # MM-04
HEIGHT_MOST_M: Final = 1.5


@dataclass(frozen=True, slots=True)
class Mark:
    """One measuring point with the days on which it counts; `valid_to` None is still in use."""

    mark: str
    valid_from: date
    valid_to: date | None
    level_m: float | None
    height_above_ground_m: float | None
    shown: bool = False

    def counts_on(self, day: date) -> bool:
        """Whether depths of that day are below this mark."""
        return self.valid_from <= day and (self.valid_to is None or day <= self.valid_to)


def mark_on(marks: Iterable[Mark], day: date) -> Mark | None:
    """Give the mark that counts on a day; None where none does."""
    return next((one for one in marks if one.counts_on(day)), None)


def level_below_m(depth_m: float | None, mark: Mark | None) -> float | None:
    """Level of the water at a depth below a mark; None where one of both is not known.

    Source: handbook 10.1, level = level of the mark - depth.
    """
    if depth_m is None or mark is None or mark.level_m is None:
        return None
    return round(mark.level_m - depth_m, LEVEL_DECIMALS)


def moved_m(old: Mark, new: Mark) -> float | None:
    """How much higher the new mark lies; None where a level is not known."""
    if old.level_m is None or new.level_m is None:
        return None
    return new.level_m - old.level_m


def mark_findings(well: str, marks: Sequence[Mark]) -> tuple[Finding, ...]:
    """Judge the marks of a well by themselves and in their row.

    Source: field practice, rules MM-01 to MM-04.

    Parameters
    ----------
    well
        Code of the well, as findings name it.
    marks
        In any order; `shown` says that a photo and a second person stand with the change.
    """
    row = sorted(marks, key=lambda one: one.valid_from)
    found = [finding for one in row for finding in _height(well, one)]
    for old, new in pairwise(row):
        found += _in_row(well, old, new)
    return tuple(found)


def _height(well: str, one: Mark) -> Iterable[Finding]:
    height = one.height_above_ground_m
    if height is None or HEIGHT_LEAST_M <= height <= HEIGHT_MOST_M:
        return
    what = f"Mark height {height:g} m."
    remedy = "Height above ground, not level above sea?"
    yield Finding(f"{well} {one.mark}", "height_above_ground_m", what, remedy, "warn", "MM-04")


def _in_row(well: str, old: Mark, new: Mark) -> Iterable[Finding]:
    where = f"{well} {new.mark}"
    day_before = new.valid_from - timedelta(days=1)
    if old.valid_to is None or old.valid_to > day_before:
        until = new.valid_to if old.valid_to is None else old.valid_to
        last = "today" if until is None else f"{until}"
        what = f"Marks {old.mark} and {new.mark} of {well} overlap from {new.valid_from} to {last}."
        yield Finding(where, "valid_from", what, "End the old one first.", "block", "MM-01")
    elif old.valid_to < day_before:
        first = old.valid_to + timedelta(days=1)
        what = f"{well} has no mark from {first} to {day_before}."
        remedy = "Readings between have no datum: say which mark was used."
        yield Finding(where, "valid_from", what, remedy, "hold", "MM-02")
    step_m = moved_m(old, new)
    if step_m is not None and abs(step_m) >= MOVED_M and not new.shown:
        what = f"Mark of {well} moved {step_m:+.2f} m."
        yield Finding(where, "level_m", what, "Photo and second person, please.", "hold", "MM-03")
