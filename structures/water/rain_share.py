"""What the rain explains of a change: years paired by rain, and rain beside the step."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.intake.rain import months_to
from structures.water.serial import SerialDesign, in_median_gaps

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from structures.intake.rain import Rain
    from structures.water.pairs import Pairs
    from structures.water.rules import EffectRules

MONTHS: Final = 12
LEAST_YEARS: Final = 2  # full water years a side, handbook 10.6
LEAST_MONTHS: Final = 10  # of pairs a side whose year of rain is known (project choice)


@dataclass(frozen=True, slots=True)
class RainYear:
    """A water year: mean departure of affected and control wells, and its rain."""

    year: int
    affected_m: float
    control_m: float
    rain_mm: float


@dataclass(frozen=True, slots=True)
class PairedYears:
    """After-years with the before-year of nearest rain each, and the mean differences."""

    pairs: tuple[tuple[int, int], ...]
    affected_m: float
    control_m: float

    @property
    def difference_m(self) -> float:
        """Affected less control."""
        return self.affected_m - self.control_m

    @property
    def twice(self) -> tuple[int, ...]:
        """Before-years that serve more than once."""
        used = [before for _after, before in self.pairs]
        return tuple(sorted({year for year in used if used.count(year) > 1}))


@dataclass(frozen=True, slots=True)
class RainAdjusted:
    """A step with the rain beside it: metres per mm, what the rain makes, what is left to the step."""

    m_per_mm: float
    rain_share_m: float
    step_m: float
    step_error_m: float
    pairs: int


def pair_years(before: Sequence[RainYear], after: Sequence[RainYear]) -> PairedYears | None:
    """Pair each after-year with the before-year of nearest rain; None where a side is empty.

    Source: handbook 10.7; of two equally near the drier one; a before-year may serve twice.
    """
    if not before or not after:
        return None
    chosen = [
        min(before, key=lambda one: (abs(one.rain_mm - year.rain_mm), one.rain_mm))
        for year in after
    ]
    steps = list(zip(after, chosen, strict=True))
    return PairedYears(
        tuple((one.year, other.year) for one, other in steps),
        float(np.mean([one.affected_m - other.affected_m for one, other in steps])),
        float(np.mean([one.control_m - other.control_m for one, other in steps])),
    )


def rain_years(pairs: Pairs, rain: Rain, rules: EffectRules, *, after: bool) -> list[RainYear]:
    """Give the full water years of a side whose rain is known in every month.

    A level of a year is the mean of its monthly means, so that months read twice do not count twice.
    """
    years = []
    for year in pairs.full_after if after else pairs.full_before:
        start, _day = rules.year_starts
        months = months_to((year + (start > 1), start - 1 or MONTHS))
        rain_mm = rain.sum_mm(months)
        rows = [
            place
            for place, day in enumerate(pairs.days)
            if rules.water_year(day) == year and pairs.after[place] == after
        ]
        if rain_mm is None or not rows or pairs.bounded[rows].any():
            continue
        by_month: dict[int, list[int]] = defaultdict(list)
        for place in rows:
            by_month[pairs.days[place].month].append(place)
        level = [
            float(np.mean([side[places].mean() for places in by_month.values()]))
            for side in (pairs.affected_m, pairs.control_m)
        ]
        years.append(RainYear(year, *level, rain_mm))
    return years


def rain_before_mm(pairs: Pairs, rain: Rain) -> NDArray[np.float64]:
    """Give the rain of the twelve months up to each pair, NaN where not known; shape (n,)."""
    sums = [rain.sum_mm(months_to((day.year, day.month))) for day in pairs.days]
    return np.array([np.nan if one is None else one for one in sums], dtype=float)


def adjust_for_rain(
    pairs: Pairs, rain_mm: NDArray[np.float64], values_m: NDArray[np.float64]
) -> RainAdjusted | None:
    """Fit level = a + b rain + step, seasons beside them; None where it is too short to judge.

    Source: handbook 10.6 with the errors of 10.5; rain is that of the twelve months up to a pair,
    and the share of rain is b times (mean rain after - before). Dry pairs take no part.

    Parameters
    ----------
    rain_mm
        Rain up to each pair, NaN where not known; shape (n,).
    values_m
        Affected departures, or affected less control; shape (n,).
    """
    known = ~np.isnan(rain_mm) & ~pairs.bounded
    months = [
        {(day.year, day.month) for day, use in zip(pairs.days, known & side, strict=True) if use}
        for side in (~pairs.after, pairs.after)
    ]
    years = min(len(pairs.full_before), len(pairs.full_after))
    if years < LEAST_YEARS or min(map(len, months)) < LEAST_MONTHS:
        return None
    after, rain = pairs.after[known].astype(float), rain_mm[known]
    step = float(rain[after > 0].mean() - rain[after == 0].mean())
    columns = np.column_stack(
        [np.ones(rain.size), after, rain - rain.mean(), pairs.season()[known]]
    )
    if np.linalg.matrix_rank(columns / np.maximum(np.abs(columns).max(axis=0), 1e-9)) < 5:
        return None
    design = SerialDesign(in_median_gaps(pairs.middle_day[known]), columns)
    slope = design.mixture(values_m[known], 2).mean
    law = design.mixture(values_m[known], 1)
    low, high = law.interval(0.6827)  # one standard error either side
    return RainAdjusted(slope, slope * step, law.quantile(0.5), (high - low) / 2.0, rain.size)
