"""Stretches of the wall line worth naming: rock bars in the bed, low ground beside it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Literal

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.wall.cutoff import Cutoff
    from structures.wall.section import Section

LEAST_M: Final = 1e-6  # shorter gaps are rounding of a crossing, handbook 8.4 (six-decimal gate)


@dataclass(frozen=True, slots=True)
class Stretch:
    """From one offset to another, from the left bank."""

    from_m: float
    to_m: float


@dataclass(frozen=True, slots=True)
class LowGround:
    """Ground outside a toe that lies under the closing level."""

    side: Literal["left", "right"]
    from_m: float
    to_m: float


def find_bars(cutoff: Cutoff) -> tuple[Stretch, ...]:
    """Stretches between the ends and the toes where rock stands at or above the crest.

    Source: handbook 5.4; the wall is interrupted there and keyed to the rock on each side.

    Raises
    ------
    ValueError
        If the section holds more than one rock line.
    """
    section, ends = _single(cutoff), cutoff.ends
    first = max(float(ends.left_m[0]), section.left_toe_m)
    last = min(float(ends.right_m[0]), section.right_toe_m)
    bed = cutoff.stands[0] & section.between_toes
    starts = np.append(cutoff.left.offset_m[0][bed], last)
    stops = np.append(first, cutoff.right.offset_m[0][bed])
    return tuple(
        Stretch(float(stop), float(start))
        for stop, start in zip(stops, starts, strict=True)
        if start - stop > LEAST_M
    )


def find_low_ground(cutoff: Cutoff) -> tuple[LowGround, ...]:
    """Stretches between a toe and the wall's end with ground under the closing level.

    Source: handbook 5.6. Past a closed end rock and ground stand above that level and keep the
    water off, so low ground further out does not count.

    Raises
    ------
    ValueError
        If the section holds more than one rock line.
    """
    section, ends = _single(cutoff), cutoff.ends
    x, middle = section.offset_m, 0.5 * (section.ground_m[:-1] + section.ground_m[1:])
    start = np.maximum(x[:-1], ends.left_m[0])
    stop = np.minimum(x[1:], ends.right_m[0])
    # Ground crosses the closing level at offsets only, so the middle speaks for its piece.
    low = (middle < section.closing_level_m) & (stop - start > LEAST_M)
    outside: tuple[tuple[Literal["left", "right"], NDArray], ...] = (
        ("left", low & (x[1:] <= section.left_toe_m)),
        ("right", low & (x[:-1] >= section.right_toe_m)),
    )
    return tuple(
        LowGround(side, stretch.from_m, stretch.to_m)
        for side, there in outside
        for stretch in _joined(start[there], stop[there])
    )


def _single(cutoff: Cutoff) -> Section:
    if cutoff.section.draws != 1:
        raise ValueError(f"one rock line is asked for, got {cutoff.section.draws} draws")
    return cutoff.section


def _joined(start: NDArray, stop: NDArray) -> tuple[Stretch, ...]:
    """Join stretches that follow each other."""
    if not start.size:
        return ()
    apart = start[1:] - stop[:-1] > LEAST_M
    firsts = start[np.append(True, apart)]
    lasts = stop[np.append(apart, True)]
    return tuple(Stretch(float(a), float(b)) for a, b in zip(firsts, lasts, strict=True))
