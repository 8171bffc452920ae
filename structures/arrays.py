"""Read-only arrays for records: frozen fields alone do not stop `record.levels[0] = 0`."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


def frozen(values: ArrayLike, *, ndim: int = 1) -> NDArray[np.float64]:
    """Copy values into a read-only array of floats.

    Parameters
    ----------
    values
        Anything numpy reads as numbers.
    ndim
        The number of axes asked for.

    Raises
    ------
    ValueError
        If the number of axes differs, or a value is not finite.
    """
    array = np.array(values, dtype=np.float64)
    if array.ndim != ndim:
        raise ValueError(f"expected {ndim} axes, got {array.ndim}")
    if not np.isfinite(array).all():
        raise ValueError("a value is not a finite number")
    array.setflags(write=False)
    return array


def rising(offset_m: ArrayLike) -> NDArray[np.float64]:
    """Copy offsets into a read-only array and insist that they rise strictly.

    Parameters
    ----------
    offset_m
        Offsets from the left bank, shape (n,).

    Raises
    ------
    ValueError
        If an offset is not finite or does not lie beyond the one before it.
    """
    array = frozen(offset_m)
    if array.size > 1 and not (np.diff(array) > 0).all():
        raise ValueError("offsets must rise strictly")
    return array
