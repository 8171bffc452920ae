"""Least squares with plain and with Bartlett errors: the check form of handbook 10.5 and 10.6."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.arrays import frozen

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, slots=True, eq=False)
class Regression:
    """Coefficients with both errors, shapes (p,); `lag` is the one of the Bartlett errors."""

    coefficient: NDArray[np.float64]
    plain_error: NDArray[np.float64]
    bartlett_error: NDArray[np.float64]
    lag: int


def default_lag(count: int) -> int:
    """Lag for a number of dates, floor(4 (n/100)^(2/9)).

    Source: handbook 12.
    """
    return math.floor(4.0 * (count / 100.0) ** (2.0 / 9.0))


def regress(columns: ArrayLike, values: ArrayLike, *, lag: int | None = None) -> Regression:
    """Fit by least squares.

    Source: handbook 10.5, Bartlett weights 1 - l/(lag + 1), no small-sample factor.

    Parameters
    ----------
    columns
        Regressors in the order of time, shape (n, p), n above p.
    values
        What is explained, shape (n,).
    lag
        The default one where left out.

    Raises
    ------
    ValueError
        If shapes do not fit, a column repeats others or the lag is below zero.
    """
    x, y = frozen(columns, ndim=2), frozen(values)
    count, width = x.shape
    if y.size != count or count <= width:
        raise ValueError(f"{y.size} values and {count} rows for {width} columns")
    lag = default_lag(count) if lag is None else lag
    if lag < 0 or np.linalg.matrix_rank(x) < width:
        raise ValueError("a lag below zero, or a column that repeats others")
    inverse = np.linalg.inv(x.T @ x)
    coefficient = inverse @ (x.T @ y)
    residual = y - x @ coefficient
    plain = np.sqrt(np.diag(inverse) * (residual @ residual) / (count - width))
    scores = x * residual[:, None]
    middle = scores.T @ scores
    for step in range(1, min(lag, count - 1) + 1):
        cross = scores[step:].T @ scores[:-step]
        middle += (1.0 - step / (lag + 1.0)) * (cross + cross.T)
    bartlett = np.sqrt(np.diag(inverse @ middle @ inverse))
    return Regression(coefficient, plain, bartlett, lag)
