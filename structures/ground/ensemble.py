"""The range of rock depth: models of 2, 3 and 4 layers, each weighted by its evidence.

The best model alone calls rock too shallow, because it leaves a thin or weathered layer out. So
the depth is read from an average over the numbers of layers under a printed prior. Each number of
layers has its own cloud of particles, led from the prior to the posterior in tempered steps.
"""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.ground.layer_prior import (
    deepest_boundary_m,
    draw_models,
    log_density,
    shows_rock,
)
from structures.ground.resistivity import COARSE, apparent_resistivity, spread
from structures.ground.sounding_curve import whitened_residual

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from numpy.typing import NDArray

    from structures.ground.layer_prior import Prior
    from structures.ground.sounding_curve import Curve

KEPT_SHARE: Final = 0.5  # each step keeps half of the effective sample size
ACCEPTED_SHARE: Final = 0.25  # the length of a move is led to a quarter accepted
LENGTH: Final = 2.38  # over the root of the unknowns: best length of a Gaussian random walk
HOPELESS: Final = -20.0  # log weight, beside the best, under which a cloud is not sampled: 2e-9
FULL_SHARE: Final = 0.1  # of the difference moves go at full length, to jump between modes


@dataclass(frozen=True, slots=True)
class Effort:
    """How much a sampler works: draws of the prior, particles, moves a step and at the end.

    With 4 and 12 moves coverage fell to 65-68 % in trials, unseen in a single curve.
    """

    draws: int = 4000
    particles: int = 1000
    moves: int = 10
    last_moves: int = 30


EFFORT: Final = Effort()


@dataclass(frozen=True, eq=False, slots=True)
class Cloud:
    """Particles of one number of layers, as ln (resistivities, thicknesses).

    `unknowns` has shape (particles, 2 layers - 1), `chi_square` shape (particles,).
    """

    layers: int
    unknowns: NDArray[np.float64]
    chi_square: NDArray[np.float64]
    log_evidence: float

    def __post_init__(self) -> None:
        object.__setattr__(self, "unknowns", frozen(self.unknowns, ndim=2))
        object.__setattr__(self, "chi_square", frozen(self.chi_square))


@dataclass(frozen=True, eq=False, slots=True)
class Ensemble:
    """The weighted union of the clouds; arrays of shape (members,), in the order of the clouds.

    `layer_weight` gives the weight of each number of layers, 0 where it could not count.
    """

    clouds: tuple[Cloud, ...]
    layer_weight: tuple[tuple[int, float], ...]
    weight: NDArray[np.float64]
    depth_m: NDArray[np.float64]
    rock: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in ("weight", "depth_m", "rock"):
            object.__setattr__(self, name, frozen(getattr(self, name)))

    @property
    def rock_share(self) -> float:
        """Share of the ensemble whose deepest layer is read as rock (handbook 2.10)."""
        return float(np.average(self.rock, weights=self.weight))

    @property
    def depth_sd_m(self) -> float:
        """Standard deviation of the depth of the deepest boundary, m."""
        mean = self.weight @ self.depth_m
        return float(np.sqrt(self.weight @ (self.depth_m - mean) ** 2))

    def depth_quantile_m(self, share: float) -> float:
        """Depth of the deepest boundary that a share of the ensemble does not reach, m."""
        order = np.argsort(self.depth_m)
        weight = self.weight[order]
        return float(np.interp(share, np.cumsum(weight) - weight / 2, self.depth_m[order]))


def sample_ensemble(
    readings: Curve,
    prior: Prior,
    *,
    rng: np.random.Generator,
    effort: Effort = EFFORT,
    floors: Mapping[int, float] = MappingProxyType({}),
) -> Ensemble:
    """Sample models of every number of layers of the prior and weigh them by evidence.

    Source: handbook 2.7; model averaging with weight = prior share times evidence.

    Parameters
    ----------
    readings
        From `sounding_curve.curve`.
    prior
        Its ranges, shares of the numbers of layers, and rule of rock.
    rng
        The one source of chance; the same seed gives the same digits.
    effort
        Draws, particles and moves of each sampler.
    floors
        Least chi-square of a number of layers, where it is known from a fit. The evidence cannot
        exceed exp(-chi-square/2), so a number of layers that cannot count is not sampled.
    """
    clouds: list[Cloud] = []
    log_weight = dict.fromkeys((layers for layers, _ in prior.layer_share), -np.inf)
    for layers, share in sorted(prior.layer_share, reverse=True):
        best = max(log_weight.values())
        if np.log(share) - floors.get(layers, 0.0) / 2 < best + HOPELESS:
            continue
        cloud = sample_cloud(readings, prior, layers, rng=rng, effort=effort)
        log_weight[layers] = np.log(share) + cloud.log_evidence
        clouds.insert(0, cloud)
    best = max(log_weight.values())
    total = sum(np.exp(value - best) for value in log_weight.values())
    weight = {layers: float(np.exp(log_weight[layers] - best) / total) for layers in log_weight}
    return Ensemble(
        tuple(clouds),
        tuple(weight.items()),
        np.concatenate(
            [np.full(len(c.unknowns), weight[c.layers] / len(c.unknowns)) for c in clouds]
        ),
        np.concatenate([deepest_boundary_m(cloud.unknowns, cloud.layers) for cloud in clouds]),
        np.concatenate([shows_rock(prior, cloud.unknowns, cloud.layers) for cloud in clouds]),
    )


