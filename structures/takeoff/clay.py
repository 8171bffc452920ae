"""Puddle clay of the wall and the chase in the rock that it is keyed into."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, eq=False, slots=True)
class Clay:
    """Clay of the wall: compacted in place, to dig at the borrow, loose on carts; shape (draws,)."""

    in_place_m3: NDArray[np.float64]
    borrow_m3: NDArray[np.float64]
    loose_m3: NDArray[np.float64]


def clay_of_wall(
    face_area_m2: ArrayLike,
    thickness_m: float,
    *,
    borrow_factor: float,
    loose_factor: float,
    waste_share: float,
) -> Clay:
    """Clay in place, at the borrow and on carts. Source: handbook 6.1.

    Parameters
    ----------
    face_area_m2
        Area of one face, key included, shape (draws,).
    thickness_m
        Thickness of the wall.
    borrow_factor, loose_factor
        Clay at the borrow, and loose, per clay in place.
    waste_share
        Share that is wasted on the way.
    """
    in_place = thickness_m * np.asarray(face_area_m2, dtype=np.float64)
    brought = in_place * (1.0 + waste_share)
    return Clay(in_place, brought * borrow_factor, brought * loose_factor)


def rock_key_m3(length_m: ArrayLike, thickness_m: float, key_m: float) -> NDArray[np.float64]:
    """Chase cut below the rock line, as wide as the clay. Source: handbook 6.6."""
    return thickness_m * key_m * np.asarray(length_m, dtype=np.float64)
