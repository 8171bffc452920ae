"""Why a sounding gives no depth of rock: each reason with what to do about it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, NamedTuple

import numpy as np

from structures.ground.inversion import LAYER_COUNTS
from structures.ground.sounding_curve import NOISE, overlap_gaps
from structures.intake.sounding_checks import READINGS_LEAST

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from structures.ground.ensemble import Ensemble
    from structures.ground.inversion import Fit
    from structures.ground.layer_prior import Prior
    from structures.ground.sounding_curve import Curve

LEAST_AB2_M: Final = 15.0  # [A] the prior ends at a third of it: 5 m, a shallow wall
SPREAD_TO_DEPTH: Final = 5.0  # handbook 2.9: the widest AB/2 over the depth looked for
LOW, MEDIAN, HIGH = 0.10, 0.50, 0.90  # handbook 4.8
# Handbook 2: an sd over half the depth is no resolved layer; a normal spread has a range of 2.56 sd.
WIDEST_RANGE: Final = 1.28  # of the median, 10 to 90 %


class Refusal(NamedTuple):
    """Why a sounding gives no depth: a code, and a sentence with what to do."""

    code: str
    sentence: str


def unfit(readings: Curve) -> Refusal | None:
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


def no_model(fits: Sequence[Fit], limit: float) -> Refusal:
    """Say that no number of layers fits the readings, and how near the best came."""
    best = min(fits, key=lambda fit: fit.chi_square_per_degree)
    return Refusal(
        "not-interpretable",
        f"no model of {LAYER_COUNTS[0]} to {LAYER_COUNTS[-1]} layers passes: the best, with "
        f"{best.resistivity_ohm_m.size} layers, has {best.chi_square_per_degree:.1f} chi-square per "
        f"degree of freedom, under {limit:g} is asked. If the readings were noisier than stated, "
        "state it; else look for a wrong reading, or ground that is not layered.",
    )


def too_deep(shown_m: float, prior: Prior) -> Refusal | None:
    """Say that the curve points deeper than the prior: the range would be the prior's alone."""
    if shown_m <= prior.greatest_depth_m:
        return None
    return Refusal(
        "deeper-than-prior",
        f"its deepest boundary may lie at {metres(shown_m)} m, deeper than the "
        f"{metres(prior.greatest_depth_m)} m that the printed prior reaches. Bore, or have an "
        "engineer state another prior.",
    )


def doubt(ensemble: Ensemble, fitting: NDArray, prior: Prior) -> Refusal | None:
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
            f"the layers are not resolved: rock may lie anywhere from {metres(low)} to {metres(high)} m. "
            "Bore, or measure the resistivity of the sand at an open well or pit.",
        )
    return None


def metres(depth_m: float) -> str:
    """Print two figures: ranges of other seeds differ by a few parts in a hundred."""
    return f"{depth_m:.1f}" if depth_m < 10 else f"{depth_m:.0f}"
