"""The trench: area, excavation by lifts, backfill, surplus.

Volumes come from the prismoidal rule, which is exact here: on a piece depth and side slope are
straight, so the area is a polynomial of degree three at most.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from structures.wall.cutoff import Cutoff


def trench_area_m2(depth_m: ArrayLike, slope: ArrayLike, floor_m: float) -> NDArray[np.float64]:
    """Area of the trench across the wall line; shapes broadcast.

    Source: handbook 5.8. The area below a level d under ground is that of the depth less d.
    """
    depth = np.asarray(depth_m, dtype=np.float64)
    return depth * (floor_m + np.asarray(slope) * depth)


def prismoid_m3(
    length_m: ArrayLike,
    floor_m: float,
    depths_m: tuple[ArrayLike, ArrayLike],
    slopes: tuple[ArrayLike, ArrayLike],
) -> NDArray[np.float64]:
    """Volume of a trench between two uprights, depth and side slope straight between them.

    Source: handbook 8.1, the prismoidal rule with the middle area from the mean dimensions.

    Parameters
    ----------
    length_m
        Distance between the uprights; shapes broadcast.
    floor_m
        Width of the trench's floor.
    depths_m, slopes
        Depth and side slope (across per 1 up) at the two uprights.
    """
    (d1, d2), (s1, s2) = (np.asarray(depths_m[0]), np.asarray(depths_m[1])), slopes
    middle = trench_area_m2(0.5 * (d1 + d2), 0.5 * (np.asarray(s1) + np.asarray(s2)), floor_m)
    outer = trench_area_m2(d1, s1, floor_m) + trench_area_m2(d2, s2, floor_m)
    return np.asarray(length_m) * (outer + 4.0 * middle) / 6.0


def lift_limits_m(deepest_m: float, lift_m: float) -> NDArray[np.float64]:
    """Limits of the lifts below ground that a depth asks for, shape (lifts + 1,); one lift at least.

    Source: handbook 8.2 (lifts of one height from the ground down).
    """
    # Whole lifts of a rounded quotient: 4.5 m in lifts of 1.5 m is three, whatever the last bit.
    lifts = max(1, int(np.ceil(round(deepest_m / lift_m, 9))))
    return np.round(np.arange(lifts + 1) * lift_m, 9)


def volume_below_m3(cutoff: Cutoff, below_m: float) -> NDArray[np.float64]:
    """Trench volume of each piece that lies deeper than `below_m` under ground.

    Source: handbook 5.8 and 5.9. A piece is cut where its depth passes the limit.

    Returns
    -------
    ndarray
        Shape (draws, pieces).
    """
    left, right = cutoff.left, cutoff.right
    deep1, deep2 = left.depth_m - below_m, right.depth_m - below_m
    passes = (deep1 > 0.0) != (deep2 > 0.0)
    share = np.divide(deep1, deep1 - deep2, out=np.zeros_like(deep1), where=passes)
    at_limit = left.slope + (right.slope - left.slope) * share
    slope1 = np.where(passes & (deep1 <= 0.0), at_limit, left.slope)
    slope2 = np.where(passes & (deep2 <= 0.0), at_limit, right.slope)
    part = np.where(passes, np.where(deep1 > 0.0, share, 1.0 - share), 1.0)
    return prismoid_m3(
        cutoff.width_m * part,
        cutoff.section.floor_m,
        (np.maximum(deep1, 0.0), np.maximum(deep2, 0.0)),
        (slope1, slope2),
    )


def excavation_by_lift_m3(cutoff: Cutoff, limits_m: NDArray) -> NDArray[np.float64]:
    """Trench in place between the limits, per draw, shape (draws, lifts).

    Source: handbook 5.7 to 5.9. The trench stops on the rock; the key is measured apart.

    Parameters
    ----------
    cutoff
        The wall of every draw.
    limits_m
        Limits below ground, rising from 0, shape (lifts + 1,).
    """
    below = np.stack([volume_below_m3(cutoff, limit).sum(axis=1) for limit in limits_m], axis=1)
    return below[:, :-1] - below[:, 1:]


def backfill_m3(
    excavation_m3: ArrayLike, face_above_rock_m2: ArrayLike, thickness_m: float
) -> NDArray[np.float64]:
    """Excavation less the wall above the rock line. Source: handbook 6.5."""
    return np.asarray(excavation_m3) - thickness_m * np.asarray(face_above_rock_m2)


def surplus_m3(clay_m3: ArrayLike, bulking: float) -> NDArray[np.float64]:
    """Soil to carry away, loose: what the wall displaces. Source: handbook 6.5."""
    return np.asarray(clay_m3) * bulking
