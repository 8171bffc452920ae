"""Film on the faces: it keeps the clay clean and moist, and is never counted as a barrier."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


def film_net_m2(
    face_area_m2: ArrayLike, length_m: ArrayLike, *, faces: int, anchor_m: float, fold_m: float
) -> NDArray[np.float64]:
    """Film of the faces with anchor at the bottom and fold at the top. Source: handbook 6.3.

    Parameters
    ----------
    face_area_m2
        Area of one face, key included, shape (draws,).
    length_m
        Length of the wall in plan, shape (draws,).
    faces
        Faces that get a film, 0 to 2.
    anchor_m, fold_m
        Film beyond the face at the bottom and at the top.
    """
    return faces * (np.asarray(face_area_m2) + np.asarray(length_m) * (anchor_m + fold_m))


def film_with_laps_m2(net_m2: ArrayLike, width_m: float, lap_m: float) -> NDArray[np.float64]:
    """Film to buy: each roll loses the lap of its width. Source: handbook 6.3.

    Raises
    ------
    ValueError
        If the lap takes the whole width of the roll.
    """
    if not 0.0 <= lap_m < width_m:
        raise ValueError(f"a lap of {lap_m:g} m does not fit a roll {width_m:g} m wide")
    return np.asarray(net_m2) * width_m / (width_m - lap_m)
