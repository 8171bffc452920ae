"""Layered models fitted to a sounding by least squares, from several starts at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.ground.resistivity import apparent_resistivity, spread
from structures.ground.sounding_curve import whitened_residual
from structures.intake.defaults import GROUND

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from structures.ground.resistivity import Spread
    from structures.ground.sounding_curve import Curve

STARTS: Final = GROUND["sounding_starts"]
CHI_SQUARE: Final = GROUND["sounding_chi_square"]
LAYER_COUNTS: Final = (2, 3, 4)  # handbook 2.7
RESISTIVITY_BOUNDS_OHM_M: Final = (1.0, 1e5)  # handbook 2.7
THICKNESS_BOUNDS_M: Final = (0.1, 100.0)  # handbook 2.7

TRIALS_PER_START: Final = 32  # [A] draws of which a start is the best; cheap beside the fit
ROUNDS: Final = 80  # [A] steps of the fit; noise-free curves settle in some 30
DIFFERENCE: Final = 1e-6  # step of the forward difference in ln of a parameter
LONGEST_STEP: Final = 1.0  # in ln of a parameter; keeps a start in its own valley
EASED, TIGHTENED = 0.3, 5.0  # change of the damping after a better and a worse step
SETTLED: Final = 1e-10  # relative gain of chi-square under which a start has settled
STIFFEST: Final = 1e8  # damping from which no shorter step is tried


@dataclass(frozen=True, eq=False, slots=True)
class Fit:
    """The best model with a given number of layers, from the top.

    `covariance` is that of (ln resistivities, ln thicknesses) at the fit, shape (unknowns,
    unknowns). `degrees` = readings - unknowns: segment factors and their priors cancel.
    """

    resistivity_ohm_m: NDArray[np.float64]
    thickness_m: NDArray[np.float64]
    computed_ohm_m: NDArray[np.float64]
    chi_square: float
    degrees: int
    covariance: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in ("resistivity_ohm_m", "thickness_m", "computed_ohm_m"):
            object.__setattr__(self, name, frozen(getattr(self, name)))
        object.__setattr__(self, "covariance", frozen(self.covariance, ndim=2))

    @property
    def chi_square_per_degree(self) -> float:
        """Chi-square per degree of freedom; about 1 where model and noise are right."""
        return self.chi_square / self.degrees


def invert(
    readings: Curve, layers: int, *, rng: np.random.Generator, starts: int = int(STARTS.value)
) -> Fit:
    """Fit a model with a given number of layers.

    Source: handbook 2.7; Levenberg-Marquardt on ln parameters, all starts in one array, steps cut
    at the bounds. The best start counts.

    Parameters
    ----------
    readings
        From `sounding_curve.curve`.
    layers
        Number of layers, the infinite one included.
    rng
        Draws the starts.
    starts
        How many; each is the best of a few draws over resistivities and depths that the curve
        can tell of.

    Raises
    ------
    ValueError
        If there are no more readings than unknowns, or no start.
    """
    degrees = readings.ab2_m.size - (2 * layers - 1)
    if degrees < 1 or layers < 1 or starts < 1:
        raise ValueError(f"{readings.ab2_m.size} readings do not carry {layers} layers")
    prepared = spread(readings.ab2_m, readings.mn2_m)
    unknowns = _starts(readings, prepared, layers, starts, rng)
    damping = np.full(starts, 1.0)
    residual = _residual(readings, prepared, layers, unknowns)
    busy = np.ones(starts, dtype=bool)
    for _ in range(ROUNDS):
        at = np.flatnonzero(busy)
        if not at.size:
            break
        slope = _slope(readings, prepared, layers, unknowns[at], residual[at])
        step = _step(slope, residual[at], damping[at])
        trial = _within_bounds(unknowns[at] + step, layers)
        trial_residual = _residual(readings, prepared, layers, trial)
        before = (residual[at] ** 2).sum(axis=1)
        gain = before - (trial_residual**2).sum(axis=1)
        better = gain > 0
        unknowns[at[better]], residual[at[better]] = trial[better], trial_residual[better]
        damping[at] *= np.where(better, EASED, TIGHTENED)
        settled = (better & (gain <= SETTLED * before)) | (damping[at] > STIFFEST)
        busy[at[settled]] = False
    chi_square = (residual**2).sum(axis=1)
    best = int(np.argmin(chi_square))
    return _fit(readings, prepared, layers, unknowns[best], degrees)


def fewest_layers(fits: Sequence[Fit], *, limit: float = CHI_SQUARE.value) -> Fit | None:
    """Pick the fit with the fewest layers whose chi-square per degree lies under the limit.

    Source: handbook 2.7. None where no fit passes: the sounding cannot be interpreted.
    """
    passing = [fit for fit in fits if fit.chi_square_per_degree < limit]
    return min(passing, key=lambda fit: fit.resistivity_ohm_m.size, default=None)


def _fit(readings: Curve, prepared: Spread, layers: int, unknowns: NDArray, degrees: int) -> Fit:
    point = unknowns[None, :]
    residual = _residual(readings, prepared, layers, point)
    slope = _slope(readings, prepared, layers, point, residual)[0]
    computed = _computed(prepared, layers, point)[0]
    return Fit(
        np.exp(unknowns[:layers]),
        np.exp(unknowns[layers:]),
        computed,
        float((residual**2).sum()),
        degrees,
        _covariance(slope),
    )


def _covariance(slope: NDArray) -> NDArray[np.float64]:
    """Invert J'J by singular values; a direction the curve does not see gets a huge variance."""
    _, size, across = np.linalg.svd(slope, full_matrices=False)
    scaled = across / np.maximum(size, size[0] * np.sqrt(np.finfo(float).eps))[:, None]
    return scaled.T @ scaled


