"""The heap of spoil beside the trench: how far back, how high, how wide."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from structures.life.trench import spoil_distance_m

REST_SLOPE: Final = 1.5  # across per 1 up of a loose heap, handbook 6.7


@dataclass(frozen=True, slots=True)
class SpoilHeap:
    """A triangular heap: distance of its foot from the trench's edge, height, base."""

    distance_m: float
    height_m: float
    base_m: float


def spoil_heap(loose_area_m2: float, depth_m: float) -> SpoilHeap:
    """Heap that holds a loose section area beside a trench of a depth.

    Source: handbook 6.7 (triangle at its slope of rest), 12 (distance).

    Raises
    ------
    ValueError
        If the area is negative.
    """
    if loose_area_m2 < 0:
        raise ValueError(f"a heap of {loose_area_m2:g} m2 is none")
    height = (loose_area_m2 / REST_SLOPE) ** 0.5
    return SpoilHeap(spoil_distance_m(depth_m), height, 2.0 * REST_SLOPE * height)
