"""The rock line of a site: as an engineer settled it, or estimated from the tests with its doubt."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import ndtr

from structures.ground.gaussian import (
    NORMAL_90,
    STEADY,
    Covariance,
    Observations,
    draw_lines,
    fit_covariance,
    predict,
)
from structures.ground.rock_line import RockLine
from structures.ground.rock_tests import Gathered, gather, ground_level_m
from structures.intake.defaults import FIXED, GROUND
from structures.intake.line_checks import FOOT_ABOVE_M
from structures.intake.practice import HANDBOOK, Practice
from structures.life.cautions import caution

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from numpy.typing import NDArray

    from structures.ground.rock_line import Evidence
    from structures.ground.rock_tests import DepthReading
    from structures.intake.pack import SurveyPack
    from structures.life.cautions import Caution

# Points of the level that are printed, handbook 4.8: a tenth of the draws lies deeper than LOW.
LOW, HALF = FIXED["risk_line_percent"].value / 100, FIXED["design_line_percent"].value / 100
HIGH: Final = 1.0 - LOW
FIT_FROM: Final = 15  # observations, handbook 4.6
DEPTH_SHARE: Final = 0.25  # of the mean depth, default root of the sill, handbook 4.6
LEAST_LEVELS: Final = 2  # tests that give a level, handbook 4.7
BOUNDS_AT_MOST: Final = 30  # [A] more are thinned, one in each stretch
THINNED_TO_M: Final = 2.0  # [A] the length of such a stretch
BITES_SD: Final = 7.0  # [A] a bound higher above the line cuts off less than 1e-11 of its draws
CONTRADICTS_SD: Final = 3.0  # [A] a bound so many sd below a level found close by
NEAR_SHARE: Final = 0.25  # [A] of the range: what "close by" means
FOOT_OF: Final = {
    "hole": "the hole",
    "probe refused": "the probe",
    "probe stopped": "the probe",
    "weathered": "the hole in weathered rock",
}


def estimate_rock(
    pack: SurveyPack,
    *,
    soundings: Sequence[DepthReading] = (),
    refraction: Sequence[DepthReading] = (),
    draws: int = int(GROUND["risk_draws"].value),
    seed: int,
    practice: Practice = HANDBOOK,
) -> RockLine:
    """Give the rock line of a survey.

    Source: handbook section 4; a settled line is used as given, nothing is read in its place.

    Parameters
    ----------
    pack
        The survey.
    soundings, refraction
        What was read from its soundings and refraction lines.
    draws
        Whole lines to draw, at least 2000 for a price.
    seed
        Of the draws.
    practice
        Errors of the tests, range and least sill of the line.
    """
    gathered = gather(pack, soundings=soundings, refraction=refraction, practice=practice)
    unread = _unread(soundings, "sounding") + _unread(refraction, "refraction")
    if pack.rock_line is not None:
        return _given(pack, gathered, unread, soundings)
    places = len({one.offset_m for one in gathered.levels})
    if places < LEAST_LEVELS:
        found = f"at {places} place" if places else "nowhere"
        why = f"tests give a level of rock {found}, two places are needed."
        return RockLine(
            "none",
            [],
            [],
            evidence=gathered.evidence,
            cautions=(caution("rock-not-known", why=why), *unread),
        )
    return _estimated(pack, gathered, unread, draws=draws, rng_seed=seed, practice=practice)


def _given(
    pack: SurveyPack,
    gathered: Gathered,
    unread: tuple[Caution, ...],
    soundings: Sequence[DepthReading],
) -> RockLine:
    x = np.array([point.offset_m for point in pack.rock_line])
    z = np.array([point.level_m for point in pack.rock_line])
    above = [
        caution(
            "rock-line-above-test",
            line_m=float(np.interp(bound.offset_m, x, z)),
            offset_m=bound.offset_m,
            test=FOOT_OF[bound.kind],
            test_m=bound.level_m,
        )
        for bound in gathered.bounds
        if x[0] <= bound.offset_m <= x[-1]
        and round(float(np.interp(bound.offset_m, x, z)) - bound.level_m, 6) > FOOT_ABOVE_M
    ]
    differs = [
        found for reading in soundings if (found := _differs(pack, reading, x, z)) is not None
    ]
    return RockLine("given", x, z, evidence=gathered.evidence, cautions=(*above, *differs, *unread))


def _differs(pack: SurveyPack, reading: DepthReading, x: NDArray, z: NDArray) -> Caution | None:
    """Say where a sounding's range does not hold the settled line."""
    at = reading.offset_m
    if at is None or reading.rock_depth_m is None or not x[0] <= at <= x[-1]:
        return None
    line_m = ground_level_m(pack, at) - float(np.interp(at, x, z))
    if reading.rock_depth_low_m <= line_m <= reading.rock_depth_high_m:
        return None
    return caution(
        "sounding-differs",
        label=reading.label,
        depth_m=reading.rock_depth_m,
        low_m=reading.rock_depth_low_m,
        high_m=reading.rock_depth_high_m,
        line_m=line_m,
    )


