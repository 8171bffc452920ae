"""Rock as the open trench showed it, taken into a survey: the trench is the last survey.

Source: handbook 4 ("attainable": the as-dug rock line replaces the estimate). Levels seen in the
trench are direct observations. Where no line was settled they enter the estimate as pits do. Where
an engineer's line is given they replace it: inside a strip the found profile is used, from its
first to its last level; elsewhere the drawn line stands, lowered where a probe or a hole proves
that it stands too high.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from structures.errors import Refused
from structures.ground.rock_tests import SAME_PLACE_M, gather, ground_level_m
from structures.intake.line_checks import FOOT_ABOVE_M
from structures.intake.pack import RockLinePoint, RockTest

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.ground.rock_line import Evidence
    from structures.intake.pack import SurveyPack


@dataclass(frozen=True, slots=True)
class FoundLevel:
    """Rock seen at one place of strip `strip`; None where it was seen beside the trench."""

    offset_m: float
    level_m: float
    strip: int | None = None


@dataclass(frozen=True, slots=True)
class AsFound:
    """A survey with what the trench showed taken in.

    `found` is sorted by offset, the lower level kept where two strips meet. `lowered` are probes
    and holes to whose foot the drawn line was lowered; `over_found` those that went deeper than
    rock was found close by.
    """

    pack: SurveyPack
    found: tuple[FoundLevel, ...]
    lowered: tuple[Evidence, ...]
    over_found: tuple[Evidence, ...]


def take_in(pack: SurveyPack, found: Iterable[FoundLevel]) -> AsFound:
    """Take levels that were found into a survey.

    Source: handbook 4.3 (rock seen and levelled, 0.05 m), rule RK-03 (no line over the foot of a
    probe).

    Parameters
    ----------
    pack
        The survey as it was when the wall was drawn, with tests made since.
    found
        Levels seen, in any order.

    Raises
    ------
    Refused
        If a level lies outside the surveyed ground or above it.
    """
    levels = _lowest(found)
    for one in levels:
        _check(pack, one)
    bounds, over = _bounds(pack, levels)
    if pack.rock_line is None:
        pits = tuple(
            RockTest(
                one.offset_m,
                max(ground_level_m(pack, one.offset_m) - one.level_m, 0.0),
                "pit",
                met_rock=True,
            )
            for one in levels
        )
        return AsFound(replace(pack, rock=(*pack.rock, *pits)), levels, (), over)
    line, lowered = _lowered(_spliced(pack.rock_line, levels), bounds)
    points = tuple(RockLinePoint(offset, level) for offset, level in sorted(line.items()))
    return AsFound(replace(pack, rock_line=points), levels, lowered, over)


def _lowest(found: Iterable[FoundLevel]) -> tuple[FoundLevel, ...]:
    """Keep the lower of two levels of one place: so far down the trench was dug."""
    by_offset: dict[float, FoundLevel] = {}
    for one in sorted(found, key=lambda one: (one.level_m, one.strip or 0)):
        by_offset.setdefault(one.offset_m, one)
    return tuple(by_offset[offset] for offset in sorted(by_offset))


def _check(pack: SurveyPack, one: FoundLevel) -> None:
    first, last = pack.ground[0].offset_m, pack.ground[-1].offset_m
    where = f"rock found at {one.offset_m:.2f} m"
    if not first <= one.offset_m <= last:
        raise Refused(
            f"The ground is surveyed from {first:g} to {last:g} m.",
            where=where,
            remedy="Look at the offset, or survey the ground there.",
        )
    ground_m = ground_level_m(pack, one.offset_m)
    if one.level_m > ground_m + FOOT_ABOVE_M:
        raise Refused(
            f"Rock at {one.level_m:.2f} m stands above the ground at {ground_m:.2f} m.",
            where=where,
            remedy="Look at the level and its bench mark.",
        )


def _bounds(
    pack: SurveyPack, found: tuple[FoundLevel, ...]
) -> tuple[tuple[Evidence, ...], tuple[Evidence, ...]]:
    """Give the probes and holes that still bound the rock, and those the trench contradicts.

    Close to where rock was seen a probe says nothing more.
    """
    kept, over = [], []
    x, z = [one.offset_m for one in found], [one.level_m for one in found]
    for bound in gather(pack, soundings=(), refraction=()).bounds:
        if not any(abs(offset - bound.offset_m) <= SAME_PLACE_M for offset in x):
            kept.append(bound)
        elif round(float(np.interp(bound.offset_m, x, z)) - bound.level_m, 6) > FOOT_ABOVE_M:
            over.append(bound)
    return tuple(kept), tuple(over)


def _spliced(drawn: Iterable[RockLinePoint], found: tuple[FoundLevel, ...]) -> dict[float, float]:
    """Put the found profile in place of the drawn one, strip by strip."""
    strips: dict[object, list[float]] = {}
    for one in found:
        # What was seen beside the trench stands for its own place only.
        strips.setdefault(("beside", one.offset_m) if one.strip is None else one.strip, []).append(
            one.offset_m
        )
    reaches = [(min(offsets), max(offsets)) for offsets in strips.values()]
    line = {
        point.offset_m: point.level_m
        for point in drawn
        if not any(first <= point.offset_m <= last for first, last in reaches)
    }
    return line | {one.offset_m: one.level_m for one in found}


def _lowered(
    line: dict[float, float], bounds: tuple[Evidence, ...]
) -> tuple[dict[float, float], tuple[Evidence, ...]]:
    """Lower the line to the foot of every probe under it, the one farthest under it first."""
    line, lowered = dict(line), []
    while True:
        x = sorted(line)
        z = [line[offset] for offset in x]
        above = {
            bound: float(np.interp(bound.offset_m, x, z)) - bound.level_m
            for bound in bounds
            if x[0] <= bound.offset_m <= x[-1]
        }
        worst = max(above, key=above.get, default=None)
        if worst is None or round(above[worst], 6) <= FOOT_ABOVE_M:
            return line, tuple(sorted(lowered, key=lambda one: one.offset_m))
        line[worst.offset_m] = worst.level_m
        lowered.append(worst)