def sample_cloud(
    readings: Curve,
    prior: Prior,
    layers: int,
    *,
    rng: np.random.Generator,
    effort: Effort = EFFORT,
) -> Cloud:
    """Sample models of one number of layers from prior to posterior.

    Source: sequential Monte Carlo with tempered likelihood; systematic resampling; Metropolis
    moves by a Gaussian step and by differences of particles in turn.
    """
    chi_square = _misfit(readings, prior, layers)
    points = draw_models(prior, layers, effort.draws, rng)
    misfit = chi_square(points)
    exponent, log_evidence = 0.0, 0.0
    lengths = np.ones(2)
    while exponent < 1.0:
        ahead = _next_exponent(misfit, exponent)
        log_weight = -0.5 * (ahead - exponent) * misfit
        top = log_weight.max()
        weight = np.exp(log_weight - top)
        log_evidence += float(top + np.log(weight.mean()))
        chosen = _resampled(weight, effort.particles, rng)
        points, misfit, exponent = points[chosen], misfit[chosen], ahead
        moves = effort.last_moves if exponent == 1.0 else effort.moves
        points, misfit = _moved(
            (points, misfit),
            chi_square,
            lambda trial: log_density(prior, layers, trial),
            exponent,
            moves=moves,
            lengths=lengths,
            rng=rng,
        )
    return Cloud(layers, points, misfit, log_evidence)


def _misfit(readings: Curve, prior: Prior, layers: int) -> Callable[[NDArray], NDArray]:
    """Give the function from ln parameters to chi-square, a measured resistivity included."""
    prepared = spread(readings.ab2_m, readings.mn2_m, grid=COARSE)
    sand = prior.saturated_sand

    def chi_square(points: NDArray) -> NDArray[np.float64]:
        values = np.exp(points)
        computed = apparent_resistivity(prepared, values[:, :layers], values[:, layers:])
        residual = whitened_residual(readings, computed)
        total = np.einsum("mn,mn->m", residual, residual)
        if sand is not None:
            least = points[:, : layers - 1].min(axis=1)
            total += ((least - np.log(sand.resistivity_ohm_m)) / sand.log_sd) ** 2
        return total

    return chi_square


def _next_exponent(misfit: NDArray, exponent: float) -> float:
    """Raise the exponent as far as the kept share of the effective sample size allows."""

    def spare(ahead: float) -> float:
        weight = np.exp(-0.5 * (ahead - exponent) * (misfit - misfit.min()))
        return float(weight.sum() ** 2 / (weight @ weight) / misfit.size - KEPT_SHARE)

    if spare(1.0) >= 0:
        return 1.0
    # Half a second to load, and a pack without a sounding never comes here.
    from scipy.optimize import brentq  # noqa: PLC0415 -- see above

    return float(brentq(spare, exponent, 1.0, rtol=1e-6))


def _resampled(weight: NDArray, count: int, rng: np.random.Generator) -> NDArray[np.intp]:
    """Choose particles by systematic resampling."""
    marks = (rng.random() + np.arange(count)) / count * weight.sum()
    return np.minimum(np.searchsorted(np.cumsum(weight), marks), weight.size - 1)


def _moved(
    cloud: tuple[NDArray, NDArray],
    chi_square: Callable[[NDArray], NDArray],
    density: Callable[[NDArray], NDArray],
    exponent: float,
    *,
    moves: int,
    lengths: NDArray,
    rng: np.random.Generator,
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Move all particles under the tempered posterior; `lengths` is led along in place."""
    points, misfit = cloud
    proposals = _proposals(points.copy(), rng)
    log_target = density(points) - 0.5 * exponent * misfit
    for turn in range(moves):
        kind = turn % 2
        trial = points + proposals[kind](lengths[kind])
        trial_target = density(trial)
        inside = np.flatnonzero(trial_target > -np.inf)
        trial_misfit = chi_square(trial[inside])
        trial_target = trial_target[inside] - 0.5 * exponent * trial_misfit
        luck = np.log(rng.random(inside.size))
        accepted = luck < trial_target - log_target[inside]
        at = inside[accepted]
        points[at], misfit[at] = trial[at], trial_misfit[accepted]
        log_target[at] = trial_target[accepted]
        lengths[kind] *= np.exp(accepted.sum() / len(points) - ACCEPTED_SHARE)
    return points, misfit


def _proposals(
    still: NDArray, rng: np.random.Generator
) -> Sequence[Callable[[float], NDArray[np.float64]]]:
    """Give the two kinds of step, drawn from the cloud as it stood after resampling."""
    count, unknowns = still.shape
    spread_of_cloud = np.cov(still.T) + 1e-12 * np.eye(unknowns)
    root = np.linalg.cholesky(spread_of_cloud) * LENGTH / np.sqrt(unknowns)

    def gaussian(length: float) -> NDArray[np.float64]:
        return length * rng.standard_normal((count, unknowns)) @ root.T

    def difference(length: float) -> NDArray[np.float64]:
        one, other = rng.integers(0, count, size=(2, count))
        short = length * LENGTH / np.sqrt(2 * unknowns)
        scale = np.where(rng.random(count) < FULL_SHARE, 1.0, short)
        return scale[:, None] * (still[one] - still[other])

    return gaussian, difference
