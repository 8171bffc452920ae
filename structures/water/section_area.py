"""Saturated area of the surveyed section, and its sum over levels, exactly.

Between neighbouring offsets everything is straight. The area between two lines under a level is
that over the lower line less that over the upper one, and each is a triangle or a trapezium.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen, rising
from structures.intake.line_checks import SAME_LEVEL_M

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike, NDArray

    from structures.intake.pack import GroundPoint

LEAST_POINTS: Final = 2  # a line has two


@dataclass(frozen=True, eq=False, slots=True)
class Bands:
    """Pieces of a surface between a lower and an upper line, both straight; shapes (n,) each.

    `left` and `right` are the levels at the two sides of a piece of the given width.
    """

    width_m: NDArray[np.float64]
    lower_left_m: NDArray[np.float64]
    lower_right_m: NDArray[np.float64]
    upper_left_m: NDArray[np.float64]
    upper_right_m: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in (
            "width_m",
            "lower_left_m",
            "lower_right_m",
            "upper_left_m",
            "upper_right_m",
        ):
            array = frozen(getattr(self, name))
            if array.shape != np.shape(self.width_m):
                raise ValueError(f"{name} has {array.size} pieces, width_m {np.size(self.width_m)}")
            object.__setattr__(self, name, array)
        sides = (
            (self.lower_left_m, self.upper_left_m),
            (self.lower_right_m, self.upper_right_m),
        )
        if (self.width_m < 0.0).any():
            raise ValueError("a piece has a negative width")
        if any((lower > upper + SAME_LEVEL_M).any() for lower, upper in sides):
            raise ValueError("the lower line stands above the upper one")

    def area_below_m2(self, level_m: float) -> float:
        """Area between the two lines that lies under a level.

        Source: handbook 5.9 and 9.1, the definite integral of straight lines.
        """
        over_lower = _area_under(level_m, self.width_m, self.lower_left_m, self.lower_right_m)
        over_upper = _area_under(level_m, self.width_m, self.upper_left_m, self.upper_right_m)
        return max(0.0, float(np.sum(over_lower - over_upper)))  # never a last bit below nothing

    def area_summed_m3(self, from_m: float, to_m: float) -> float:
        """Integral over levels of the area below a level, between two levels.

        Source: handbook 9.3 and 9.9, the definite integral of straight lines squared.
        """
        return self._summed_below(to_m) - self._summed_below(from_m)

    def _summed_below(self, level_m: float) -> float:
        over_lower = _summed_under(level_m, self.width_m, self.lower_left_m, self.lower_right_m)
        over_upper = _summed_under(level_m, self.width_m, self.upper_left_m, self.upper_right_m)
        return float(np.sum(over_lower - over_upper))


def surveyed_section(
    ground: Sequence[GroundPoint], offset_m: ArrayLike, level_m: ArrayLike
) -> Bands:
    """Cut the section into pieces between rock and ground, where both are known.

    Source: handbook 5.5 (nothing is extrapolated) and 5.9.

    Parameters
    ----------
    ground
        Points of the ground, offsets rising.
    offset_m, level_m
        Points of the rock line, shape (n,), straight between them.

    Raises
    ------
    ValueError
        If the two lines share no stretch, or rock stands above the ground.
    """
    ground_x = rising([point.offset_m for point in ground])
    ground_z = frozen([point.level_m for point in ground])
    rock_x, rock_z = rising(offset_m), frozen(level_m)
    if min(ground_x.size, rock_x.size) < LEAST_POINTS:
        raise ValueError("a line has two points at least")
    first, last = max(ground_x[0], rock_x[0]), min(ground_x[-1], rock_x[-1])
    if first >= last:
        raise ValueError("ground and rock line share no stretch")
    breaks = np.concatenate((ground_x, rock_x))
    x = np.unique(breaks[(breaks >= first) & (breaks <= last)])
    rock, surface = np.interp(x, rock_x, rock_z), np.interp(x, ground_x, ground_z)
    return Bands(np.diff(x), rock[:-1], rock[1:], surface[:-1], surface[1:])


def _wetted(
    level_m: float, left_m: NDArray, right_m: NDArray
) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Greater and smaller depth of a line under a level, and the part of the width under it."""
    depths = level_m - np.stack((left_m, right_m))
    high, low = depths.max(axis=0), depths.min(axis=0)
    crosses = (high > 0.0) & (low < 0.0)
    part = np.divide(high, high - low, out=np.ones_like(high), where=crosses)
    return np.maximum(high, 0.0), np.maximum(low, 0.0), part


def _area_under(
    level_m: float, width_m: NDArray, left_m: NDArray, right_m: NDArray
) -> NDArray[np.float64]:
    """Area between a line and a level above it, each piece."""
    high, low, part = _wetted(level_m, left_m, right_m)
    return width_m * part * (high + low) / 2.0


def _summed_under(
    level_m: float, width_m: NDArray, left_m: NDArray, right_m: NDArray
) -> NDArray[np.float64]:
    """Integral of half the squared depth of a line under a level, each piece."""
    high, low, part = _wetted(level_m, left_m, right_m)
    return width_m * part * (high**2 + high * low + low**2) / 6.0
