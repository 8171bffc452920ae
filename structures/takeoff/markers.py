"""Marker stones along the wall line."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

SAME_PLACE: Final = 1e-6  # share of a spacing that asks for no further stone, handbook 6.5


def count_markers(line_m: ArrayLike, spacing_m: float) -> NDArray[np.float64]:
    """Stones at both ends of a straight line and every spacing from its left end.

    Source: handbook 6.5; 5.4 (the line runs from end to end, rock bars included).

    Parameters
    ----------
    line_m
        From end to end, shape (draws,).
    spacing_m
        Distance of the stones.
    """
    return 1.0 + np.ceil(np.asarray(line_m, dtype=np.float64) / spacing_m - SAME_PLACE)
