"""A sounding's readings made ready to be fitted: noise, MN segments and their common factors.

A step that all readings of one MN share is a near-electrode effect. Each segment beyond the first
has a free factor with a narrow prior; the factor is folded into the covariance of the readings, so
that a fit needs no further unknowns, and is worked out again for the model that is shown.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations, pairwise
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.intake.defaults import GROUND

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.intake.pack import Sounding

NOISE: Final = GROUND["sounding_noise"]
SEGMENT_SD: Final = GROUND["sounding_segment_sd"]
OVERLAP_SDS: Final = 3.0  # [A] a repeat at the same AB/2 that is further off than this is not noise


@dataclass(frozen=True, slots=True)
class SegmentFactor:
    """By how much the readings of one MN segment stand above the model, with its log sd."""

    mn2_m: float
    factor: float
    log_sd: float


@dataclass(frozen=True, slots=True)
class Gap:
    """Two readings at the same AB/2 with another MN that differ; shares are of the lower one."""

    ab2_m: float
    mn2_m: tuple[float, float]
    share: float
    limit_share: float

    @property
    def too_wide(self) -> bool:
        """Whether noise and segment factors cannot explain the difference."""
        return self.share > self.limit_share


@dataclass(frozen=True, eq=False, slots=True)
class Curve:
    """Readings of one sounding, arrays of shape (readings,).

    `noise` is the sd of the natural logarithm of a reading, `segment` the number of its MN
    segment (from 0), `whitening` the inverse Cholesky factor of the covariance, shape (readings,
    readings).
    """

    ab2_m: NDArray[np.float64]
    mn2_m: NDArray[np.float64]
    apparent_resistivity_ohm_m: NDArray[np.float64]
    noise: NDArray[np.float64]
    segment: tuple[int, ...]
    segment_sd: float
    whitening: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in ("ab2_m", "mn2_m", "apparent_resistivity_ohm_m", "noise"):
            object.__setattr__(self, name, frozen(getattr(self, name)))
        object.__setattr__(self, "whitening", frozen(self.whitening, ndim=2))

    @property
    def segment_count(self) -> int:
        """How many MN segments there are."""
        return max(self.segment) + 1


def curve(
    sounding: Sounding,
    *,
    noise: float | None = None,
    unstated_noise: float = NOISE.value,
    segment_sd: float = SEGMENT_SD.value,
) -> Curve:
    """Make a sounding ready to be fitted.

    Source: handbook 2.6. Segments are runs of equal MN/2; in a Wenner spread MN grows with AB, so
    its readings are one segment.

    Parameters
    ----------
    sounding
        As the pack gives it, readings in the order of the sheet.
    noise
        One noise (log sd) for all readings in place of the noise stated with each.
    unstated_noise
        Noise (log sd) of a reading that states none.
    segment_sd
        Log sd of the free factor of each segment beyond the first.

    Raises
    ------
    ValueError
        If there is no reading, or a reading, a noise or `segment_sd` is not positive.
    """
    readings = sounding.readings
    if not readings:
        raise ValueError("a curve needs readings")
    apparent = np.array([reading.apparent_resistivity_ohm_m for reading in readings])
    log_sd = np.array(
        [reading.log_sd(unstated_noise) if noise is None else noise for reading in readings]
    )
    if not ((apparent > 0).all() and (log_sd > 0).all() and segment_sd > 0):
        raise ValueError("readings, their noise and the sd of a segment must be positive")
    mn2 = [reading.mn2_m for reading in readings]
    steps = [0 if sounding.array == "wenner" or a == b else 1 for a, b in pairwise(mn2)]
    segment = np.concatenate([[0], np.cumsum(steps, dtype=int)])
    shared = (segment[:, None] == segment) & (segment > 0)
    covariance = np.diag(log_sd**2) + segment_sd**2 * shared
    return Curve(
        np.array([reading.ab2_m for reading in readings]),
        np.array(mn2),
        apparent,
        log_sd,
        tuple(int(number) for number in segment),
        segment_sd,
        np.linalg.inv(np.linalg.cholesky(covariance)),
    )


def whitened_residual(readings: Curve, computed_ohm_m: NDArray) -> NDArray[np.float64]:
    """Log residuals in units of their sd, segment factors folded in, shape (models, readings).

    Source: handbook 2.6, 2.7; the sum of their squares is the chi-square of a model, the best
    segment factors and the prior of these included.

    Parameters
    ----------
    readings
        From `curve`.
    computed_ohm_m
        Apparent resistivity of each model, ohm m, shape (models, readings).
    """
    residual = np.log(readings.apparent_resistivity_ohm_m) - np.log(computed_ohm_m)
    return residual @ readings.whitening.T


def segment_factors(readings: Curve, computed_ohm_m: NDArray) -> tuple[SegmentFactor, ...]:
    """Factor of each MN segment over a model; the first segment is the reference, exactly 1.

    Source: handbook 2.6, normal mean with a normal prior of mean 0.

    Parameters
    ----------
    readings
        From `curve`.
    computed_ohm_m
        Apparent resistivity of the model, ohm m, shape (readings,).
    """
    residual = np.log(readings.apparent_resistivity_ohm_m / computed_ohm_m)
    factors = [SegmentFactor(float(readings.mn2_m[0]), 1.0, 0.0)]
    for number in range(1, readings.segment_count):
        inside = np.array(readings.segment) == number
        weight = readings.noise[inside] ** -2
        precision = weight.sum() + readings.segment_sd**-2
        log_factor = weight @ residual[inside] / precision
        factors.append(
            SegmentFactor(
                float(readings.mn2_m[inside][0]), float(np.exp(log_factor)), float(precision**-0.5)
            )
        )
    return tuple(factors)


def overlap_gaps(readings: Curve) -> tuple[Gap, ...]:
    """Differences of repeats at the same AB/2 in two segments, the widest first.

    Source: handbook 2.6; the limit is OVERLAP_SDS standard deviations of what the noise of both
    readings and the free factors of their segments explain.
    """
    gaps = []
    for i, j in combinations(range(readings.ab2_m.size), 2):
        if readings.ab2_m[i] == readings.ab2_m[j] and readings.segment[i] != readings.segment[j]:
            free = sum(readings.segment[k] > 0 for k in (i, j))
            sd = np.sqrt(
                readings.noise[i] ** 2 + readings.noise[j] ** 2 + free * readings.segment_sd**2
            )
            pair = readings.apparent_resistivity_ohm_m[[i, j]]
            gaps.append(
                Gap(
                    float(readings.ab2_m[i]),
                    (float(readings.mn2_m[i]), float(readings.mn2_m[j])),
                    float(pair.max() / pair.min() - 1),
                    float(np.exp(OVERLAP_SDS * sd) - 1),
                )
            )
    return tuple(sorted(gaps, key=lambda gap: gap.share, reverse=True))
