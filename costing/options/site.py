"""Where the works stand when an option paper is written, and what is left to do on a wall."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING

from structures.life.progress import ITEMS as TIMED
from structures.life.progress import StripWork, days_needed
from structures.life.season import read_clock
from structures.takeoff.quantity import ITEMS, Quantity
from structures.takeoff.sheet import measure
from structures.wall.part import part_of

if TYPE_CHECKING:
    from datetime import date
    from decimal import Decimal

    from costing.appraisal import Appraisal
    from structures.intake.pack import WallSettings
    from structures.life.progress import Progress
    from structures.life.season import Plan
    from structures.wall.cutoff import Cutoff

Reach = tuple[float, float]


@dataclass(frozen=True, slots=True)
class OnSite:
    """What is done and what stands open: reaches of strips that are covered, and of open ones.

    `spent` is the worth of all work done so far; None is "not known", never zero.

    Raises
    ------
    ValueError
        If a reach ends before it begins, or two overlap.
    """

    covered: tuple[Reach, ...]
    open: tuple[Reach, ...]
    spent: Decimal | None

    def __post_init__(self) -> None:
        reaches = sorted((*self.covered, *self.open))
        if any(stop <= start for start, stop in reaches):
            raise ValueError("a strip ends before it begins")
        if any(start < stop for (_, stop), (start, _) in pairwise(reaches)):
            raise ValueError("two strips overlap")

    def left(self, first_m: float, last_m: float) -> tuple[Reach, ...]:
        """Give the reaches between two offsets that are not covered."""
        gaps, at = [], first_m
        for start, stop in sorted(self.covered):
            if start > at:
                gaps.append((at, min(start, last_m)))
            at = max(at, stop)
        if at < last_m:
            gaps.append((at, last_m))
        return tuple((start, stop) for start, stop in gaps if stop > start)


@dataclass(frozen=True, slots=True)
class Season:
    """How fast work goes and how long is left.

    `days_left` are those until the early date of first flow less the reserve, None where that is
    not known; `why` says what is missing.
    """

    progress: Progress
    days_left: int | None
    why: str = ""
    gangs: int = 1

    def days(self, *works: tuple[Quantity, ...]) -> int | None:
        """Whole days that pieces of work take one after the other."""
        return days_needed((_strip_work(one) for one in works), self.progress, self.gangs)


def season_on(plan: Plan, today: date, progress: Progress, gangs: int = 1) -> Season:
    """Give the days left on a day, by the clock of a wall that needs none.

    Source: the office's practice, "the dry-season clock".
    """
    clock = read_clock(replace(plan, days_needed=0, days_needed_deep=None), today)
    why = clock.words if clock.days_left is None else ""
    return Season(progress, clock.days_left, why.removeprefix("cannot be computed: "), gangs)


def _strip_work(quantities: tuple[Quantity, ...]) -> StripWork:
    """Put measured quantities as the work of a strip; what is not in them is not to be done."""
    known = {one.item: one.quantity for one in quantities}
    return StripWork(**{item: known.get(item, 0.0) for item in TIMED})


def left_of(walk: Appraisal, site: OnSite) -> Cutoff | None:
    """Cut the part of a wall that is not covered; None where all of it is.

    Raises
    ------
    ValueError
        If the walk has no wall.
    """
    if walk.design is None:
        raise ValueError("without a wall nothing is left of it")
    wall = walk.design.wall
    reaches = site.left(wall.left_end_m, wall.right_end_m)
    return part_of(walk.design.cutoff, reaches) if reaches else None


def work_of(part: Cutoff | None, settings: WallSettings) -> tuple[Quantity, ...]:
    """Measure what takes days on a part of a wall, in item order, excavation in one sum.

    An open strip counts as not begun: an upper value.
    """
    if part is None:
        return ()
    takings = measure(part, settings)
    known = {"excavation": float(takings.excavation_m3.sum())}
    known |= {
        item: float(takings.by_item[item][0])
        for item in ("rock_key", "clay", "film", "centering", "backfill", "surplus")
    }
    return tuple(Quantity(item, ITEMS[item], known[item]) for item in ITEMS if item in known)


def hole_of(walk: Appraisal, site: OnSite) -> tuple[Quantity, ...]:
    """Measure what is to be filled where strips stand open, dug to the rock as found."""
    if walk.design is None or not site.open:
        return ()
    part = part_of(walk.design.cutoff, site.open)
    volume = float(measure(part, walk.pack.wall).excavation_m3.sum())
    return (Quantity("backfill", ITEMS["backfill"], volume, working="trench of the open strips"),)
