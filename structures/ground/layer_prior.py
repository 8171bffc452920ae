"""What is held likely of layers before a sounding is looked at; it is printed with the result."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.intake.practice import HANDBOOK, Practice

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

DEEPEST_SHARE_OF_AB2: Final = 1 / 3  # handbook 2.7: boundaries to a third of the widest AB/2
QUADRATURE: Final = 20_000  # midpoints of the one-dimensional integral in `base_rock_share`
BATCH: Final = 4  # draws offered for one wanted; most thicknesses drawn are not too deep


@dataclass(frozen=True, slots=True)
class RockRule:
    """When the deepest layer of a model is read as rock (handbook 2.10)."""

    least_ohm_m: float = HANDBOOK.rock_least_ohm_m
    least_ratio: float = HANDBOOK.rock_least_ratio
    share: float = HANDBOOK.rock_share


def rock_rule(practice: Practice) -> RockRule:
    """Give the rule of a practice."""
    return RockRule(practice.rock_least_ohm_m, practice.rock_least_ratio, practice.rock_share)


@dataclass(frozen=True, slots=True)
class SaturatedSand:
    """Resistivity of the saturated sand, measured at an open well or pit nearby (handbook 2.8)."""

    resistivity_ohm_m: float
    log_sd: float = 0.10  # [A] a tenth: the water of the pit is not that of the whole bed


@dataclass(frozen=True, slots=True)
class Prior:
    """Prior of layered models (handbook 2.7); ranges are uniform in the logarithm.

    `rock_share` is the share of the prior in which the deepest layer passes `rock`.
    """

    deepest_boundary_m: tuple[float, float]
    layer_share: tuple[tuple[int, float], ...] = ((2, 0.25), (3, 0.60), (4, 0.15))
    soil_ohm_m: tuple[float, float] = (20.0, 1500.0)
    deepest_ohm_m: tuple[float, float] = (50.0, 6000.0)
    first_thickness_m: tuple[float, float] = (0.5, 6.0)
    only_thickness_m: tuple[float, float] = (0.5, 35.0)
    other_thickness_m: tuple[float, float] = (1.0, 25.0)
    rock: RockRule = RockRule()
    rock_share: float = 0.85
    saturated_sand: SaturatedSand | None = None

    def __post_init__(self) -> None:
        low, high = self.deepest_boundary_m
        thickest = max(number for number, _ in self.layer_share) - 2
        least = self.first_thickness_m[0] + thickest * self.other_thickness_m[0]
        if not 0 < low < high or high <= least:
            raise ValueError(
                f"deepest boundary {low:g} to {high:g} m leaves no room for the layers"
            )

    def thickness_ranges_m(self, layers: int) -> tuple[tuple[float, float], ...]:
        """Range of the thickness of each layer but the deepest, from the top."""
        if layers == 2:
            return (self.only_thickness_m,)
        return (self.first_thickness_m, *[self.other_thickness_m] * (layers - 2))

    @property
    def greatest_depth_m(self) -> float:
        """The deepest that a boundary can lie in any model of the prior, m."""
        reach = max(
            sum(thick for _, thick in self.thickness_ranges_m(layers))
            for layers, _ in self.layer_share
        )
        return min(self.deepest_boundary_m[1], reach)

    def sentences(self) -> tuple[str, ...]:
        """Say the prior in words, for the printed result."""
        layers = ", ".join(f"{number} layers {share:.2f}" for number, share in self.layer_share)
        soil, deepest = _span(self.soil_ohm_m), _span(self.deepest_ohm_m)
        first, only = _span(self.first_thickness_m), _span(self.only_thickness_m)
        other, depth = _span(self.other_thickness_m), _span(self.deepest_boundary_m)
        hard, ratio = f"{self.rock.least_ohm_m:g} ohm m", f"{self.rock.least_ratio:g} times"
        lines = [
            f"Number of layers: {layers}.",
            f"Resistivity, uniform in the logarithm: soil {soil}, deepest layer {deepest} ohm m.",
            f"Thickness, uniform in the logarithm: first layer {first} m, others {other} m.",
            f"Where there are only two layers the first has {only} m.",
            f"Depth of the deepest boundary: {depth} m.",
            f"Rock ({hard}, {ratio} the layer above) in {100 * self.rock_share:.0f} % of the prior.",
        ]
        if self.saturated_sand is not None:
            sand, sd = self.saturated_sand.resistivity_ohm_m, self.saturated_sand.log_sd
            lines.append(f"Least resistive soil: {sand:g} ohm m within {100 * sd:g} %, measured.")
        return tuple(lines)


def _span(ends: tuple[float, float]) -> str:
    return f"{ends[0]:.4g} to {ends[1]:.4g}"


def prior_for(
    widest_ab2_m: float,
    *,
    rock: RockRule | None = None,
    saturated_sand: SaturatedSand | None = None,
) -> Prior:
    """Give the default prior for a sounding whose widest AB/2 is given, m (handbook 2.7)."""
    return Prior(
        (1.0, widest_ab2_m * DEEPEST_SHARE_OF_AB2),
        rock=rock or RockRule(),
        saturated_sand=saturated_sand,
    )


def deepest_boundary_m(unknowns: NDArray, layers: int) -> NDArray[np.float64]:
    """Depth of the deepest boundary of models given as ln parameters, m, shape (models,)."""
    return np.exp(unknowns[:, layers:]).sum(axis=1)


def shows_rock(prior: Prior, unknowns: NDArray, layers: int) -> NDArray[np.bool_]:
    """Say of each model, given as ln parameters, whether its deepest layer is read as rock.

    Source: handbook 2.10.
    """
    above, deepest = unknowns[:, layers - 2], unknowns[:, layers - 1]
    hard = deepest >= np.log(prior.rock.least_ohm_m)
    return hard & (deepest >= above + np.log(prior.rock.least_ratio))


@lru_cache(maxsize=64)
def base_rock_share(prior: Prior) -> float:
    """Share of rock if all resistivities were merely log-uniform, from 0 to 1.

    Source: integral over the layer above of the share of the deepest layer's range that passes.
    """
    low, high = np.log(prior.soil_ohm_m)
    above = low + (high - low) * (np.arange(QUADRATURE) + 0.5) / QUADRATURE
    floor, ceiling = np.log(prior.deepest_ohm_m)
    limit = np.maximum(np.log(prior.rock.least_ohm_m), above + np.log(prior.rock.least_ratio))
    return float(np.mean(np.clip((ceiling - limit) / (ceiling - floor), 0.0, 1.0)))


def draw_models(
    prior: Prior, layers: int, count: int, rng: np.random.Generator
) -> NDArray[np.float64]:
    """Draw models as ln (resistivities, thicknesses), shape (count, 2 layers - 1).

    Source: rejection from the plain ranges; rock and not rock are drawn apart, in the stated share.

    Raises
    ------
    ValueError
        If rock, or its absence, is impossible within the ranges.
    """
    base = base_rock_share(prior)
    if not 0 < base < 1:
        raise ValueError("the ranges of resistivity leave no choice between rock and no rock")
    ranges = np.log(prior.thickness_ranges_m(layers))
    thickness = _kept(
        lambda size: rng.uniform(ranges[:, 0], ranges[:, 1], size=(size, layers - 1)),
        lambda drawn: _within(np.exp(drawn).sum(axis=1), prior.deepest_boundary_m),
        count,
    )
    rock = rng.random(count) < prior.rock_share
    low = np.log([*[prior.soil_ohm_m[0]] * (layers - 1), prior.deepest_ohm_m[0]])
    high = np.log([*[prior.soil_ohm_m[1]] * (layers - 1), prior.deepest_ohm_m[1]])
    resistivity = np.empty((count, layers))
    for wanted in (True, False):
        places = np.flatnonzero(rock == wanted)
        resistivity[places] = _kept(
            lambda size: rng.uniform(low, high, size=(size, layers)),
            lambda drawn, wanted=wanted: shows_rock(prior, drawn, layers) == wanted,
            places.size,
        )
    return np.concatenate([resistivity, thickness], axis=1)


def log_density(prior: Prior, layers: int, unknowns: NDArray) -> NDArray[np.float64]:
    """Log prior density of models given as ln parameters, up to a constant, shape (models,).

    Minus infinity outside the ranges.
    """
    soil, deepest = np.log(prior.soil_ohm_m), np.log(prior.deepest_ohm_m)
    inside = _within(unknowns[:, : layers - 1].T, soil).all(axis=0)
    inside &= _within(unknowns[:, layers - 1], deepest)
    for place, ends in enumerate(np.log(prior.thickness_ranges_m(layers))):
        inside &= _within(unknowns[:, layers + place], ends)
    inside &= _within(deepest_boundary_m(unknowns, layers), prior.deepest_boundary_m)
    base = base_rock_share(prior)
    with_rock = np.log(prior.rock_share / base)
    without = np.log((1 - prior.rock_share) / (1 - base))
    density = np.where(shows_rock(prior, unknowns, layers), with_rock, without)
    return np.where(inside, density, -np.inf)


def _within(values: NDArray, ends: NDArray | tuple[float, float]) -> NDArray[np.bool_]:
    return (values >= ends[0]) & (values <= ends[1])


def _kept(
    offer: Callable[[int], NDArray], keep: Callable[[NDArray], NDArray], count: int
) -> NDArray[np.float64]:
    """Offer draws until as many are kept as are wanted."""
    kept: list[NDArray] = []
    missing = count
    while missing > 0:
        drawn = offer(BATCH * missing)
        drawn = drawn[keep(drawn)][:missing]
        kept.append(drawn)
        missing -= len(drawn)
    return np.concatenate(kept) if kept else offer(0)
