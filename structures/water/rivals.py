"""Other explanations of a change: the rain of the years, a measuring point that moved."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.units import DAYS_PER_YEAR
from structures.water.pairs import make_pairs
from structures.water.rain_share import (
    PairedYears,
    RainAdjusted,
    adjust_for_rain,
    pair_years,
    rain_before_mm,
    rain_years,
)
from structures.water.serial import in_median_gaps
from structures.water.steps import find_step
from structures.water.trend import mann_kendall, median_slope

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from numpy.typing import NDArray

    from structures.intake.rain import Rain
    from structures.intake.readings import WellReading
    from structures.water.pairs import Pairs
    from structures.water.rules import EffectRules

MARK_MOVED_M: Final = 0.001  # less is rounding of the same mark
# A step from so long before to so long after completion is the works or the first filling, which
# comes with the first rains and not in a day (project choice).
WORKS_DAYS: Final = 90
FILLING_DAYS: Final = 366
TREND_LEAST: Final = 12  # pairs before completion for a word on their trend (project choice)


@dataclass(frozen=True, slots=True)
class MovedMark:
    """A measuring point whose level changed by `change_m` with the reading of that day."""

    well: str
    day: date
    change_m: float


@dataclass(frozen=True, slots=True)
class JumpOfPairs:
    """A step of affected less control that does not fall on completion."""

    day: date
    size_m: float


@dataclass(frozen=True, slots=True)
class TrendBefore:
    """How affected less control moved before the wall was there, a year, with its p."""

    m_per_year: float
    p_two_sided: float


@dataclass(frozen=True, slots=True)
class Rivals:
    """What else changed; None is not known.

    A share is of the change at affected wells, `in_effect` what of it is left in affected less
    control.
    """

    change_affected_m: float | None
    change_control_m: float | None
    rain_mm: tuple[float, float] | None
    rain_at_affected: RainAdjusted | None
    rain_in_effect: RainAdjusted | None
    paired_years: PairedYears | None
    marks: tuple[MovedMark, ...]
    mark_share_m: float
    mark_in_effect_m: float
    jump: JumpOfPairs | None
    trend: TrendBefore | None


def find_rivals(
    readings: Sequence[WellReading],
    pairs: Pairs,
    completed: date,
    rain: Rain | None,
    rules: EffectRules,
) -> Rivals:
    """Look for other explanations.

    Source: handbook 10.3, 10.4, 10.6, 10.7 and 10.10; field practice LV-03 and LV-14.
    """
    dry = bool(pairs.bounded.any())
    affected, control = (_change_m(pairs, side) for side in (pairs.affected_m, pairs.control_m))
    marks = moved_marks(readings)
    share, in_effect = _mark_shares_m(readings, pairs, completed, marks, rules)
    at_affected = in_rest = paired = totals = None
    if rain is not None:
        before_mm = rain_before_mm(pairs, rain)
        at_affected = adjust_for_rain(pairs, before_mm, pairs.affected_m)
        in_rest = adjust_for_rain(pairs, before_mm, pairs.difference_m)
        years = [rain_years(pairs, rain, rules, after=after) for after in (False, True)]
        paired = pair_years(*years)
        if all(years):
            totals = tuple(float(np.mean([one.rain_mm for one in side])) for side in years)
    return Rivals(
        None if dry else affected,
        None if dry else control,
        totals,
        at_affected,
        in_rest,
        paired,
        marks,
        share,
        in_effect,
        _jump(pairs, completed),
        _trend(pairs),
    )


def moved_marks(readings: Sequence[WellReading]) -> tuple[MovedMark, ...]:
    """Give the days on which the level of a well's measuring point changed."""
    by_well: dict[str, list[WellReading]] = defaultdict(list)
    for reading in sorted(readings, key=lambda one: one.read_at):
        if reading.height_m is not None:
            by_well[reading.well].append(reading)
    return tuple(
        MovedMark(well, later.day, later.height_m - earlier.height_m)
        for well, rows in sorted(by_well.items())
        for earlier, later in pairwise(rows)
        if abs(later.height_m - earlier.height_m) > MARK_MOVED_M
    )


def _mark_shares_m(
    readings: Sequence[WellReading],
    pairs: Pairs,
    completed: date,
    marks: Sequence[MovedMark],
    rules: EffectRules,
) -> tuple[float, float]:
    """Give how much the change would look larger if moved marks had not been followed."""
    if not marks:
        return 0.0, 0.0
    first: dict[str, float] = {}
    for reading in sorted(readings, key=lambda one: one.read_at):
        if reading.height_m is not None:
            first.setdefault(reading.well, reading.height_m)
    unfollowed = make_pairs(
        [
            one if one.height_m is None else replace(one, height_m=first[one.well])
            for one in readings
        ],
        completed,
        rules,
    )
    return tuple(
        _change_m(unfollowed, of(unfollowed)) - _change_m(pairs, of(pairs))
        for of in (lambda one: one.affected_m, lambda one: one.difference_m)
    )


def _change_m(pairs: Pairs, side: NDArray[np.float64]) -> float:
    return float(side[pairs.after].mean() - side[~pairs.after].mean())


def near_completion(days: NDArray[np.float64], completed: date) -> NDArray[np.bool_]:
    """Mark the day numbers at which a step would be the works' or the first filling's."""
    since = days - completed.toordinal()
    return (since > -WORKS_DAYS) & (since < FILLING_DAYS)


def _jump(pairs: Pairs, completed: date) -> JumpOfPairs | None:
    """Look for a step of the pairs elsewhere than at completion."""
    wet = ~pairs.bounded
    days, after = pairs.middle_day[wet], pairs.after[wet].astype(float)
    if days.size < 2 or np.ptp(after) == 0.0:
        return None
    columns = np.column_stack([np.ones(days.size), after, pairs.season()[wet]])
    step = find_step(
        in_median_gaps(days),
        columns,
        pairs.difference_m[wet],
        barred=near_completion(days, completed),
    )
    if step is None:
        return None
    return JumpOfPairs(pairs.days[int(np.flatnonzero(wet)[step.first])], step.size_m)


def _trend(pairs: Pairs) -> TrendBefore | None:
    """Look whether affected wells moved against control wells before; dry ones are tied lowest."""
    before = ~pairs.after & ~pairs.above
    wet = before & ~pairs.below
    if wet.sum() < TREND_LEAST:
        return None
    return TrendBefore(
        median_slope(pairs.middle_day[wet] / DAYS_PER_YEAR, pairs.difference_m[wet]),
        mann_kendall(pairs.difference_m[before], pairs.below[before]).p_two_sided,
    )
