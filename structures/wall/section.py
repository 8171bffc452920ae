"""Ground, rock and side slope on common offsets: what the wall is cut from.

One line and two thousand whole-line draws of the rock go the same way: the rock has an axis of
draws, and a single line is one draw.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen, rising
from structures.errors import Refused
from structures.ground.bed import bed_level_m

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from structures.intake.pack import GroundPoint, Toes, WallSettings

SAME_LEVEL_M: Final = (
    1e-9  # rounding of interpolated levels; they are booked to 0.001, handbook 1.4
)


@dataclass(frozen=True, eq=False, slots=True)
class Section:
    """The section along the wall line where both ground and rock are known; nothing beyond it.

    Ground, slope (shape (n,)) and every draw of the rock (shape (draws, n)) are straight between
    the offsets. The toes may lie outside the offsets where the rock line ends short of them.
    """

    offset_m: NDArray[np.float64]
    ground_m: NDArray[np.float64]
    rock_m: NDArray[np.float64]
    slope: NDArray[np.float64]
    left_toe_m: float
    right_toe_m: float
    bed_level_m: float
    crest_level_m: float
    closing_level_m: float
    thickness_m: float
    key_m: float
    floor_m: float

    def __post_init__(self) -> None:
        object.__setattr__(self, "offset_m", rising(self.offset_m))
        for name, ndim in (("ground_m", 1), ("rock_m", 2), ("slope", 1)):
            array = frozen(getattr(self, name), ndim=ndim)
            if array.shape[-1] != self.offset_m.size:
                raise ValueError(
                    f"{name} has {array.shape[-1]} points, offsets {self.offset_m.size}"
                )
            object.__setattr__(self, name, array)
        if self.left_toe_m >= self.right_toe_m:
            raise ValueError(
                f"left toe {self.left_toe_m:g} m is not left of right toe {self.right_toe_m:g} m"
            )

    @property
    def reach(self) -> tuple[float, float]:
        """First and last offset where ground and rock are known."""
        return float(self.offset_m[0]), float(self.offset_m[-1])

    @property
    def draws(self) -> int:
        """Number of rock lines; 1 for a single line."""
        return self.rock_m.shape[0]

    def rock_at_m(self, offset_m: float) -> float:
        """Level of the first rock line at an offset inside the reach."""
        return float(np.interp(offset_m, self.offset_m, self.rock_m[0]))

    @property
    def between_toes(self) -> NDArray[np.bool_]:
        """For each piece between neighbouring offsets: does it lie in the bed; shape (n - 1,)."""
        return (self.offset_m[:-1] >= self.left_toe_m) & (self.offset_m[1:] <= self.right_toe_m)

    @property
    def top_m(self) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Top of the wall at the left and at the right of each piece, shapes (n - 1,).

        Source: handbook 5.1. It steps at the toes, so a piece has its own two values there.
        """
        bank = np.minimum(self.closing_level_m, self.ground_m)
        bed = self.between_toes
        return (
            np.where(bed, self.crest_level_m, bank[:-1]),
            np.where(bed, self.crest_level_m, bank[1:]),
        )


def make_section(
    ground: tuple[GroundPoint, ...],
    toes: Toes,
    offset_m: ArrayLike,
    level_m: ArrayLike,
    wall: WallSettings,
) -> Section:
    """Bring ground, rock line and side slope to common offsets.

    Source: handbook 1.6 (bed level), 5.1 (levels), 5.7 (floor, side slope) and 5.9 (breakpoints).

    Parameters
    ----------
    ground
        Points of the ground, offsets rising.
    toes
        Feet of the bank slopes, inside the ground points.
    offset_m
        Offsets of the rock line, shape (m,), rising.
    level_m
        Levels of the rock line, shape (m,), or of many draws of it, shape (draws, m).
    wall
        Settings of wall and trench.

    Raises
    ------
    Refused
        If ground and rock line have no stretch in common.
    ValueError
        If offsets do not rise, shapes differ or a toe lies outside the ground points.
    """
    ground_x = rising([point.offset_m for point in ground])
    ground_z = frozen([point.level_m for point in ground])
    rock_x = rising(offset_m)
    rock_z = frozen(np.atleast_2d(np.asarray(level_m, dtype=np.float64)), ndim=2)
    if rock_z.shape[1] != rock_x.size:
        raise ValueError(f"rock has {rock_z.shape[1]} levels for {rock_x.size} offsets")
    if not ground_x[0] <= toes.left_m < toes.right_m <= ground_x[-1]:
        raise ValueError("the toes lie inside the ground points, left before right")
    bed_m = bed_level_m(ground_x, ground_z, toes.left_m, toes.right_m)
    slope_x = rising([station.offset_m for station in wall.side_slope])
    slope_m = frozen([station.slope for station in wall.side_slope])

    first, last = _common_reach(ground_x, rock_x)
    breaks = np.concatenate(
        (
            ground_x,
            rock_x,
            [toes.left_m, toes.right_m],
            slope_x,
            _crossings(ground_x, ground_z, bed_m),
        )
    )
    x = np.unique(breaks[(breaks >= first) & (breaks <= last)])
    return Section(
        offset_m=x,
        ground_m=np.interp(x, ground_x, ground_z),
        rock_m=_interpolate(x, rock_x, rock_z),
        slope=np.interp(x, slope_x, slope_m),
        left_toe_m=toes.left_m,
        right_toe_m=toes.right_m,
        bed_level_m=bed_m,
        crest_level_m=bed_m - wall.crest_below_bed_m,
        closing_level_m=bed_m,
        thickness_m=wall.thickness_m,
        key_m=wall.key_m,
        floor_m=wall.thickness_m + 2.0 * wall.bottom_margin_m,
    )


def _common_reach(ground_x: NDArray, rock_x: NDArray) -> tuple[float, float]:
    first = max(ground_x[0], rock_x[0])
    last = min(ground_x[-1], rock_x[-1])
    if first >= last:
        raise Refused(
            f"Rock is known from {rock_x[0]:g} to {rock_x[-1]:g} m, ground from "
            f"{ground_x[0]:g} to {ground_x[-1]:g} m: they share no stretch.",
            where="rock line",
            remedy="Give rock and ground on the same line, offsets from the left bank.",
        )
    return float(first), float(last)


def _crossings(x: NDArray, z: NDArray, level_m: float) -> NDArray:
    """Offsets where a line passes through a level inside one of its pieces."""
    above = z - level_m
    i = np.flatnonzero(above[:-1] * above[1:] < 0)
    return x[i] + (x[i + 1] - x[i]) * above[i] / (above[i] - above[i + 1])


def _interpolate(at: NDArray, x: NDArray, z: NDArray) -> NDArray:
    """Straight lines through every row of z, exact at the points; `at` lies inside x."""
    i = np.clip(np.searchsorted(x, at, side="right") - 1, 0, x.size - 2)
    share = (at - x[i]) / (x[i + 1] - x[i])
    return z[:, i] * (1.0 - share) + z[:, i + 1] * share
