"""Centering sheets that hold the clay while it is trodden."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

FACES: Final = 2  # both faces are held, handbook 6.4


def centering_m2(face_above_rock_m2: ArrayLike) -> NDArray[np.float64]:
    """Contact area of both faces above the rock line, shape (draws,). Source: handbook 6.4.

    Each lift of sheets counts once, however often it is moved.
    """
    return FACES * np.asarray(face_above_rock_m2, dtype=np.float64)
