"""After less before by plain means: pooled and unequal-variance errors, and the t interval."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from scipy.special import stdtrit

from structures.arrays import frozen

if TYPE_CHECKING:
    from numpy.typing import ArrayLike


@dataclass(frozen=True, slots=True)
class Contrast:
    """A difference of means with its standard error and degrees of freedom."""

    change_m: float
    standard_error_m: float
    degrees: float

    def interval_m(self, confidence: float) -> tuple[float, float]:
        """Give the ends of the central interval by Student's t."""
        reach_m = stdtrit(self.degrees, (1.0 + confidence) / 2.0) * self.standard_error_m
        return float(self.change_m - reach_m), float(self.change_m + reach_m)


def pooled_contrast(before_m: ArrayLike, after_m: ArrayLike) -> Contrast:
    """Mean after less mean before with the pooled standard error, n1 + n2 - 2 degrees of freedom.

    Source: handbook 10.2. Serial correlation makes the error too small.

    Raises
    ------
    ValueError
        If both sides together have fewer than three values, or one has none.
    """
    before, after = frozen(before_m), frozen(after_m)
    degrees = before.size + after.size - 2
    if degrees < 1 or not before.size or not after.size:
        raise ValueError("a difference of means wants three values, some on each side")
    squares = before.var() * before.size + after.var() * after.size
    error_m = (squares / degrees * (1.0 / before.size + 1.0 / after.size)) ** 0.5
    return Contrast(float(after.mean() - before.mean()), float(error_m), float(degrees))


def unequal_contrast(before_m: ArrayLike, after_m: ArrayLike) -> Contrast:
    """Mean after less mean before where the two sides scatter differently.

    Source: handbook 10.2 (Welch, with Satterthwaite's degrees of freedom).

    Raises
    ------
    ValueError
        If a side has fewer than two values, or neither scatters.
    """
    before, after = frozen(before_m), frozen(after_m)
    if min(before.size, after.size) < 2:
        raise ValueError("each side wants two values or more")
    one, two = before.var(ddof=1) / before.size, after.var(ddof=1) / after.size
    if one + two == 0.0:
        raise ValueError("neither side scatters")
    degrees = (one + two) ** 2 / (one**2 / (before.size - 1) + two**2 / (after.size - 1))
    return Contrast(float(after.mean() - before.mean()), float((one + two) ** 0.5), float(degrees))