def _estimated(
    pack: SurveyPack,
    gathered: Gathered,
    unread: tuple[Caution, ...],
    *,
    draws: int,
    rng_seed: int,
    practice: Practice,
) -> RockLine:
    levels = gathered.levels
    seen = Observations(
        [one.offset_m for one in levels],
        [one.level_m for one in levels],
        [one.sd_m for one in levels],
    )
    covariance, spread = _covariance(pack, seen, practice)
    reach = float(seen.offset_m.min()), float(seen.offset_m.max())
    inside = [one for one in gathered.bounds if reach[0] <= one.offset_m <= reach[1]]
    bounds, thinned = _thinned(_biting(inside, seen, covariance))
    x = _offsets(pack, gathered, reach)
    ground = np.array([ground_level_m(pack, at) for at in x])

    # Bounded places come first in one joint prediction; then back to the order of the line.
    held = np.array([one.offset_m for one in bounds])
    most = np.array([one.level_m for one in bounds])
    bounded = np.isin(x, held)
    order = np.concatenate([np.flatnonzero(bounded), np.flatnonzero(~bounded)])
    prediction = predict(seen, covariance, x[order])
    lines = draw_lines(
        prediction,
        most,
        draws=draws,
        steady_m2=STEADY * covariance.sill_m2,
        rng=np.random.default_rng(rng_seed),
    )
    back = np.argsort(order)
    lines = np.minimum(lines[:, back], ground)
    mean, sd = prediction.mean_m[back], prediction.sd_m[back]
    if not bounds:
        sd, (low, half, high) = _cut_sd(mean, sd, ground), _cut_points(mean, sd, ground)
    else:
        sd, (low, half, high) = lines.std(axis=0), np.quantile(lines, (LOW, HALF, HIGH), axis=0)
    return RockLine(
        "estimated",
        x,
        half,
        sd_m=sd,
        low_m=low,
        high_m=high,
        draws_m=lines,
        seed=rng_seed,
        evidence=gathered.evidence,
        cautions=(
            *_untied(gathered),
            *_far_apart(levels, covariance),
            *_contradictions(bounds, levels, covariance),
            *thinned,
            *spread,
            *unread,
        ),
    )


def _covariance(
    pack: SurveyPack, seen: Observations, practice: Practice
) -> tuple[Covariance, tuple[Caution, ...]]:
    """Give the field's covariance: fitted from 15 observations on, else that of the practice."""
    sill, reach = GROUND["rock_least_sill_m2"], GROUND["rock_range_m"]
    count = seen.offset_m.size
    if count >= FIT_FROM:
        code = "rock-spread-fitted"
        covariance = fit_covariance(
            seen, sill_m2=(sill.low, sill.high), range_m=(reach.low, reach.high)
        )
    else:
        code = "rock-default-spread"
        ground = np.array([ground_level_m(pack, at) for at in seen.offset_m])
        depth = float(np.mean(ground - seen.level_m))
        covariance = Covariance(
            max((DEPTH_SHARE * depth) ** 2, practice.rock_least_sill_m2), practice.rock_range_m
        )
    said = caution(code, range_m=covariance.range_m, sill_m2=covariance.sill_m2, count=count)
    return covariance, (said,)


def _biting(
    bounds: Sequence[Evidence], seen: Observations, covariance: Covariance
) -> list[Evidence]:
    """Keep the lowest bound of each place, and of these what reaches down to the line at all."""
    lowest = _lowest_by(bounds, lambda one: one.offset_m)
    found = predict(seen, covariance, [one.offset_m for one in lowest])
    highest = found.mean_m + BITES_SD * found.sd_m
    return [one for one, most in zip(lowest, highest, strict=True) if one.level_m < most]


