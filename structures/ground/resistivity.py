"""What a layered ground shows to a four-electrode spread, with the MN that was recorded.

The resistivity transform less that of the first layer is smooth in the logarithm of the wave
number. So it is tabulated on a coarse logarithmic grid, and the whole integral over wave number
becomes one matrix a spread: any number of models costs one product. A smooth window ends the
integral where the Bessel functions have turned many times; what it cuts off cancels itself.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import erfc, j0, j1

from structures.arrays import frozen

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

STENCIL: Final = 10  # points of the Lagrange interpolation from the coarse to the fine grid
GAUSS_POINTS: Final = 8  # of each panel of half a wave; exact to 1e-12 for a cosine
CHUNK: Final = 16_000  # numbers an array may hold: 125 KB stay in the cache and in reused memory


@dataclass(frozen=True, slots=True)
class Grid:
    """How finely and how far a transform is tabulated.

    `points` to each octave of the wave number. The grid begins at `low_end` over the greatest
    distance, since the integrand falls with the cube of the wave number. The window is down to a
    half at `window` over the least distance and is an error function `width` wide; the Fourier
    transform of that leaves exp(-width^2/4) of what is cut off.
    """

    points: int
    low_end: float
    window: float
    width: float

    @property
    def high_end(self) -> float:
        """Wave number times least distance where the window is down to 1e-12."""
        return self.window + 5 * self.width


FINE: Final = Grid(6, 3e-3, 50.0, 10.0)  # within 4e-7 over all usual models
COARSE: Final = Grid(3, 2e-2, 35.0, 8.0)  # for samplers: within 1e-3, a tenth of the least noise


@dataclass(frozen=True, eq=False, slots=True)
class Spread:
    """Readings (AB/2, MN/2) with the matrix that turns a transform into apparent resistivity.

    `wave_number_per_m` has shape (k,), with `points` to each doubling; `weight` has
    shape (readings, k).
    """

    ab2_m: NDArray[np.float64]
    mn2_m: NDArray[np.float64]
    points: int
    wave_number_per_m: NDArray[np.float64]
    weight: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name, ndim in (("ab2_m", 1), ("mn2_m", 1), ("wave_number_per_m", 1), ("weight", 2)):
            object.__setattr__(self, name, frozen(getattr(self, name), ndim=ndim))
        if self.weight.shape != (self.ab2_m.size, self.wave_number_per_m.size):
            raise ValueError(f"weight has shape {self.weight.shape}")


def spread(ab2_m: ArrayLike, mn2_m: ArrayLike, *, grid: Grid = FINE) -> Spread:
    """Prepare the matrix for the readings of one sounding; the same readings are prepared once.

    Source: handbook 2.2, 2.3; Gauss-Legendre panels of half a wave, Lagrange interpolation.

    Parameters
    ----------
    ab2_m, mn2_m
        Half the current and half the potential electrode spacing, m, shape (readings,). An
        MN/2 of 0 asks for the limit MN -> 0 (2.4a), which is no recorded reading.
    grid
        How finely the transform is tabulated: FINE, or COARSE for samplers.

    Raises
    ------
    ValueError
        If the shapes differ, a spacing is not positive, or MN/2 does not lie under AB/2.
    """
    ab2, mn2 = frozen(ab2_m), frozen(mn2_m)
    if ab2.shape != mn2.shape or ab2.size == 0:
        raise ValueError(f"{ab2.size} values of AB/2 but {mn2.size} of MN/2")
    if not ((mn2 >= 0) & (mn2 < ab2)).all():
        raise ValueError("MN/2 must lie between 0 and AB/2")
    return _prepared(tuple(ab2), tuple(mn2), grid)


@lru_cache(maxsize=64)
def _prepared(ab2_m: tuple[float, ...], mn2_m: tuple[float, ...], grid: Grid) -> Spread:
    ab2, mn2 = np.array(ab2_m), np.array(mn2_m)
    low, high = grid.low_end / (ab2 + mn2).max(), grid.high_end / (ab2 - mn2).min()
    before = STENCIL // 2 - 1
    octaves = int(np.ceil(np.log2(high / low) + STENCIL / grid.points))
    places = np.arange(octaves * grid.points) - before
    log_wave = np.log(low) + np.log(2.0) / grid.points * places
    rows = [_row(s, b, log_wave, grid) for s, b in zip(ab2_m, mn2_m, strict=True)]
    return Spread(ab2, mn2, grid.points, np.exp(log_wave), np.array(rows))


def _row(ab2_m: float, mn2_m: float, log_wave: NDArray, grid: Grid) -> NDArray[np.float64]:
    """Integrate the kernel of one reading against each point of the coarse grid."""
    low = float(np.exp(log_wave[STENCIL // 2 - 1]))
    edges = _edges_per_m(low, grid.high_end / (ab2_m - mn2_m), ab2_m + mn2_m)
    node, node_weight = np.polynomial.legendre.leggauss(GAUSS_POINTS)
    half = np.diff(edges)[:, None] / 2
    wave = (edges[:-1, None] + half * (node + 1)).ravel()
    share = (half * node_weight).ravel() * _kernel(wave, ab2_m, mn2_m)
    share *= erfc((wave * (ab2_m - mn2_m) - grid.window) / grid.width) / 2
    place = (np.log(wave) - log_wave[0]) / (log_wave[1] - log_wave[0])
    first = np.floor(place).astype(np.intp) - (STENCIL // 2 - 1)
    row = np.zeros(log_wave.size)
    for k, weight in enumerate(_lagrange(place - first) * share):
        row += np.bincount(first + k, weights=weight, minlength=row.size)
    return row


def _kernel(wave: NDArray, ab2_m: float, mn2_m: float) -> NDArray[np.float64]:
    if mn2_m == 0:
        return ab2_m**2 * wave * j1(wave * ab2_m)
    near, far = ab2_m - mn2_m, ab2_m + mn2_m
    return (j0(wave * near) - j0(wave * far)) / (1 / near - 1 / far)


def _edges_per_m(low_per_m: float, high_per_m: float, far_m: float) -> NDArray[np.float64]:
    """Give the edges of the panels: doubling from the low end, then half a wave each."""
    width = np.pi / far_m
    doubling = low_per_m * 2.0 ** np.arange(1 + int(np.log2(max(1.0, width / low_per_m))))
    count = int(np.ceil((high_per_m - doubling[-1]) / width))
    return np.concatenate([doubling[:-1], np.linspace(doubling[-1], high_per_m, count + 1)])


def _lagrange(place: NDArray) -> NDArray[np.float64]:
    """Give the weights of points 0 to STENCIL - 1 at places between; shape (STENCIL, n)."""
    points = np.arange(STENCIL)
    away = place - points[:, None]
    ones = np.ones((1, place.size))
    before = np.cumprod(np.concatenate([ones, away[:-1]]), axis=0)
    after = np.cumprod(np.concatenate([ones, away[:0:-1]]), axis=0)[::-1]
    apart = points[:, None] - points
    scale = np.prod(apart, axis=1, where=apart != 0)
    return before * after / scale[:, None]


def transform_excess(
    readings: Spread, resistivity_ohm_m: NDArray, thickness_m: NDArray
) -> NDArray[np.float64]:
    """Resistivity transform less the first layer's resistivity, T_1 - rho_1, shape (k, models).

    Source: handbook 2.1, written for the reflection at each boundary seen from above:
    R_j = exp(-2 lambda h_j) (k_j + R_(j+1)) / (1 + k_j R_(j+1)), T_j = rho_j (1 + R_j)/(1 - R_j).

    Parameters
    ----------
    readings
        From `spread`; its grid is the wave numbers.
    resistivity_ohm_m
        Layers from the top, ohm m, shape (layers, models).
    thickness_m
        Of all layers but the deepest, m, shape (layers - 1, models).
    """
    if not len(thickness_m):
        return np.zeros((readings.wave_number_per_m.size, resistivity_ohm_m.shape[1]))
    upper, lower = resistivity_ohm_m[:-1], resistivity_ohm_m[1:]
    contrast = (lower - upper) / (lower + upper)
    seen = _decay(readings, thickness_m[-1])
    seen *= contrast[-1]
    for j in range(len(thickness_m) - 2, -1, -1):
        divisor = seen * contrast[j]
        divisor += 1.0
        seen += contrast[j]
        seen /= divisor
        seen *= _decay(readings, thickness_m[j])
    seen /= 1.0 - seen
    seen *= 2.0 * resistivity_ohm_m[0]
    return seen


def _decay(readings: Spread, thickness_m: NDArray) -> NDArray[np.float64]:
    """Give exp(-2 lambda h), shape (k, models): the square of the value an octave lower."""
    points = readings.points
    wave = readings.wave_number_per_m
    decay = np.empty((wave.size // points, points, thickness_m.size))
    np.exp(-2.0 * wave[:points, None] * thickness_m, out=decay[0])
    for lower, upper in pairwise(decay):
        np.multiply(lower, lower, out=upper)
    return decay.reshape(wave.size, thickness_m.size)


def apparent_resistivity(
    readings: Spread, resistivity_ohm_m: ArrayLike, thickness_m: ArrayLike
) -> NDArray[np.float64]:
    """Apparent resistivity of many models at the readings of a spread, ohm m.

    Source: handbook 2.2, 2.3: the point-source potential at both potential electrodes, with the
    part of the first layer taken out of the integral.

    Parameters
    ----------
    readings
        From `spread`.
    resistivity_ohm_m
        Layers from the top, ohm m, shape (models, layers), or (layers,) for one model.
    thickness_m
        Of all layers but the deepest, m, shape (models, layers - 1), or (layers - 1,).

    Returns
    -------
    Shape (models, readings), or (readings,) for one model.

    Raises
    ------
    ValueError
        If the shapes do not fit, or a value is not positive and finite.
    """
    resistivity, thickness = np.asarray(resistivity_ohm_m, float), np.asarray(thickness_m, float)
    rho, h = np.atleast_2d(resistivity), np.atleast_2d(thickness)
    if rho.shape != (h.shape[0], h.shape[1] + 1) or resistivity.ndim != thickness.ndim:
        raise ValueError(
            f"resistivity {resistivity.shape} does not fit thickness {thickness.shape}"
        )
    if not (np.isfinite(rho).all() and (rho > 0).all() and np.isfinite(h).all() and (h > 0).all()):
        raise ValueError("resistivity and thickness must be positive numbers")
    result = np.empty((len(rho), readings.ab2_m.size))
    at_once = max(1, CHUNK // readings.wave_number_per_m.size)
    for start in range(0, len(rho), at_once):
        part = slice(start, start + at_once)
        excess = transform_excess(readings, rho[part].T, h[part].T)
        result[part] = rho[part, :1] + (readings.weight @ excess).T
    return result if resistivity.ndim == 2 else result[0]


def schlumberger_factor_m(ab2_m: ArrayLike, mn2_m: ArrayLike) -> NDArray[np.float64]:
    """Geometric factor G of rho_a = G V/I, m; source: handbook 2.4, pi (s^2 - b^2)/(2 b)."""
    ab2, mn2 = np.asarray(ab2_m, float), np.asarray(mn2_m, float)
    return np.pi * (ab2**2 - mn2**2) / (2 * mn2)


def wenner_factor_m(spacing_m: ArrayLike) -> NDArray[np.float64]:
    """Geometric factor G of rho_a = G V/I, m; source: handbook 2.4, 2 pi a."""
    return 2 * np.pi * np.asarray(spacing_m, float)
