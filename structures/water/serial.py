"""A step in a series whose errors hang together: the reported interval of handbook 10.5.

The error of one date is correlated with that of another by coefficient^(time apart). No single
coefficient is picked: each of a grid has its say by its restricted likelihood.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import stdtr

from structures.arrays import frozen, rising

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

COEFFICIENTS: Final = np.arange(96) / 100.0  # handbook 10.5: 0.00 (0.01) 0.95
COEFFICIENTS.setflags(write=False)
HALVINGS: Final = 60  # of a bracket a hundred errors wide: far below a micrometre
BRACKET_ERRORS: Final = 100.0  # a t distribution with 3 degrees has 1e-6 beyond


@dataclass(frozen=True, slots=True, eq=False)
class Mixture:
    """A weighted sum of Student t distributions with the same degrees of freedom; shapes (k,)."""

    weight: NDArray[np.float64]
    centre: NDArray[np.float64]
    scale: NDArray[np.float64]
    degrees: int

    def __post_init__(self) -> None:
        for name in ("weight", "centre", "scale"):
            object.__setattr__(self, name, frozen(getattr(self, name)))
        if self.degrees < 1 or not (self.scale > 0.0).all():
            raise ValueError("a mixture wants a degree of freedom and scales above zero")

    @property
    def mean(self) -> float:
        """The weighted mean of the centres."""
        return float(self.weight @ self.centre)

    def quantile(self, share: float) -> float:
        """Give the value under which the share lies, by bisection.

        Raises
        ------
        ValueError
            If the share is not between 0 and 1.
        """
        if not 0.0 < share < 1.0:
            raise ValueError(f"share is between 0 and 1, not {share}")
        low = float((self.centre - BRACKET_ERRORS * self.scale).min())
        high = float((self.centre + BRACKET_ERRORS * self.scale).max())
        for _ in range(HALVINGS):
            middle = (low + high) / 2.0
            below = stdtr(self.degrees, (middle - self.centre) / self.scale)
            low, high = (middle, high) if self.weight @ below < share else (low, middle)
        return (low + high) / 2.0

    def interval(self, confidence: float) -> tuple[float, float]:
        """Give the ends of the central interval."""
        tail = (1.0 - confidence) / 2.0
        return self.quantile(tail), self.quantile(1.0 - tail)


@dataclass(frozen=True, slots=True, eq=False)
class Weighed:
    """What a series says under each coefficient; shapes (k,), (k, p) and (k,)."""

    weight: NDArray[np.float64]
    coefficient: NDArray[np.float64]
    variance: NDArray[np.float64]


class SerialDesign:
    """Columns of a regression seen through every coefficient of the grid.

    Source: handbook 10.5. R has the correlations coefficient^|t_i - t_j|; such a series looks one
    step back only, so R^-1 is applied by differences of neighbours and never made.

    Parameters
    ----------
    time
        Times that rise, in units of the median gap between dates; shape (n,).
    columns
        Regressors, shape (n, p), n above p.

    Raises
    ------
    ValueError
        If times do not rise, shapes do not fit or a column repeats others.
    """

    def __init__(self, time: ArrayLike, columns: ArrayLike) -> None:
        self.time = rising(time)
        self.columns = frozen(columns, ndim=2)
        count, width = self.columns.shape
        if count != self.time.size or count <= width:
            raise ValueError(f"{self.time.size} times and {count} rows for {width} columns")
        self.degrees = count - width
        self.link = COEFFICIENTS[:, None] ** np.diff(self.time)[None, :]
        self._own = np.sqrt(1.0 - self.link**2)
        self._white = self._whiten(self.columns)
        gram = np.einsum("kni,knj->kij", self._white, self._white)
        if np.linalg.matrix_rank(self.columns) < width:
            raise ValueError("a column of the regression repeats others")
        self.inverse = np.linalg.inv(gram)
        self._log_sizes = np.log(self._own).sum(axis=1) + np.linalg.slogdet(gram)[1] / 2.0

    def _whiten(self, values: NDArray[np.float64]) -> NDArray[np.float64]:
        """Take from each value what its forerunner told; shape (k, n, ...)."""
        tail = (1,) * (values.ndim - 1)
        link, own = (part.reshape(*part.shape, *tail) for part in (self.link, self._own))
        first = np.broadcast_to(values[:1], (COEFFICIENTS.size, 1, *values.shape[1:]))
        return np.concatenate([first, (values[1:] - link * values[:-1]) / own], axis=1)

    def weigh(self, values: NDArray[np.float64]) -> Weighed:
        """Give weights, regression coefficients and variances for a series of shape (n,)."""
        white = self._whiten(values)
        towards = np.einsum("knp,kn->kp", self._white, white)
        coefficient = np.einsum("kij,kj->ki", self.inverse, towards)
        squares = np.einsum("kn,kn->k", white, white) - np.einsum("kp,kp->k", coefficient, towards)
        # A series without scatter leaves rounding here; its interval is a point all the same.
        squares = np.maximum(squares, np.finfo(float).eps * max(1.0, float(values @ values)))
        log_weight = -self._log_sizes - self.degrees / 2.0 * np.log(squares)
        weight = np.exp(log_weight - log_weight.max())
        return Weighed(weight / weight.sum(), coefficient, squares / self.degrees)

    def mixture(self, values: ArrayLike, column: int) -> Mixture:
        """Give the distribution of the coefficient of one column.

        Source: handbook 10.5, weighted Student t with n - p degrees of freedom.

        Raises
        ------
        ValueError
            If the values are not as many as the times.
        """
        series = frozen(values)
        if series.size != self.time.size:
            raise ValueError(f"{series.size} values for {self.time.size} times")
        seen = self.weigh(series)
        scale = np.sqrt(seen.variance * self.inverse[:, column, column])
        return Mixture(seen.weight, seen.coefficient[:, column], scale, self.degrees)


def in_median_gaps(days: ArrayLike) -> NDArray[np.float64]:
    """Count times from the first on, in units of the median gap between neighbours; shape (n,).

    Source: handbook 10.5.

    Raises
    ------
    ValueError
        If fewer than two days are given or they do not rise.
    """
    ordered = rising(days)
    if ordered.size < 2:
        raise ValueError("two days or more are needed")
    return (ordered - ordered[0]) / np.median(np.diff(ordered))
