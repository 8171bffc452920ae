"""Where the bed lies on the wall line; crest, closing level and every drawing hang on it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike


def bed_level_m(
    offset_m: ArrayLike, ground_m: ArrayLike, left_toe_m: float, right_toe_m: float
) -> float:
    """Lowest ground between the bank toes, toes included, straight between its points.

    Source: handbook 1.6.

    Parameters
    ----------
    offset_m, ground_m
        Points of the ground along the wall line, offsets rising, shape (points,).
    left_toe_m, right_toe_m
        Offsets of the feet of the bank slopes, inside the surveyed ground.

    Raises
    ------
    ValueError
        If the toes are turned round or lie outside the ground.
    """
    x, z = np.asarray(offset_m, dtype=np.float64), np.asarray(ground_m, dtype=np.float64)
    if not x[0] <= left_toe_m <= right_toe_m <= x[-1]:
        raise ValueError(
            f"toes at {left_toe_m:g} and {right_toe_m:g} m, ground from {x[0]:g} to {x[-1]:g} m"
        )
    inside = z[(x >= left_toe_m) & (x <= right_toe_m)]
    return float(np.concatenate((inside, np.interp([left_toe_m, right_toe_m], x, z))).min())
