"""Whether a series moves on the whole: Mann-Kendall and the median of all slopes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.special import ndtr

from structures.arrays import frozen, rising

if TYPE_CHECKING:
    from numpy.typing import ArrayLike


@dataclass(frozen=True, slots=True)
class RankTrend:
    """Mann-Kendall's sum of signs, its variance, the normal score and the two-sided p."""

    signs: int
    variance: float
    score: float
    p_two_sided: float


def mann_kendall(values: ArrayLike, below: ArrayLike | None = None) -> RankTrend:
    """Test a series in the order of time for a trend by its ranks.

    Source: handbook 10.3, with the correction for ties; assumes no serial correlation.

    Parameters
    ----------
    values
        Levels, shape (n,).
    below
        True where the well was dry: such levels are tied lowest (handbook 10.1); shape (n,).

    Raises
    ------
    ValueError
        If fewer than three values are given, or the marks do not fit.
    """
    series = np.array(frozen(values))
    if below is not None:
        dry = np.asarray(below, dtype=bool)
        if dry.shape != series.shape:
            raise ValueError("every value wants its mark")
        series[dry] = series.min() - 1.0
    count = series.size
    if count < 3:
        raise ValueError(f"a trend wants three values or more, not {count}")
    signs = int(np.sign(series[None, :] - series[:, None])[np.triu_indices(count, 1)].sum())
    ties = np.unique(series, return_counts=True)[1]
    corrected = (ties * (ties - 1) * (2 * ties + 5)).sum()
    variance = float(count * (count - 1) * (2 * count + 5) - corrected) / 18.0
    score = (signs - np.sign(signs)) / variance**0.5 if variance > 0.0 else 0.0
    return RankTrend(signs, variance, float(score), float(2.0 * ndtr(-abs(score))))


def median_slope(time: ArrayLike, values: ArrayLike) -> float:
    """Median of the slopes between all pairs of points, in units of values per unit of time.

    Source: handbook 10.4.

    Raises
    ------
    ValueError
        If fewer than two points are given, times do not rise, or the counts differ.
    """
    at, series = rising(time), frozen(values)
    if at.size != series.size or at.size < 2:
        raise ValueError(f"{at.size} times and {series.size} values give no slope")
    one, two = np.triu_indices(at.size, 1)
    return float(np.median((series[two] - series[one]) / (at[two] - at[one])))
