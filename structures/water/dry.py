"""A step where some pairs are only known to lie below or above a bound: dry wells, drawn not dropped."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import log_ndtr, ndtri_exp

from structures.arrays import frozen
from structures.water.serial import COEFFICIENTS, Mixture

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.water.serial import SerialDesign

ROUNDS: Final = 500  # of which the first are thrown away (trials of the project)
ROUNDS_AWAY: Final = 80


@dataclass(frozen=True, slots=True, eq=False)
class Bounded:
    """A series with `below` (at most the value) and `above` (at least the value); shapes (n,)."""

    values: NDArray[np.float64]
    below: NDArray[np.bool_]
    above: NDArray[np.bool_]

    def __post_init__(self) -> None:
        object.__setattr__(self, "values", frozen(self.values))
        if self.below.shape != self.values.shape or self.above.shape != self.values.shape:
            raise ValueError("every value wants its two marks")
        if (self.below & self.above).any():
            raise ValueError("a value bounded on both sides says nothing")


def bounded_mixture(
    design: SerialDesign, series: Bounded, column: int, rng: np.random.Generator
) -> Mixture:
    """Give the distribution of a coefficient where bounded pairs count as bounds.

    Each round takes a coefficient of the grid by its weight, variance and regression from their
    laws, then every bounded pair from its normal given its neighbours, cut at its bound; the t
    distributions of the rounds that are kept are mixed.

    Source: handbook 10.1 (dry pairs) and 10.5, by Gibbs sampling.

    Raises
    ------
    ValueError
        If the series does not fit the design.
    """
    count = design.time.size
    if series.values.size != count:
        raise ValueError(f"{series.values.size} values for {count} times")
    values = np.array(series.values)
    spots = np.flatnonzero(series.below | series.above)
    # A value hangs on its neighbours alone, so those of even place are drawn at once, then the odd.
    halves = [half for half in (spots[spots % 2 == 0], spots[spots % 2 == 1]) if half.size]
    centres, scales = [], []
    for turn in range(ROUNDS):
        seen = design.weigh(values)
        pick = int(np.searchsorted(np.cumsum(seen.weight), rng.random() * seen.weight.sum()))
        pick = min(pick, COEFFICIENTS.size - 1)
        inverse = design.inverse[pick]
        if turn >= ROUNDS_AWAY:
            centres.append(seen.coefficient[pick, column])
            scales.append(np.sqrt(seen.variance[pick] * inverse[column, column]))
        variance = seen.variance[pick] * design.degrees / rng.chisquare(design.degrees)
        spread = np.linalg.cholesky(variance * inverse)
        drawn = seen.coefficient[pick] + spread @ rng.standard_normal(inverse.shape[0])
        fitted = design.columns @ drawn
        for half in halves:
            _draw(values, fitted, half, series, design.link[pick], variance, rng)
    kept = len(centres)
    return Mixture(np.full(kept, 1.0 / kept), np.array(centres), np.array(scales), design.degrees)


def _draw(
    values: NDArray[np.float64],
    fitted: NDArray[np.float64],
    half: NDArray[np.int_],
    series: Bounded,
    link: NDArray[np.float64],
    variance: float,
    rng: np.random.Generator,
) -> None:
    """Draw the bounded values at some places given all others, in place."""
    error = values - fitted
    last = values.size - 1
    before = np.where(half > 0, link[np.maximum(half - 1, 0)], 0.0)
    behind = np.where(half < last, link[np.minimum(half, last - 1)], 0.0)
    from_before = before * error[np.maximum(half - 1, 0)] / (1.0 - before**2)
    from_behind = behind * error[np.minimum(half + 1, last)] / (1.0 - behind**2)
    precision = 1.0 / (1.0 - before**2) + behind**2 / (1.0 - behind**2)
    spread = np.sqrt(variance / precision)
    centre = fitted[half] + (from_before + from_behind) / precision
    side = np.where(series.below[half], 1.0, -1.0)  # an upper bound, or a lower one mirrored
    room = side * (series.values[half] - centre) / spread
    # In logarithms, as a bound far in the tail leaves no ordinary probability.
    place = ndtri_exp(log_ndtr(room) + np.log(1.0 - rng.random(half.size)))
    values[half] = centre + side * np.minimum(place, room) * spread
