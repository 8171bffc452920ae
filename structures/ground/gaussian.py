"""A Gaussian process along the wall line: prediction, upper bounds, whole-line draws.

Symbols follow handbook section 4: C covariance of the field, Q the inverse of C plus the errors of
the observations, V the covariance that remains.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import log_ndtr, ndtr, ndtri, ndtri_exp

from structures.arrays import frozen

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

NORMAL_90: Final = 1.2815515655446004  # 90 % point of the normal law, handbook 8.9
SWEEPS: Final = 30  # [A] Gibbs equals brute rejection within its own noise from 10 on (measured)
TRIALS: Final = 4  # [A] rejection is given up when fewer than one trial in four survives
TAIL: Final = -30.0  # standard bound below which the shares themselves fall out of floats
STEADY: Final = 1e-9  # share of the sill added to diagonals, so that equal places stay solvable


@dataclass(frozen=True, slots=True)
class Covariance:
    """Exponential covariance sill * exp(-distance / range). Source: handbook 4.1."""

    sill_m2: float
    range_m: float

    def __post_init__(self) -> None:
        if self.sill_m2 <= 0.0 or self.range_m <= 0.0:
            raise ValueError("sill and range are positive")

    def between(self, a_m: NDArray, b_m: NDArray) -> NDArray[np.float64]:
        """Covariance of every place in a with every place in b, shape (a, b)."""
        return self.sill_m2 * np.exp(-np.abs(a_m[:, None] - b_m[None, :]) / self.range_m)


@dataclass(frozen=True, eq=False, slots=True)
class Observations:
    """Levels that were observed, each with its standard error; shapes (n,)."""

    offset_m: NDArray[np.float64]
    level_m: NDArray[np.float64]
    sd_m: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in ("offset_m", "level_m", "sd_m"):
            object.__setattr__(self, name, frozen(getattr(self, name)))
        if not self.offset_m.size == self.level_m.size == self.sd_m.size > 0:
            raise ValueError("offsets, levels and errors are of one length, at least 1")


@dataclass(frozen=True, eq=False, slots=True)
class Prediction:
    """The true surface at some places: mean, shape (m,), and covariance, shape (m, m).

    `trend_m` is the mean of the field, given or estimated.
    """

    mean_m: NDArray[np.float64]
    covariance_m2: NDArray[np.float64]
    trend_m: float

    @property
    def sd_m(self) -> NDArray[np.float64]:
        """Standard deviation at each place, shape (m,)."""
        return np.sqrt(np.maximum(np.diag(self.covariance_m2), 0.0))


def predict(
    seen: Observations, covariance: Covariance, at_m: ArrayLike, *, trend_m: float | None = None
) -> Prediction:
    """Predict the surface from the observations.

    Source: handbook 4.2 (kriging with an unknown mean), or with a mean that is given.

    Parameters
    ----------
    seen
        Observed levels.
    covariance
        Of the field.
    at_m
        Places, shape (m,).
    trend_m
        Mean of the field; None where it is not known.
    """
    at = np.asarray(at_m, dtype=np.float64)
    C = covariance.between(seen.offset_m, seen.offset_m) + np.diag(seen.sd_m**2)
    C += STEADY * covariance.sill_m2 * np.eye(len(C))
    c = covariance.between(seen.offset_m, at)
    Qc = np.linalg.solve(C, c)
    V = covariance.between(at, at) - c.T @ Qc
    if trend_m is None:
        Q1 = np.linalg.solve(C, np.ones(len(C)))
        trend_m = float(Q1 @ seen.level_m / Q1.sum())
        left_over = 1.0 - Q1 @ c
        V = V + np.outer(left_over, left_over) / Q1.sum()
    mean = trend_m + Qc.T @ (seen.level_m - trend_m)
    return Prediction(mean, V, trend_m)


def fit_covariance(
    seen: Observations, *, sill_m2: tuple[float, float], range_m: tuple[float, float]
) -> Covariance:
    """Estimate sill and range by restricted likelihood within their accepted ranges.

    Source: handbook 4.6; the mean is not known, so it is integrated out.

    Parameters
    ----------
    seen
        Observed levels, 15 or more.
    sill_m2, range_m
        Least and greatest value that is accepted.
    """
    # Half a second to load, and only a survey with very many bores comes here.
    from scipy.optimize import minimize  # noqa: PLC0415 -- see above

    one = np.ones(seen.offset_m.size)

    def cost(logs: NDArray) -> float:
        covariance = Covariance(*np.exp(logs))
        C = covariance.between(seen.offset_m, seen.offset_m) + np.diag(seen.sd_m**2)
        C += STEADY * covariance.sill_m2 * np.eye(len(C))
        Q1, Qy = np.linalg.solve(C, np.column_stack([one, seen.level_m])).T
        trend = float(one @ Qy / (one @ Q1))
        rest = seen.level_m - trend
        return float(
            0.5 * np.linalg.slogdet(C).logabsdet
            + 0.5 * np.log(one @ Q1)
            + 0.5 * rest @ (Qy - trend * Q1)
        )

    bounds = np.log([sill_m2, range_m])
    starts = [bounds[:, 0] + share * (bounds[:, 1] - bounds[:, 0]) for share in (0.2, 0.5, 0.8)]
    fits = [minimize(cost, start, method="L-BFGS-B", bounds=bounds) for start in starts]
    return Covariance(*np.exp(min(fits, key=lambda fit: fit.fun).x))


def draw_lines(
    prediction: Prediction,
    bounds_m: NDArray,
    *,
    draws: int,
    steady_m2: float,
    rng: np.random.Generator,
) -> NDArray[np.float64]:
    """Draw whole lines of the surface that keep the bounds.

    Source: handbook 4.5; the bounded places are drawn from the cut normal law, the rest given
    them.

    Parameters
    ----------
    prediction
        At the k bounded places first, then at the other places.
    bounds_m
        Upper bounds of the first k places, shape (k,).
    draws
        How many lines.
    steady_m2
        Variance added to diagonals.
    rng
        Source of chance.

    Returns
    -------
    ndarray
        Shape (draws, m), in the order of the prediction.
    """
    k, m = bounds_m.size, prediction.mean_m.size
    mean, V = prediction.mean_m, prediction.covariance_m2 + steady_m2 * np.eye(m)
    if not k:
        return mean + rng.standard_normal((draws, m)) @ np.linalg.cholesky(V).T
    bounded = draw_bounded(mean[:k], V[:k, :k], bounds_m, draws=draws, rng=rng)
    weights = np.linalg.solve(V[:k, :k], V[:k, k:])
    rest = V[k:, k:] - V[k:, :k] @ weights + steady_m2 * np.eye(m - k)
    given = mean[k:] + (bounded - mean[:k]) @ weights
    return np.hstack(
        [bounded, given + rng.standard_normal((draws, m - k)) @ np.linalg.cholesky(rest).T]
    )


def draw_bounded(
    mean_m: NDArray, V: NDArray, most_m: NDArray, *, draws: int, rng: np.random.Generator
) -> NDArray[np.float64]:
    """Draw from a normal law cut above: by rejection, else by Gibbs sweeps of parallel chains.

    Parameters
    ----------
    mean_m, V
        Mean, shape (k,), and covariance, shape (k, k).
    most_m
        Upper bounds, shape (k,).
    draws
        How many.
    rng
        Source of chance.

    Returns
    -------
    ndarray
        Shape (draws, k).
    """
    root = np.linalg.cholesky(V).T
    tried = mean_m + rng.standard_normal((TRIALS * draws, mean_m.size)) @ root
    kept = tried[(tried <= most_m).all(axis=1)]
    if len(kept) >= draws:
        return kept[:draws]
    P = np.linalg.inv(V)
    sd = 1.0 / np.sqrt(np.diag(P))
    # One row a place, so that each step reads memory in one piece.
    mean, most = mean_m[:, None], most_m[:, None]
    z = np.repeat(np.minimum(mean, most) - mean, draws, axis=1)
    for _ in range(SWEEPS):
        for i in range(mean_m.size):
            centre = z[i] - P[i] @ z / P[i, i]
            cut = (most_m[i] - mean_m[i] - centre) / sd[i]
            z[i] = centre + sd[i] * _cut_normals(cut, rng)
    return np.minimum(z + mean, most).T


def _cut_normals(most: NDArray, rng: np.random.Generator) -> NDArray[np.float64]:
    """Draw one standard normal number below each bound, by the inverse distribution function."""
    share = 1.0 - rng.random(most.size)
    z = np.minimum(ndtri(ndtr(most) * share), most)
    far = most < TAIL
    if far.any():
        z[far] = np.minimum(ndtri_exp(log_ndtr(most[far]) + np.log(share[far])), most[far])
    return z
