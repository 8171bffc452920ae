"""Steady flow in a strip between two water levels, with recharge or with a wall across it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.water.bounds import insist_not_negative, insist_positive

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, slots=True)
class SteadyStrip:
    """A strip on level rock: depths of water at its two ends, recharge over its length."""

    conductivity_m_per_day: float
    length_m: float
    start_depth_m: float
    end_depth_m: float
    recharge_m_per_day: float = 0.0

    def __post_init__(self) -> None:
        insist_positive(conductivity_m_per_day=self.conductivity_m_per_day, length_m=self.length_m)
        insist_not_negative(
            start_depth_m=self.start_depth_m,
            end_depth_m=self.end_depth_m,
            recharge_m_per_day=self.recharge_m_per_day,
        )

    def depth_m(self, distance_m: ArrayLike) -> NDArray[np.float64]:
        """Depth of water at a distance from the start. Source: handbook 9.16.

        Raises
        ------
        ValueError
            If a distance is outside the strip.
        """
        x = self._inside(distance_m)
        straight = self.start_depth_m**2 - self._fall_m2 * x / self.length_m
        mound = self.recharge_m_per_day / self.conductivity_m_per_day * (self.length_m - x) * x
        return np.sqrt(np.maximum(straight + mound, 0.0))

    def flow_m2_per_day(self, distance_m: ArrayLike) -> NDArray[np.float64]:
        """Flow towards the end per metre of width. Source: handbook 9.16.

        Raises
        ------
        ValueError
            If a distance is outside the strip.
        """
        x = self._inside(distance_m)
        through = self.conductivity_m_per_day * self._fall_m2 / (2.0 * self.length_m)
        return through - self.recharge_m_per_day * (0.5 * self.length_m - x)

    @property
    def divide_m(self) -> float | None:
        """Distance of the divide from the start; None where none lies inside.

        Source: handbook 9.16; without recharge there is none.
        """
        if not self.recharge_m_per_day:
            return None
        pull = self.conductivity_m_per_day * self._fall_m2
        divide = 0.5 * self.length_m - pull / (2.0 * self.recharge_m_per_day * self.length_m)
        return divide if 0.0 <= divide <= self.length_m else None

    @property
    def _fall_m2(self) -> float:
        return self.start_depth_m**2 - self.end_depth_m**2

    def _inside(self, distance_m: ArrayLike) -> NDArray[np.float64]:
        x = np.asarray(distance_m, dtype=np.float64)
        if not ((x >= 0.0) & (x <= self.length_m)).all():
            raise ValueError("a distance lies outside the strip")
        return x


@dataclass(frozen=True, slots=True)
class WalledStrip:
    """A strip on level rock with a wall across it: sand, clay, sand one behind the other."""

    sand_k_m_per_day: float
    clay_k_m_per_day: float
    before_m: float
    thickness_m: float
    behind_m: float

    def __post_init__(self) -> None:
        insist_positive(
            sand_k_m_per_day=self.sand_k_m_per_day, clay_k_m_per_day=self.clay_k_m_per_day
        )
        insist_not_negative(
            before_m=self.before_m, thickness_m=self.thickness_m, behind_m=self.behind_m
        )
        insist_positive(length_m=self.before_m + self.thickness_m + self.behind_m)

    def flow_m2_per_day(self, start_depth_m: float, end_depth_m: float) -> float:
        """Flow per metre of width between two depths of water. Source: handbook 9.17."""
        insist_not_negative(start_depth_m=start_depth_m, end_depth_m=end_depth_m)
        sand = (self.before_m + self.behind_m) / self.sand_k_m_per_day
        resistance = sand + self.thickness_m / self.clay_k_m_per_day
        return (start_depth_m**2 - end_depth_m**2) / 2.0 / resistance
