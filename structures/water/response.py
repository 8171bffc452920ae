"""How the water table answers in time: to a wall, to a step of level, to wells; closed forms.

Linear theory: good while changes are small beside the saturated thickness and the end of the
reach is not yet felt. Days and metres throughout; T transmissivity, S storage.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
from scipy.special import erfc, exp1

from structures.water.bounds import insist_not_negative, insist_positive

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, slots=True)
class Aquifer:
    """Transmissivity (m2/day) and storage (specific yield or storage coefficient)."""

    transmissivity_m2_per_day: float
    storage: float

    def __post_init__(self) -> None:
        insist_positive(
            transmissivity_m2_per_day=self.transmissivity_m2_per_day, storage=self.storage
        )

    def reach_m(self, days: ArrayLike) -> NDArray[np.float64]:
        """Distance 2 sqrt(T t/S) to which a change has come; shapes as given.

        Source: handbook 9.10.

        Raises
        ------
        ValueError
            If a time is not above zero.
        """
        insist_positive(days=days)
        return 2.0 * np.sqrt(self.transmissivity_m2_per_day * np.asarray(days) / self.storage)


def wall_rise_m(
    aquifer: Aquifer, flow_m2_per_day: float, distance_m: ArrayLike, days: ArrayLike
) -> NDArray[np.float64]:
    """Rise upstream of a wall that stops a flow; the same fall downstream.

    Source: handbook 9.10, (q/T) r ierfc(x/r). Holds while the rise is small beside the thickness
    and the reach r is under half the length of the valley.

    Parameters
    ----------
    flow_m2_per_day
        Flow per metre of width that the wall stops.
    distance_m, days
        Distance from the wall and time since it closed; shapes broadcast.

    Raises
    ------
    ValueError
        If a time is not above zero or a distance is negative.
    """
    insist_not_negative(distance_m=distance_m)
    reach = aquifer.reach_m(days)
    u = np.asarray(distance_m, dtype=np.float64) / reach
    ierfc = np.exp(-(u**2)) / np.sqrt(np.pi) - u * erfc(u)
    # Far off the two terms cancel to their last bits; a rise is never a fall.
    return flow_m2_per_day / aquifer.transmissivity_m2_per_day * reach * np.maximum(ierfc, 0.0)


def step_rise_m(
    aquifer: Aquifer, step_m: float, distance_m: ArrayLike, days: ArrayLike
) -> NDArray[np.float64]:
    """Rise at a distance from a channel whose level rose by a step. Source: handbook 9.11.

    Raises
    ------
    ValueError
        If a time is not above zero or a distance is negative.
    """
    insist_not_negative(distance_m=distance_m)
    return step_m * erfc(np.asarray(distance_m, dtype=np.float64) / aquifer.reach_m(days))


def step_flow_m2_per_day(aquifer: Aquifer, step_m: float, days: ArrayLike) -> NDArray[np.float64]:
    """Flow out of the channel per metre after its level rose by a step. Source: handbook 9.11.

    Raises
    ------
    ValueError
        If a time is not above zero.
    """
    insist_positive(days=days)
    product = aquifer.transmissivity_m2_per_day * aquifer.storage
    return step_m * np.sqrt(product / (np.pi * np.asarray(days, dtype=np.float64)))


def well_function(u: ArrayLike) -> NDArray[np.float64]:
    """W(u), the exponential integral E1. Source: handbook 9.12 (Theis).

    Raises
    ------
    ValueError
        If a value is not above zero.
    """
    insist_positive(u=u)
    return exp1(np.asarray(u, dtype=np.float64))


@dataclass(frozen=True, slots=True)
class Well:
    """Pumping of one well, or an image of one: flow, distance to the point, first day."""

    flow_m3_per_day: float
    distance_m: float
    since_day: float = 0.0

    def __post_init__(self) -> None:
        insist_positive(distance_m=self.distance_m)

    def image(self, distance_m: float, edge: Literal["closed", "fixed level"]) -> Well:
        """Give the well's image behind an edge, at its distance from the point.

        Source: handbook 9.12: a rock flank or a wall is closed and mirrors the same sign, a stream
        at constant level the opposite one.
        """
        sign = 1.0 if edge == "closed" else -1.0
        return Well(sign * self.flow_m3_per_day, distance_m, self.since_day)


def drawdown_m(aquifer: Aquifer, wells: Sequence[Well], day: float) -> float:
    """Drawdown at a point on a day from all wells and images that have begun.

    Source: handbook 9.12 (Theis), superposed in time and place. A rate that changes is a second
    well in the same place with the difference.
    """
    t4 = 4.0 * aquifer.transmissivity_m2_per_day
    return sum(
        (
            well.flow_m3_per_day
            / (np.pi * t4)
            * float(
                well_function(well.distance_m**2 * aquifer.storage / (t4 * (day - well.since_day)))
            )
            for well in wells
            if well.since_day < day
        ),
        start=0.0,
    )


def stream_depletion_share(
    aquifer: Aquifer, distance_m: ArrayLike, days: ArrayLike
) -> NDArray[np.float64]:
    """Share of a well's water that comes out of a stream. Source: handbook 9.13.

    Parameters
    ----------
    distance_m, days
        Distance of the well from the stream and time of pumping; shapes broadcast.

    Raises
    ------
    ValueError
        If a time is not above zero or a distance is negative.
    """
    insist_not_negative(distance_m=distance_m)
    return erfc(np.asarray(distance_m, dtype=np.float64) / aquifer.reach_m(days))
