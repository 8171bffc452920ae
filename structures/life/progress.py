"""How many days the work on a wall takes, strip after strip, at rates of progress.

Source: the office's practice, "the dry-season clock": dig, key, clay layers, film, backfill, one
after the other; rates by a gang and day of handbook section 12, replaced by the office's own.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, fields
from typing import TYPE_CHECKING, Final

from structures.intake.defaults import WORKS

if TYPE_CHECKING:
    from collections.abc import Iterable

ROUNDING_DAYS: Final = 1e-9  # what a sum of quotients may be over a whole day by rounding


@dataclass(frozen=True, slots=True)
class Progress:
    """Work of one gang in one day, m3 or m2; each above zero."""

    excavation: float = WORKS["progress_excavation_m3_per_day"].value
    rock_key: float = WORKS["progress_rock_key_m3_per_day"].value
    clay: float = WORKS["progress_clay_m3_per_day"].value
    film: float = WORKS["progress_film_m2_per_day"].value
    backfill: float = WORKS["progress_backfill_m3_per_day"].value

    def __post_init__(self) -> None:
        for field in fields(self):
            rate = getattr(self, field.name)
            if not (math.isfinite(rate) and rate > 0):
                raise ValueError(f"progress of {field.name} cannot be {rate:g} a day")


@dataclass(frozen=True, slots=True)
class StripWork:
    """Quantities of a strip, by the item codes, m3 and (film) m2; None is not known."""

    excavation: float | None
    rock_key: float | None
    clay: float | None
    film: float | None
    backfill: float | None

    def __post_init__(self) -> None:
        for item in ITEMS:
            quantity = getattr(self, item)
            if quantity is not None and not (math.isfinite(quantity) and quantity >= 0):
                raise ValueError(f"{item} cannot be {quantity:g}")


ITEMS: Final = tuple(field.name for field in fields(Progress))


def days_of_work(work: StripWork, progress: Progress, gangs: int = 1) -> float | None:
    """Days that the items of a strip take one after the other; None where one is not known.

    Raises
    ------
    ValueError
        If there is no gang.
    """
    if gangs < 1:
        raise ValueError(f"{gangs} gangs do no work")
    days = 0.0
    for item in ITEMS:
        quantity = getattr(work, item)
        if quantity is None:
            return None
        days += quantity / getattr(progress, item) / gangs
    return days


def days_needed(strips: Iterable[StripWork], progress: Progress, gangs: int = 1) -> int | None:
    """Whole days that all strips take one after the other; None where one is not known.

    No strip overlaps another: that is the longest the work takes at these rates.

    Raises
    ------
    ValueError
        If there is no gang.
    """
    days = [days_of_work(strip, progress, gangs) for strip in strips]
    if not days or any(one is None for one in days):
        return None
    return math.ceil(math.fsum(one for one in days if one is not None) - ROUNDING_DAYS)


def reserve_days(
    office_days: int,
    likely: Iterable[StripWork],
    deep: Iterable[StripWork],
    progress: Progress,
    gangs: int = 1,
) -> int | None:
    """Reserve of the office, more by the days of digging to the deep end of the rock range.

    Raises
    ------
    ValueError
        If there is no gang, or a reserve under zero.
    """
    if office_days < 0 or gangs < 1:
        raise ValueError(f"a reserve of {office_days} days with {gangs} gangs is none")
    dug = []
    for strips in (likely, deep):
        volumes = [strip.excavation for strip in strips]
        if any(volume is None for volume in volumes):
            return None
        dug.append(math.fsum(volume for volume in volumes if volume is not None))
    more = (dug[1] - dug[0]) / progress.excavation / gangs
    return office_days + max(0, math.ceil(more - ROUNDING_DAYS))
