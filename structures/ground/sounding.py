"""From the readings of one sounding to layers, the depth of rock with its range, or a refusal."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, NamedTuple

import numpy as np

from structures.arrays import frozen
from structures.ground.ensemble import sample_ensemble
from structures.ground.inversion import (
    LAYER_COUNTS,
    Fit,
    fewest_layers,
    invert,
)
from structures.ground.layer_prior import Prior, prior_for, rock_rule
from structures.ground.sounding_curve import (
    NOISE,
    Curve,
    SegmentFactor,
    curve,
    overlap_gaps,
    segment_factors,
)
from structures.intake.practice import HANDBOOK, Practice
from structures.intake.sounding_checks import READINGS_LEAST

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
LEAST_AB2_M: Final = 15.0  # [A] the prior ends at a third of it: 5 m, a shallow wall
SPREAD_TO_DEPTH: Final = 5.0  # handbook 2.9: the widest AB/2 over the depth looked for
LOW, MEDIAN, HIGH = 0.10, 0.50, 0.90  # handbook 4.8
# Handbook 2: an sd over half the depth is no resolved layer; a normal spread has a range of 2.56 sd.
WIDEST_RANGE: Final = 1.28  # of the median, 10 to 90 %
EQUIVALENT_SHARES: Final = (0.1, 0.3, 0.5, 0.7, 0.9)  # [A] of the depth range, one model each


@dataclass(frozen=True, slots=True)
class Layer:
    """One layer; `thickness_m` is None for the deepest."""

    thickness_m: float | None
    resistivity_ohm_m: float


class Refusal(NamedTuple):
    """Why a sounding gives no depth: a code, and a sentence with what to do."""

    code: str
    sentence: str


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
    unfit = _unfit(readings)
    if unfit is not None:
        return Interpretation(**known, refusal=unfit)
    rng = np.random.default_rng(seed)
    prior = prior or prior_for(float(readings.ab2_m.max()), rock=rock_rule(practice))
    limit = practice.sounding_chi_square
    fits = _fits(readings, limit, starts=practice.sounding_starts, rng=rng)
    fit = fewest_layers(fits, limit=limit)
    known["prior"] = prior
    if fit is None:
        return Interpretation(**known, refusal=_no_model(fits, limit))
    known |= _shown(readings, fit)
    refusal = _too_deep(float(fit.thickness_m.sum()), prior)
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
    refusal = _doubt(ensemble, fitting, prior)
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


def _unfit(readings: Curve) -> Refusal | None:
    """Say why these readings should not be read at all, if so."""
    count, widest = readings.ab2_m.size, readings.ab2_m.max()
    if count < READINGS_LEAST:
        return Refusal(
            "too-few-readings",
            f"only {count} readings, {READINGS_LEAST} are needed to read layers. "
            "Keep it as a note, or take the sounding again.",
        )
    if widest < LEAST_AB2_M:
        return Refusal(
            "spread-too-short",
            f"AB/2 stopped at {widest:g} m, {LEAST_AB2_M:g} m is the least that tells of rock. "
            f"Take it again with AB/2 {SPREAD_TO_DEPTH:g} times the depth of rock looked for.",
        )
    outside = np.flatnonzero((readings.noise < NOISE.low) | (readings.noise > NOISE.high))
    if outside.size:
        return Refusal(
            "noise-not-accepted",
            f"reading {outside[0] + 1} states a noise of {100 * readings.noise[outside[0]]:g} %, "
            f"{100 * NOISE.low:g} to {100 * NOISE.high:g} % is accepted. State the noise of the "
            "instrument, or repeat the reading.",
        )
    gap = next((gap for gap in overlap_gaps(readings) if gap.too_wide), None)
    if gap is not None:
        return Refusal(
            "segments-disagree",
            f"its segments disagree: at AB/2 {gap.ab2_m:g} m the readings with MN/2 "
            f"{gap.mn2_m[0]:g} and {gap.mn2_m[1]:g} m differ by {100 * gap.share:.0f} %, noise and "
            f"segment factor explain {100 * gap.limit_share:.0f} %. Look at the potential "
            "electrodes and repeat both readings.",
        )
    return None


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


def _no_model(fits: tuple[Fit, ...], limit: float) -> Refusal:
    best = min(fits, key=lambda fit: fit.chi_square_per_degree)
    return Refusal(
        "not-interpretable",
        f"no model of {LAYER_COUNTS[0]} to {LAYER_COUNTS[-1]} layers passes: the best, with "
        f"{best.resistivity_ohm_m.size} layers, has {best.chi_square_per_degree:.1f} chi-square per "
        f"degree of freedom, under {limit:g} is asked. If the readings were noisier than stated, "
        "state it; else look for a wrong reading, or ground that is not layered.",
    )


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


def _too_deep(shown_m: float, prior: Prior) -> Refusal | None:
    """Say that the curve points deeper than the prior: the range would be the prior's alone."""
    if shown_m <= prior.greatest_depth_m:
        return None
    return Refusal(
        "deeper-than-prior",
        f"its deepest boundary may lie at {_metres(shown_m)} m, deeper than the "
        f"{_metres(prior.greatest_depth_m)} m that the printed prior reaches. Bore, or have an "
        "engineer state another prior.",
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


def _doubt(ensemble: Ensemble, fitting: NDArray, prior: Prior) -> Refusal | None:
    """Say why the ensemble gives no depth, if so."""
    if not fitting.any():
        return Refusal(
            "outside-prior",
            "no model within the printed prior fits the readings: the ground has layers that the "
            "prior holds impossible. Bore, or have an engineer state another prior.",
        )
    rock = prior.rock
    if ensemble.rock_share < rock.share:
        return Refusal(
            "no-rock",
            f"the curve does not show rock: the deepest layer has {rock.least_ohm_m:g} ohm m and "
            f"{rock.least_ratio:g} times the layer above in {100 * ensemble.rock_share:.0f} % of the "
            f"models that fit, {100 * rock.share:.0f} % is asked. Soil may go deeper than the spread "
            "reaches, or weathered rock over sheet rock may blur the contrast. Bore, or open a pit.",
        )
    low, median, high = (ensemble.depth_quantile_m(share) for share in (LOW, MEDIAN, HIGH))
    if high - low > WIDEST_RANGE * median:
        return Refusal(
            "not-resolved",
            f"the layers are not resolved: rock may lie anywhere from {_metres(low)} to {_metres(high)} m. "
            "Bore, or measure the resistivity of the sand at an open well or pit.",
        )
    return None


def _notes(fit: Fit, range_m: tuple[float, float], widest_ab2_m: float) -> tuple[str, ...]:
    """Say what the reader of the depth should know beside it."""
    notes = []
    shown, (low, high) = float(fit.thickness_m.sum()), range_m
    if not low <= shown <= high:
        notes.append(
            f"The model with the fewest layers has its deepest boundary at {_metres(shown)} m, outside "
            f"the range {_metres(low)} to {_metres(high)} m: a thin or weathered layer may be hidden."
        )
    if high > widest_ab2_m / SPREAD_TO_DEPTH:
        notes.append(
            f"AB/2 stopped at {widest_ab2_m:g} m. It says little about rock below "
            f"{_metres(widest_ab2_m / SPREAD_TO_DEPTH)} m."
        )
    return tuple(notes)


def _metres(depth_m: float) -> str:
    """Print two figures: ranges of other seeds differ by a few parts in a hundred."""
    return f"{depth_m:.1f}" if depth_m < 10 else f"{depth_m:.0f}"