def _thinned(bounds: list[Evidence]) -> tuple[list[Evidence], tuple[Caution, ...]]:
    """Of very many bounds keep the lowest in each 2 m."""
    if len(bounds) <= BOUNDS_AT_MOST:
        return bounds, ()
    kept = _lowest_by(bounds, lambda one: one.offset_m // THINNED_TO_M)
    return kept, (caution("rock-bounds-thinned", count=len(bounds) - len(kept), total=len(bounds)),)


def _lowest_by(bounds: Sequence[Evidence], place: Callable[[Evidence], float]) -> list[Evidence]:
    lowest: dict[float, Evidence] = {}
    for one in bounds:
        kept = lowest.get(place(one))
        if kept is None or one.level_m < kept.level_m:
            lowest[place(one)] = one
    return sorted(lowest.values(), key=lambda one: one.offset_m)


def _offsets(
    pack: SurveyPack, gathered: Gathered, reach: tuple[float, float]
) -> NDArray[np.float64]:
    """Every ground point, toe, test and whole metre within the reach."""
    first, last = reach
    named = [point.offset_m for point in pack.ground]
    named += [pack.toes.left_m, pack.toes.right_m]
    named += [one.offset_m for one in gathered.evidence]
    metres = np.arange(np.ceil(first), np.floor(last) + 1.0)
    x = np.unique(np.concatenate([named, metres]))
    return x[(x >= first) & (x <= last)]


def _cut_points(mean: NDArray, sd: NDArray, ground: NDArray) -> list[NDArray]:
    """Give 10, 50 and 90 % points of the normal law, no higher than the ground."""
    return [np.minimum(mean + z * sd, ground) for z in (-NORMAL_90, 0.0, NORMAL_90)]


def _cut_sd(mean: NDArray, sd: NDArray, ground: NDArray) -> NDArray[np.float64]:
    """Give the standard deviation of min(z, ground) for a normal z.

    Source: moments of the censored normal law, e.g. the Tobit model, written from the mean.
    """
    room = (ground - mean) / sd
    density = np.exp(-0.5 * room**2) / np.sqrt(2.0 * np.pi)
    beyond = ndtr(-room)
    first = room * beyond - density
    second = 1.0 - beyond - room * density + room**2 * beyond
    # Where the mean stands far above the ground the two are equal but for rounding.
    return sd * np.sqrt(np.maximum(second - first**2, 0.0))


def _contradictions(
    bounds: Sequence[Evidence], levels: Sequence[Evidence], covariance: Covariance
) -> tuple[Caution, ...]:
    """Name the bounds that lie far below a level that was found close by."""
    said = []
    for bound in bounds:
        for level in levels:
            apart = abs(bound.offset_m - level.offset_m)
            if apart > NEAR_SHARE * covariance.range_m:
                continue
            fall = 2.0 * covariance.sill_m2 * (1.0 - np.exp(-apart / covariance.range_m))
            if level.level_m - bound.level_m > CONTRADICTS_SD * np.hypot(level.sd_m, fall**0.5):
                what = (
                    f"{FOOT_OF[bound.kind]} went down to {bound.level_m:.2f} m, the {level.kind} at "
                    f"{level.offset_m:.2f} m found rock at {level.level_m:.2f} m."
                )
                where = f"{bound.offset_m:.2f} m"
                said.append(caution("rock-bounds-contradict", where=where, what=what))
    return tuple(said)


def _far_apart(levels: Sequence[Evidence], covariance: Covariance) -> tuple[Caution, ...]:
    """Name the stretches so long that the levels at their ends no longer tell of the middle."""
    return tuple(
        caution("rock-levels-far-apart", from_m=left.offset_m, to_m=right.offset_m)
        for left, right in pairwise(levels)
        if right.offset_m - left.offset_m > covariance.range_m
    )


def _untied(gathered: Gathered) -> tuple[Caution, ...]:
    if gathered.tied or not gathered.by_geophysics:
        return ()
    at = ", ".join(f"{one.offset_m:g}" for one in gathered.by_geophysics)
    return (caution("rock-untied", where=f" at {at} m"),)


def _unread(readings: Sequence[DepthReading], kind: str) -> tuple[Caution, ...]:
    return tuple(
        caution(f"{kind}-not-interpretable", label=reading.label, why=reading.refusal.sentence)
        for reading in readings
        if reading.rock_depth_m is None
    )