def _computed(prepared: Spread, layers: int, unknowns: NDArray) -> NDArray[np.float64]:
    values = np.exp(unknowns)
    return apparent_resistivity(prepared, values[:, :layers], values[:, layers:])


def _residual(
    readings: Curve, prepared: Spread, layers: int, unknowns: NDArray
) -> NDArray[np.float64]:
    return whitened_residual(readings, _computed(prepared, layers, unknowns))


def _slope(
    readings: Curve, prepared: Spread, layers: int, unknowns: NDArray, residual: NDArray
) -> NDArray[np.float64]:
    """Give the derivatives of the residual, shape (starts, readings, unknowns)."""
    starts, count = unknowns.shape
    moved = unknowns[:, None, :] + DIFFERENCE * np.eye(count)
    shifted = _residual(readings, prepared, layers, moved.reshape(-1, count))
    shifted = shifted.reshape(starts, count, -1) - residual[:, None, :]
    return np.swapaxes(shifted, 1, 2) / DIFFERENCE


def _step(slope: NDArray, residual: NDArray, damping: NDArray) -> NDArray[np.float64]:
    """Solve the damped normal equations of each start; shape (starts, unknowns)."""
    normal = np.einsum("sni,snj->sij", slope, slope)
    downhill = -np.einsum("sni,sn->si", slope, residual)
    count = normal.shape[1]
    size = np.einsum("sii->si", normal)
    # A parameter that the curve does not see keeps its place instead of running to a bound.
    floor = 1e-6 * size.max(axis=1, keepdims=True)
    normal[:, range(count), range(count)] += damping[:, None] * (size + floor)
    step = np.linalg.solve(normal, downhill[..., None])[..., 0]
    return np.clip(step, -LONGEST_STEP, LONGEST_STEP)


def _within_bounds(unknowns: NDArray, layers: int) -> NDArray[np.float64]:
    low, high = np.log(RESISTIVITY_BOUNDS_OHM_M)
    thin, thick = np.log(THICKNESS_BOUNDS_M)
    return np.concatenate(
        [np.clip(unknowns[:, :layers], low, high), np.clip(unknowns[:, layers:], thin, thick)],
        axis=1,
    )


def _starts(
    readings: Curve, prepared: Spread, layers: int, starts: int, rng: np.random.Generator
) -> NDArray[np.float64]:
    """Draw starts: resistivities up to 5 times beyond the readings, depths under half the spread."""
    seen = readings.apparent_resistivity_ohm_m
    draws = starts * TRIALS_PER_START
    resistivity = rng.uniform(np.log(seen.min() / 5), np.log(seen.max() * 5), size=(draws, layers))
    shallow, deep = np.log(readings.ab2_m.min() / 3), np.log(readings.ab2_m.max() / 2)
    depth = np.sort(rng.uniform(shallow, deep, size=(draws, layers - 1)), axis=1)
    thickness = np.diff(np.exp(depth), axis=1, prepend=0.0)
    thinnest, _ = THICKNESS_BOUNDS_M
    drawn = np.concatenate([resistivity, np.log(np.maximum(thickness, thinnest))], axis=1)
    drawn = _within_bounds(drawn, layers)
    chi_square = (_residual(readings, prepared, layers, drawn) ** 2).sum(axis=1)
    groups = chi_square.reshape(starts, TRIALS_PER_START)
    return drawn[np.arange(starts) * TRIALS_PER_START + groups.argmin(axis=1)]
