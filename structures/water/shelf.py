"""What still passes under a wall that ends on a shelf above the rock: between two figures.

A wall either reaches rock or hardly works, so the share that passes is never that of the open area.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.water.bounds import insist_positive
from structures.water.leakage import slot_flow

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from structures.wall.cutoff import Cutoff

# Of Gauss's rule on a piece; a slot that closes costs 1e-4 of the piece's flow at most.
NODES, WEIGHTS = np.polynomial.legendre.leggauss(64)


@dataclass(frozen=True, slots=True)
class ShelfLeak:
    """Share of the underflow that still passes, between `least_share` and `most_share`.

    Read it only beside the reach: `reach_over_layer` is L/T with the thickest open layer,
    `reach_over_width` L/T in plan with the width that belongs to one open stretch.
    """

    least_share: float
    most_share: float
    open_width_m: float
    open_stretches: int
    layer_m: float
    reach_over_layer: float
    reach_over_width: float


def shelf_leak(
    cutoff: Cutoff,
    *,
    shelf_m: float,
    water_m: float,
    reach_m: float,
    down_to_rock: Sequence[tuple[float, float]] = (),
) -> ShelfLeak:
    """Tell how much passes under a wall whose bottom is raised to a shelf.

    Source: handbook 9.4 (b), 9.5 and 9.6. [A] The least takes the flow in upright slices that give
    each other no water: in each the wall leaves a slot under the shelf. The most takes every open
    stretch as open to its full depth and lets water come to it from the side, in plan, the
    stretches evenly apart. Keeping water from moving sideways can only lessen a flow, taking wall
    away can only add to it; so the truth lies between.

    Parameters
    ----------
    cutoff
        The wall of one rock line as if it reached rock everywhere.
    shelf_m
        Level at which the wall ends where rock lies deeper.
    water_m
        Water level before there was a wall; the layer lies between it and the rock.
    reach_m
        Length L along the flow over which the head drop is fixed.
    down_to_rock
        From and to offset of stretches where the wall reaches rock all the same.

    Raises
    ------
    ValueError
        If the section holds more than one rock line, no rock lies under the water, the shelf lies
        under all rock, or the reach is not above zero.
    """
    insist_positive(reach_m=reach_m)
    if cutoff.section.draws != 1:
        raise ValueError(f"one rock line is asked for, got {cutoff.section.draws} draws")
    x, rock = cutoff.section.offset_m, cutoff.section.rock_m[0]
    closed = np.array(down_to_rock, dtype=np.float64).reshape(-1, 2)
    x, rock = _cut_at(x, rock, (shelf_m, water_m), closed.ravel())
    middle, width, at = 0.5 * (rock[:-1] + rock[1:]), np.diff(x), 0.5 * (x[:-1] + x[1:])
    inside = ((at[:, None] > closed[:, 0]) & (at[:, None] < closed[:, 1])).any(axis=1)
    wet, below = middle < water_m, (middle < min(shelf_m, water_m)) & ~inside
    if not below.any():
        raise ValueError(f"no rock under the water lies deeper than {shelf_m:g} m")
    whole = float(((water_m - middle) * width)[wet].sum())
    passing = sum(
        _slices(float(width[i]), water_m - rock[i : i + 2], shelf_m, water_m, reach_m)
        for i in np.flatnonzero(below).tolist()
    )
    stretches = int(np.count_nonzero(np.diff(np.concatenate(([False], below)).astype(int)) == 1))
    open_m, wide_m = float(width[below].sum()), float(width[wet].sum())
    least, part_m = passing / whole, wide_m / (2 * stretches)
    closed_m = (wide_m - open_m) / (2 * stretches)
    in_plan = slot_flow(part_m, closed_m, reach_m).passing_share
    layer_m = water_m - float(np.minimum(rock[:-1], rock[1:])[below].min())
    return ShelfLeak(
        least_share=least,
        most_share=max(least, in_plan),
        open_width_m=open_m,
        open_stretches=stretches,
        layer_m=layer_m,
        reach_over_layer=reach_m / layer_m,
        reach_over_width=reach_m / part_m,
    )


def _slices(
    width_m: float, layers_m: NDArray, shelf_m: float, water_m: float, reach_m: float
) -> float:
    """Sum of layer times passing share over one piece, m2; all slices of it are open."""
    share = 0.5 * (NODES + 1.0)
    layers = layers_m[0] * (1.0 - share) + layers_m[1] * share
    closed = max(water_m - shelf_m, 0.0)
    flows = [layer * slot_flow(layer, closed, reach_m).passing_share for layer in layers.tolist()]
    return 0.5 * width_m * float(WEIGHTS @ flows)


def _cut_at(
    x: NDArray, z: NDArray, levels_m: tuple[float, ...], offsets_m: NDArray
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Add to a line some offsets within it, and the places where it passes through levels."""
    places = [x, offsets_m[(offsets_m > x[0]) & (offsets_m < x[-1])]]
    for level in levels_m:
        above = z - level
        i = np.flatnonzero(above[:-1] * above[1:] < 0.0)
        places.append(x[i] + (x[i + 1] - x[i]) * above[i] / (above[i] - above[i + 1]))
    at = np.unique(np.concatenate(places))
    return at, np.interp(at, x, z)
