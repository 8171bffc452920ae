"""One step at a day nobody named: a parapet raised, a tape cut, a well deepened (rule LV-14)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.water.serial import COEFFICIENTS, Mixture, SerialDesign

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

LEAST_BESIDE: Final = 4  # pairs on either side of a step (project choice)
LEAST_STEP_M: Final = 0.10  # smaller ones pass for reading errors (project choice)
FALSE_ALARM_SHARE: Final = 0.01  # over all days looked at together (project choice)
LOOKED_AT: Final = slice(0, None, 10)  # every tenth coefficient of the grid picks the day


@dataclass(frozen=True, slots=True, eq=False)
class Step:
    """A step that starts with pair `first`; `law` is its distribution, its column the last one."""

    first: int
    law: Mixture
    columns: NDArray[np.float64]

    @property
    def size_m(self) -> float:
        """The middle of its distribution."""
        return self.law.quantile(0.5)


def find_step(
    time: ArrayLike,
    columns: ArrayLike,
    values: ArrayLike,
    *,
    barred: ArrayLike | None = None,
) -> Step | None:
    """Look for the one step that fits best beside the columns; None where none is sure enough.

    Source: rule LV-14 of field practice; the day by restricted likelihood, the size by the
    interval of handbook 10.5, so sure that chance makes one in a hundred such series show a step.

    Parameters
    ----------
    time
        Times in median gaps, shape (n,).
    columns
        What explains the series otherwise, shape (n, p), the first a column of ones.
    values
        The series in m, shape (n,).
    barred
        True where no step may start, shape (n,).

    Raises
    ------
    ValueError
        If shapes do not fit.
    """
    base, series = frozen(columns, ndim=2), frozen(values)
    count = series.size
    allowed = np.zeros(count, dtype=bool)
    allowed[LEAST_BESIDE : count - LEAST_BESIDE + 1] = True
    if barred is not None:
        allowed &= ~np.asarray(barred, dtype=bool)
    starts = np.flatnonzero(allowed)
    if count - base.shape[1] - 1 < LEAST_BESIDE or not starts.size:
        return None
    first = starts[np.argmax(_support(frozen(time), base, series, starts))]
    whole = np.column_stack([base, np.arange(count) >= first])
    if np.linalg.matrix_rank(whole) < whole.shape[1]:
        return None
    law = SerialDesign(time, whole).mixture(series, whole.shape[1] - 1)
    low, high = law.interval(1.0 - FALSE_ALARM_SHARE / starts.size)
    step = Step(int(first), law, whole)
    return step if low * high > 0.0 and abs(step.size_m) >= LEAST_STEP_M else None


def _support(
    time: NDArray[np.float64],
    base: NDArray[np.float64],
    series: NDArray[np.float64],
    starts: NDArray[np.int_],
) -> NDArray[np.float64]:
    """Give the best restricted log likelihood over coefficients for each start; shape (c,)."""
    steps = (np.arange(series.size)[:, None] >= starts[None, :]).astype(float)
    degrees = series.size - base.shape[1] - 1
    best = np.full(starts.size, -np.inf)
    for coefficient in COEFFICIENTS[LOOKED_AT]:
        link = coefficient ** np.diff(time)
        own = np.sqrt(1.0 - link**2)
        white = [
            np.concatenate([part[:1], (part[1:] - link[:, None] * part[:-1]) / own[:, None]])
            for part in (base, series[:, None], steps)
        ]
        basis = np.linalg.qr(white[0])[0]
        rest, steps_rest = (part - basis @ (basis.T @ part) for part in white[1:])
        size = np.maximum((steps_rest**2).sum(axis=0), 1e-9)  # a step that repeats a column
        towards = (steps_rest * rest).sum(axis=0)
        squares = np.maximum((rest**2).sum() - towards**2 / size, 1e-12)
        own_sizes = np.log(own).sum() + np.linalg.slogdet(white[0].T @ white[0])[1] / 2.0
        support = -own_sizes - np.log(size) / 2.0 - degrees / 2.0 * np.log(squares)
        best = np.maximum(best, np.where(size > 1e-6, support, -np.inf))
    return best
