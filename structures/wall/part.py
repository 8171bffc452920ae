"""A part of a wall between two offsets, cut as exactly as the whole: a strip, or what is left."""

from __future__ import annotations

from dataclasses import fields, replace
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from structures.wall.cutoff import Cutoff, Upright

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray


def part_of(cutoff: Cutoff, reaches: Iterable[tuple[float, float]]) -> Cutoff:
    """Cut the parts of a wall that lie in some reaches; the ends stay those of the whole.

    Source: handbook 5.9; everything is straight within a piece, so a piece is cut exactly.

    Parameters
    ----------
    cutoff
        The wall of every draw.
    reaches
        From and to offset of each part; they may touch and do not overlap.

    Raises
    ------
    ValueError
        If a reach ends before it begins, two overlap, or there is none.
    """
    parts = sorted(reaches)
    if not parts or any(stop < start for start, stop in parts):
        raise ValueError("a reach ends before it begins, or there is none")
    if any(later < stop for (_, stop), (later, _) in pairwise(parts)):
        raise ValueError("two reaches overlap")
    sides = [_between(cutoff, start, stop) for start, stop in parts]
    left, right = (
        Upright(
            *(
                np.concatenate([getattr(pair[side], one.name) for pair in sides], axis=1)
                for one in fields(Upright)
            )
        )
        for side in (0, 1)
    )
    return replace(cutoff, left=left, right=right)


def _between(cutoff: Cutoff, start_m: float, stop_m: float) -> tuple[Upright, Upright]:
    """Give both sides of every piece, moved into the reach; a piece outside it has no width."""
    x0, x1 = cutoff.left.offset_m, cutoff.right.offset_m
    first = np.minimum(np.maximum(x0, start_m), x1)
    last = np.maximum(np.minimum(x1, stop_m), first)
    return _at(cutoff, first), _at(cutoff, last)


def _at(cutoff: Cutoff, at_m: NDArray) -> Upright:
    """Levels and slope at one offset of every piece, straight between its sides."""
    left, right = cutoff.left, cutoff.right
    share = np.divide(
        at_m - left.offset_m, cutoff.width_m, out=np.zeros_like(at_m), where=cutoff.stands
    )
    levels = {
        one.name: getattr(left, one.name) * (1.0 - share) + getattr(right, one.name) * share
        for one in fields(Upright)
        if one.name != "offset_m"
    }
    return Upright(offset_m=at_m, **levels)
