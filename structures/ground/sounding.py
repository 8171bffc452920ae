"""From the readings of one sounding to layers, the depth of rock with its range, or a refusal."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.ground.ensemble import sample_ensemble
from structures.ground.inversion import LAYER_COUNTS, Fit, fewest_layers, invert
from structures.ground.layer_prior import Prior, prior_for, rock_rule
from structures.ground.sounding_curve import (
    NOISE,
    Curve,
    SegmentFactor,
    curve,
    segment_factors,
)
from structures.ground.sounding_refusals import (
    HIGH,
    LOW,
    MEDIAN,
    SPREAD_TO_DEPTH,
    Refusal,
    doubt,
    metres,
    no_model,
    too_deep,
    unfit,
)
from structures.intake.practice import HANDBOOK, Practice

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.ground.ensemble import Cloud, Ensemble
    from structures.intake.pack import Sounding

METHOD: Final = (
    "Layers: least squares on logarithms with the MN that was recorded, fewest layers that pass. "
    "Depth: tempered particle sampler, 2 to 4 layers averaged by evidence under the printed prior. "
    "Version 1."
)
SEED: Final = 1  # [A] stated with every result
EQUIVALENT_SHARES: Final = (0.1, 0.3, 0.5, 0.7, 0.9)  # [A] of the depth range, one model each


@dataclass(frozen=True, slots=True)
class Layer:
    """One layer; `thickness_m` is None for the deepest."""

    thickness_m: float | None
    resistivity_ohm_m: float


@dataclass(frozen=True, eq=False, slots=True)
class Interpretation:
    """What one sounding says.

    `layers` is the model with the fewest layers that passes, empty where none was looked for or
    none passes; `computed_ohm_m` its readings, segment factors included, shape (readings,);
    `covariance` that of its (ln resistivities, ln thicknesses). Depths are those of the deepest
    boundary in the ensemble: median, 10 % point (shallow), 90 % point (deep), sd; all None where
    `refusal` says why. `equivalent` are other models that fit within the noise, shallow to deep.
    """

    offset_m: float | None
    label: str
    seed: int
    noise: NDArray[np.float64]
    prior: Prior | None = None
    layers: tuple[Layer, ...] = ()
    covariance: NDArray[np.float64] | None = None
    chi_square_per_degree: float | None = None
    misfit_percent: float | None = None
    computed_ohm_m: NDArray[np.float64] | None = None
    segment_factors: tuple[SegmentFactor, ...] = ()
    rock_depth_m: float | None = None
    rock_depth_low_m: float | None = None
    rock_depth_high_m: float | None = None
    rock_depth_sd_m: float | None = None
    rock_share: float | None = None
    layer_weight: tuple[tuple[int, float], ...] = ()
    equivalent: tuple[tuple[Layer, ...], ...] = ()
    refusal: Refusal | None = None
    notes: tuple[str, ...] = ()
    method: str = METHOD

    def __post_init__(self) -> None:
        for name, ndim in (("noise", 1), ("computed_ohm_m", 1), ("covariance", 2)):
            values = getattr(self, name)
            if values is not None:
                object.__setattr__(self, name, frozen(values, ndim=ndim))
        if (self.refusal is None) != (self.rock_depth_m is not None):
            raise ValueError("a sounding gives a depth or a refusal, not both and not neither")


def interpret(
    sounding: Sounding,
    *,
    practice: Practice = HANDBOOK,
    noise: float | None = None,
    prior: Prior | None = None,
    seed: int = SEED,
) -> Interpretation:
    """Interpret one sounding.

    Source: handbook 2.6, 2.7, 2.8, 2.10.

    Parameters
    ----------
    sounding
        Readings with the MN that was recorded, in the order of the sheet.
    practice
        Noise of a reading that states none, log sd of the free factor of each MN segment beyond
        the first, starts of each fit, chi-square per degree of freedom that a model must stay
        under, and what counts as rock in which share of the ensemble.
    noise
        One noise (log sd, 0.01 to 0.10) for all readings in place of the one stated with each.
    prior
        In place of the handbook's for the widest AB/2; may carry a measured resistivity of the
        saturated sand.
    seed
        Of the starts and the sampler; the same seed gives the same digits.

    Raises
    ------
    ValueError
        If the noise lies outside its accepted range, or MN/2 does not lie under AB/2.
    """
    if noise is not None and not NOISE.low <= noise <= NOISE.high:
        raise ValueError(f"{NOISE.words}: {noise:g}, accepted {NOISE.low:g} to {NOISE.high:g}")
    readings = curve(
        sounding,
        noise=noise,
        unstated_noise=practice.sounding_noise,
        segment_sd=practice.sounding_segment_sd,
    )
    known = {
        "offset_m": sounding.offset_m,
        "label": sounding.label,
        "seed": seed,
        "noise": readings.noise,
    }
    refusal = unfit(readings)
    if refusal is not None:
        return Interpretation(**known, refusal=refusal)
    rng = np.random.default_rng(seed)
    prior = prior or prior_for(float(readings.ab2_m.max()), rock=rock_rule(practice))
    limit = practice.sounding_chi_square
    fits = _fits(readings, limit, starts=practice.sounding_starts, rng=rng)
    fit = fewest_layers(fits, limit=limit)
    known["prior"] = prior
    if fit is None:
        return Interpretation(**known, refusal=no_model(fits, limit))
    known |= _shown(readings, fit)
    refusal = too_deep(float(fit.thickness_m.sum()), prior)
    if refusal is not None:
        return Interpretation(**known, refusal=refusal)
    floors = {one.resistivity_ohm_m.size: one.chi_square for one in fits}
    ensemble = sample_ensemble(readings, prior, rng=rng, floors=floors)
    fitting = _fitting(ensemble, readings, limit)
    known |= {
        "rock_share": ensemble.rock_share,
        "layer_weight": ensemble.layer_weight,
        "equivalent": _equivalent(ensemble, fitting),
    }
    refusal = doubt(ensemble, fitting, prior)
    if refusal is not None:
        return Interpretation(**known, refusal=refusal)
    low, median, high = (ensemble.depth_quantile_m(share) for share in (LOW, MEDIAN, HIGH))
    return Interpretation(
        **known,
        rock_depth_m=median,
        rock_depth_low_m=low,
        rock_depth_high_m=high,
        rock_depth_sd_m=ensemble.depth_sd_m,
        notes=_notes(fit, (low, high), float(readings.ab2_m.max())),
    )


def _fits(
    readings: Curve, limit: float, *, starts: int, rng: np.random.Generator
) -> tuple[Fit, ...]:
    """Fit 2, 3 and 4 layers, and stop at the first that passes."""
    fits: list[Fit] = []
    for layers in LAYER_COUNTS:
        fits.append(invert(readings, layers, rng=rng, starts=starts))
        if fits[-1].chi_square_per_degree < limit:
            break
    return tuple(fits)


def _shown(readings: Curve, fit: Fit) -> dict[str, object]:
    """Give what is printed of the model with the fewest layers."""
    factors = segment_factors(readings, fit.computed_ohm_m)
    computed = fit.computed_ohm_m * np.array([factors[k].factor for k in readings.segment])
    misfit = np.log(readings.apparent_resistivity_ohm_m / computed)
    return {
        "layers": _layers(fit.resistivity_ohm_m, fit.thickness_m),
        "covariance": fit.covariance,
        "chi_square_per_degree": fit.chi_square_per_degree,
        "misfit_percent": float(100 * np.sqrt(np.mean(misfit**2))),
        "computed_ohm_m": computed,
        "segment_factors": factors,
    }


def _layers(resistivity_ohm_m: NDArray, thickness_m: NDArray) -> tuple[Layer, ...]:
    thicknesses = [*(float(thickness) for thickness in thickness_m), None]
    return tuple(
        Layer(thickness, float(resistivity))
        for thickness, resistivity in zip(thicknesses, resistivity_ohm_m, strict=True)
    )


def _fitting(ensemble: Ensemble, readings: Curve, limit: float) -> NDArray[np.bool_]:
    """Say of each member whether it fits within the noise, by the same limit as a fit."""
    return np.concatenate([_within_noise(cloud, readings, limit) for cloud in ensemble.clouds])


def _within_noise(cloud: Cloud, readings: Curve, limit: float) -> NDArray[np.bool_]:
    degrees = readings.ab2_m.size - cloud.unknowns.shape[1]
    return cloud.chi_square < limit * degrees


def _equivalent(ensemble: Ensemble, fitting: NDArray) -> tuple[tuple[Layer, ...], ...]:
    """Choose members that fit within the noise, one at each share of their depth range."""
    places = np.flatnonzero(fitting & (ensemble.weight > 0))
    if not places.size:
        return ()
    places = places[np.argsort(ensemble.depth_m[places])]
    reached = np.cumsum(ensemble.weight[places])
    chosen = places[np.searchsorted(reached, np.array(EQUIVALENT_SHARES) * reached[-1])]
    return tuple(_member(ensemble, int(place)) for place in chosen)


def _member(ensemble: Ensemble, place: int) -> tuple[Layer, ...]:
    for cloud in ensemble.clouds:
        if place < len(cloud.unknowns):
            values = np.exp(cloud.unknowns[place])
            return _layers(values[: cloud.layers], values[cloud.layers :])
        place -= len(cloud.unknowns)
    raise ValueError("no such member")


def _notes(fit: Fit, range_m: tuple[float, float], widest_ab2_m: float) -> tuple[str, ...]:
    """Say what the reader of the depth should know beside it."""
    notes = []
    shown, (low, high) = float(fit.thickness_m.sum()), range_m
    if not low <= shown <= high:
        notes.append(
            f"The model with the fewest layers has its deepest boundary at {metres(shown)} m, outside "
            f"the range {metres(low)} to {metres(high)} m: a thin or weathered layer may be hidden."
        )
    if high > widest_ab2_m / SPREAD_TO_DEPTH:
        notes.append(
            f"AB/2 stopped at {widest_ab2_m:g} m. It says little about rock below "
            f"{metres(widest_ab2_m / SPREAD_TO_DEPTH)} m."
        )
    return tuple(notes)
