"""First arrivals over layered ground, and the depths that they give back.

Symbols follow handbook section 3: V velocities (m/s) growing with depth, h thicknesses (m), ti
intercept times (s), theta the critical angle, delta the dip.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import asin, cos, sin, sqrt
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike, NDArray


def slowness(V_upper: float, V_lower: float) -> float:
    """Vertical slowness sqrt(1/V1^2 - 1/V2^2), s/m, of a wave bent into the lower layer.

    Source: handbook 3.1 and 3.2.

    Raises
    ------
    ValueError
        If the lower layer is not the faster: it gives no arrival of its own.
    """
    if not 0.0 < V_upper < V_lower:
        raise ValueError(f"velocity falls from {V_upper:g} to {V_lower:g} m/s: a blind layer")
    return sqrt(1.0 / V_upper**2 - 1.0 / V_lower**2)


def intercepts_s(V: Sequence[float], h_m: Sequence[float]) -> tuple[float, ...]:
    """Intercept times of the second and deeper layers, level ground.

    Source: handbook 3.1 (two layers), 3.2 (three).

    Parameters
    ----------
    V
        Velocities from the top, m/s.
    h_m
        Thicknesses of all layers but the deepest.
    """
    return tuple(
        2.0 * sum(h * slowness(V[i], V[n]) for i, h in enumerate(h_m[:n])) for n in range(1, len(V))
    )


def first_arrivals_s(
    x_m: ArrayLike, V: Sequence[float], h_m: Sequence[float]
) -> NDArray[np.float64]:
    """First arrivals at distances from the shot, the direct wave among them, shape of x."""
    x = np.asarray(x_m, dtype=np.float64)
    times = [x / V[0]]
    times += [x / v + ti for v, ti in zip(V[1:], intercepts_s(V, h_m), strict=True)]
    return np.min(times, axis=0)


def crossover_m(V1: float, V2: float, h_m: float) -> float:
    """Distance from which the bent wave comes first. Source: handbook 3.1."""
    return 2.0 * h_m * sqrt((V2 + V1) / (V2 - V1))


def thicknesses_m(V: Sequence[float], ti_s: Sequence[float]) -> tuple[float, ...]:
    """Thicknesses of all layers but the deepest, from their intercept times.

    Source: handbook 3.1 and 3.2, solved from the top down.
    """
    h: list[float] = []
    for n, ti in enumerate(ti_s, 1):
        above = sum(2.0 * h_i * slowness(V[i], V[n]) for i, h_i in enumerate(h))
        h.append((ti - above) / (2.0 * slowness(V[n - 1], V[n])))
    return tuple(h)


def hidden_thickness_m(V1: float, V2: float, V3: float, h1_m: float) -> float:
    """Greatest thickness of a middle layer that never arrives first under h1 of the first.

    Source: handbook 3.6: where the direct wave and the deep one meet, the middle one is not
    earlier.
    """
    span = (1.0 / V1 - 1.0 / V3) / (1.0 / V1 - 1.0 / V2)
    return h1_m * (slowness(V1, V2) * span - slowness(V1, V3)) / slowness(V2, V3)


@dataclass(frozen=True, slots=True)
class DippingPlane:
    """Critical angle and dip (radians), positive down from the first shot to the second."""

    theta: float
    delta: float

    def perpendicular_m(self, V1: float, ti_s: float) -> float:
        """Perpendicular depth below a shot with this intercept. Source: handbook 3.3."""
        return ti_s * V1 / (2.0 * cos(self.theta))

    def vertical_m(self, V1: float, ti_s: float) -> float:
        """Vertical depth below a shot. Source: handbook 3.3."""
        return self.perpendicular_m(V1, ti_s) / cos(self.delta)

    def velocity(self, V1: float) -> float:
        """Give the true velocity below the plane, m/s."""
        return V1 / sin(self.theta)


def dipping_plane(V1: float, V_down: float, V_up: float) -> DippingPlane:
    """Critical angle and dip from the apparent velocities down and up the dip.

    Source: handbook 3.3.

    Raises
    ------
    ValueError
        If an apparent velocity is not above that of the first layer.
    """
    if min(V_down, V_up) <= V1:
        raise ValueError("an apparent velocity is not above that of the first layer")
    down, up = asin(V1 / V_down), asin(V1 / V_up)
    return DippingPlane(0.5 * (down + up), 0.5 * (down - up))


def plus_time_s(tA_s: float, tB_s: float, tAB_s: float) -> float:
    """Plus time of a geophone between two shots. Source: handbook 3.4."""
    return tA_s + tB_s - tAB_s


def plus_depth_m(plus_s: float, V1: float, theta: float) -> float:
    """Perpendicular depth at a geophone from its plus time. Source: handbook 3.4."""
    return plus_s * V1 / (2.0 * cos(theta))
