"""Whole rock lines drawn around the one that the trench showed, for the range of its price.

A settled line carries no range of its own; what the engineer recorded beside it gives one.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.arrays import frozen, rising
from structures.ground.gaussian import (
    NORMAL_90,
    STEADY,
    Covariance,
    Observations,
    Prediction,
    draw_lines,
    predict,
)
from structures.ground.rock_tests import ground_level_m
from structures.intake.practice import HANDBOOK, Practice

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from structures.ground.found import AsFound, FoundLevel


@dataclass(frozen=True, slots=True)
class DrawnRange:
    """What was recorded at one point of a drawn line: its level and how far it may be wrong.

    `low_m` and `high_m` are the 10 % and 90 % points of the level (low = deep).

    Raises
    ------
    ValueError
        If the range does not hold the level.
    """

    offset_m: float
    low_m: float
    likely_m: float
    high_m: float

    def __post_init__(self) -> None:
        if not self.low_m <= self.likely_m <= self.high_m:
            raise ValueError(f"range is upside down at {self.offset_m:g} m")


@dataclass(frozen=True, eq=False, slots=True)
class DrawnLines:
    """Whole lines drawn around an as-found one: offsets (n,), lines (draws, n), and their seed."""

    offset_m: NDArray[np.float64]
    draws_m: NDArray[np.float64]
    seed: int

    def __post_init__(self) -> None:
        object.__setattr__(self, "offset_m", rising(self.offset_m))
        object.__setattr__(self, "draws_m", frozen(self.draws_m, ndim=2))


def draw_around(
    as_found: AsFound,
    ranges: Sequence[DrawnRange],
    *,
    draws: int,
    seed: int,
    practice: Practice = HANDBOOK,
) -> DrawnLines:
    """Draw whole lines around the as-found line of an engineer, by its recorded range.

    Source: handbook 4.1, 4.2 and 4.5 for the deviation from the line in units of its recorded
    standard deviation: mean 0, sill 1, the default range along the line; 0 where rock was found.
    [A] Low and high side have their own deviation, so that 10 % and 90 % points far from any level
    found are those recorded. The engineer knew the tests of the drawn line; only those to whose
    foot it was lowered since cut the draws.

    Parameters
    ----------
    as_found
        A survey with a given line, as found.
    ranges
        What was recorded at the points of the drawn line, by offset.
    draws, seed
        How many lines, and the seed of chance.
    practice
        Error of a level seen in an open pit, and range of the rock line.

    Raises
    ------
    ValueError
        If the survey has no given line, or no range was recorded.
    """
    pack = as_found.pack
    if pack.rock_line is None or not ranges:
        raise ValueError("a given line with its recorded range is asked for")
    x = _offsets(as_found)
    line = _on(x, [(point.offset_m, point.level_m) for point in pack.rock_line])
    deep, shallow = _sides(x, ranges, practice.se_pit_m)
    covariance = Covariance(1.0, practice.rock_range_m)
    prediction = _deviation(as_found.found, ranges, covariance, x, practice.se_pit_m)

    # Bounded places come first in one joint draw; then back to the order of the line.
    bounded = np.isin(x, [one.offset_m for one in as_found.lowered])
    order = np.concatenate([np.flatnonzero(bounded), np.flatnonzero(~bounded)])
    deviations = draw_lines(
        Prediction(prediction.mean_m[order], prediction.covariance_m2[np.ix_(order, order)], 0.0),
        np.zeros(int(bounded.sum())),  # the line was lowered to the foot itself
        draws=draws,
        steady_m2=STEADY,
        rng=np.random.default_rng(seed),
    )[:, np.argsort(order)]
    lines = line + np.where(deviations < 0.0, deep * deviations, shallow * deviations)
    ground = np.array([ground_level_m(pack, offset) for offset in x.tolist()])
    return DrawnLines(x, np.minimum(lines, ground), seed)


def _deviation(
    found: Sequence[FoundLevel],
    ranges: Sequence[DrawnRange],
    covariance: Covariance,
    x: NDArray,
    error_m: float,
) -> Prediction:
    """Deviation from the as-found line in units of its sd: 0 where rock was found."""
    if not found:
        return Prediction(np.zeros(x.size), covariance.between(x, x), 0.0)
    at = np.array([one.offset_m for one in found])
    seen = Observations(
        at, np.zeros(at.size), error_m / np.mean(_sides(at, ranges, error_m), axis=0)
    )
    return predict(seen, covariance, x, trend_m=0.0)


def _sides(
    x: NDArray, ranges: Sequence[DrawnRange], least_m: float
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Give the recorded standard deviation to the deep and to the shallow side, `least_m` or more."""
    deep = _on(x, [(one.offset_m, (one.likely_m - one.low_m) / NORMAL_90) for one in ranges])
    shallow = _on(x, [(one.offset_m, (one.high_m - one.likely_m) / NORMAL_90) for one in ranges])
    return np.maximum(deep, least_m), np.maximum(shallow, least_m)


def _offsets(as_found: AsFound) -> NDArray[np.float64]:
    """Every point of line and ground, toe, probe and whole metre within the line."""
    pack = as_found.pack
    points = [point.offset_m for point in pack.rock_line]
    first, last = points[0], points[-1]
    named = [*points, *(point.offset_m for point in pack.ground)]
    named += [pack.toes.left_m, pack.toes.right_m]
    x = np.unique(np.concatenate([named, np.arange(np.ceil(first), np.floor(last) + 1.0)]))
    return x[(x >= first) & (x <= last)]


def _on(x: NDArray, points: Sequence[tuple[float, float]]) -> NDArray[np.float64]:
    return np.interp(x, *np.array(sorted(points)).T)
