"""The smallest effect that could have been seen, and what more years of readings would let see."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import stdtrit

from structures.units import DAYS_PER_YEAR
from structures.water.serial import SerialDesign

if TYPE_CHECKING:
    from numpy.typing import NDArray

FOUND_SHARE: Final = 0.80  # an effect of this size is found 4 times in 5 (handbook 10.10)


def smallest_seen_m(half_width_m: float, degrees: float, confidence: float) -> float:
    """Smallest effect that would have been found 4 times in 5.

    Source: handbook 10.10: (t of the interval + t of 0.80) standard errors, 2.49 for many degrees
    of freedom at 90 %, 2.72 at 9.

    Parameters
    ----------
    half_width_m
        Half the interval; over its t quantile it is the standard error.
    """
    of_interval = stdtrit(degrees, (1.0 + confidence) / 2.0)
    return float(half_width_m * (1.0 + stdtrit(degrees, FOUND_SHARE) / of_interval))


def widening(
    design: SerialDesign, days: NDArray[np.float64], values: NDArray[np.float64], *, years: int
) -> float:
    """Error of the step with more years of readings, as a share of the error now.

    The after side goes on at its own median gap, each pair with the columns of the pair that stood
    nearest to its time of the year in the last year; scatter and weights of the correlations stay
    those of the readings.

    Parameters
    ----------
    design
        That of the readings; column 1 is the step.
    days
        Day numbers of the pairs, shape (n,).
    years
        How many more.
    """
    gap = float(np.median(np.diff(days)))
    more = days[-1] + np.arange(gap, years * DAYS_PER_YEAR, gap)
    last = np.flatnonzero(days > days[-1] - DAYS_PER_YEAR)
    apart = np.abs(
        (more[:, None] - days[None, last] + DAYS_PER_YEAR / 2) % DAYS_PER_YEAR - DAYS_PER_YEAR / 2
    )
    rows = design.columns[last[np.argmin(apart, axis=1)]]
    longer = np.concatenate([days, more])
    then = SerialDesign((longer - longer[0]) / gap, np.concatenate([design.columns, rows]))
    weight = design.weigh(values).weight
    now, later = (weight @ one.inverse[:, 1, 1] for one in (design, then))
    return float((later / now) ** 0.5)
