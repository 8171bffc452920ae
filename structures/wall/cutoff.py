"""The wall cut exactly out of a section: straight pieces between two uprights, no step size."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.wall.closure import Ends, find_ends
from structures.wall.section import SAME_LEVEL_M

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.wall.section import Section


@dataclass(frozen=True, eq=False, slots=True)
class Upright:
    """One side of every piece of the wall: levels and side slope there, shapes (draws, pieces)."""

    offset_m: NDArray[np.float64]
    top_m: NDArray[np.float64]
    ground_m: NDArray[np.float64]
    rock_m: NDArray[np.float64]
    slope: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in ("offset_m", "top_m", "ground_m", "rock_m", "slope"):
            getattr(self, name).setflags(write=False)

    @property
    def depth_m(self) -> NDArray[np.float64]:
        """Depth of the trench, ground to rock (handbook 5.7)."""
        return self.ground_m - self.rock_m

    @property
    def above_rock_m(self) -> NDArray[np.float64]:
        """Height of the wall above the rock, without the key."""
        return self.top_m - self.rock_m


@dataclass(frozen=True, eq=False, slots=True)
class Cutoff:
    """The wall of every draw: between `left` and `right` of each piece it stands, rock below top.

    A piece where the rock stands above the wall's top, or beyond the ends, has no width. All
    levels and the side slope are straight between the two uprights of a piece.
    """

    section: Section
    ends: Ends
    left: Upright
    right: Upright

    @property
    def width_m(self) -> NDArray[np.float64]:
        """Length of each piece along the wall line, shape (draws, pieces)."""
        return self.right.offset_m - self.left.offset_m

    @property
    def stands(self) -> NDArray[np.bool_]:
        """For each piece: is there a wall; shape (draws, pieces)."""
        return self.width_m > 0.0

    @property
    def piece_face_above_rock_m2(self) -> NDArray[np.float64]:
        """Face of each piece above the rock line, shape (draws, pieces)."""
        return self.width_m * 0.5 * (self.left.above_rock_m + self.right.above_rock_m)

    @property
    def length_m(self) -> NDArray[np.float64]:
        """Length in plan where the wall stands, shape (draws,)."""
        return self.width_m.sum(axis=1)

    @property
    def face_above_rock_m2(self) -> NDArray[np.float64]:
        """Area of one face above the rock line, shape (draws,)."""
        return self.piece_face_above_rock_m2.sum(axis=1)

    @property
    def face_area_m2(self) -> NDArray[np.float64]:
        """Area of one face, key included, shape (draws,). Source: handbook 5.3 and 5.4."""
        return self.face_above_rock_m2 + self.section.key_m * self.length_m

    @property
    def greatest_height_m(self) -> NDArray[np.float64]:
        """Greatest height from the bottom of the key to the top, shape (draws,); 0 without a wall.

        Source: handbook 5.1; at a toe the larger of the heights on its two sides.
        """
        height = self._greatest(self.left.above_rock_m, self.right.above_rock_m)
        return np.where(self.stands.any(axis=1), height + self.section.key_m, 0.0)

    @property
    def greatest_depth_m(self) -> NDArray[np.float64]:
        """Greatest depth of the trench, ground to rock, shape (draws,); 0 without a wall."""
        return self._greatest(self.left.depth_m, self.right.depth_m)

    @property
    def greatest_depth_to_key_m(self) -> NDArray[np.float64]:
        """Greatest depth from the ground to the bottom of the key, shape (draws,)."""
        depth = self.greatest_depth_m + self.section.key_m
        return np.where(self.stands.any(axis=1), depth, 0.0)

    @property
    def lowest_rock_m(self) -> NDArray[np.float64]:
        """Lowest rock under the wall, shape (draws,); the wall's closing level without a wall."""
        lowest = np.minimum(self.left.rock_m, self.right.rock_m)
        return np.where(self.stands, lowest, self.section.closing_level_m).min(axis=1)

    def _greatest(self, left: NDArray, right: NDArray) -> NDArray[np.float64]:
        return np.where(self.stands, np.maximum(left, right), 0.0).max(axis=1)


def cut(section: Section) -> Cutoff:
    """Cut the wall of every draw out of a section.

    Source: handbook 5.4 and 5.9. In each piece everything is straight, so the part under the top
    and between the ends is one interval.

    Returns
    -------
    Cutoff
        With arrays of shape (draws, n - 1) for a section of n offsets.
    """
    ends = find_ends(section)
    x0, x1 = section.offset_m[:-1], section.offset_m[1:]
    top0, top1 = section.top_m
    room0 = _room_m(top0, section.rock_m[:, :-1])
    room1 = _room_m(top1, section.rock_m[:, 1:])
    # Where only one side has room the top meets the rock between them.
    meets = (room0 > 0.0) != (room1 > 0.0)
    share = np.divide(room0, room0 - room1, out=np.zeros_like(room0), where=meets)
    meeting = x0 + (x1 - x0) * share
    start = np.where((room0 <= 0.0) & meets, meeting, x0)
    stop = np.where((room1 <= 0.0) & meets, meeting, x1)
    start = np.clip(np.maximum(start, ends.left_m[:, None]), x0, x1)
    stop = np.clip(np.minimum(stop, ends.right_m[:, None]), x0, x1)
    buried = (room0 <= 0.0) & (room1 <= 0.0)
    stop = np.where(buried | (stop < start), start, stop)
    tops = (top0, top1)
    return Cutoff(section, ends, _upright(section, tops, start), _upright(section, tops, stop))


def _room_m(top: NDArray, rock: NDArray) -> NDArray[np.float64]:
    """Height of the top over the rock; a height of rounding only is none, or it would get a key."""
    room = top - rock
    return np.where(np.abs(room) > SAME_LEVEL_M, room, 0.0)


def _upright(section: Section, tops: tuple[NDArray, NDArray], at_m: NDArray) -> Upright:
    """Levels and slope at one offset of every piece, shapes (draws, pieces)."""
    x0, x1 = section.offset_m[:-1], section.offset_m[1:]
    share = (at_m - x0) / (x1 - x0)

    def between(left: NDArray, right: NDArray) -> NDArray[np.float64]:
        return left * (1.0 - share) + right * share

    return Upright(
        offset_m=at_m,
        top_m=between(*tops),
        ground_m=between(section.ground_m[:-1], section.ground_m[1:]),
        rock_m=between(section.rock_m[:, :-1], section.rock_m[:, 1:]),
        slope=between(section.slope[:-1], section.slope[1:]),
    )
