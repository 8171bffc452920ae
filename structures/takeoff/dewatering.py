"""Water that comes into the trench and the pump hours it asks for.

The inflow takes the water over the lowest rock under the wall along the whole trench: an upper
value. Sichardt's reach is empirical, so its factor is always run at both ends of its range.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.intake.defaults import WATER
from structures.intake.practice import HANDBOOK, Practice
from structures.units import HOURS_PER_DAY, SECONDS_PER_DAY, SECONDS_PER_HOUR

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from structures.intake.pack import GroundWater, Works
    from structures.wall.cutoff import Cutoff

WATER_WEIGHT_KN_PER_M3: Final = 9.81  # handbook 6.10
FOOT_WATER_M: Final = 0.30  # water left over the rock at the foot of the sides, handbook 6.c
STANDBY_PUMPS: Final = 1  # handbook 6.10
SICHARDT: Final = WATER["sichardt_c"]  # both ends of its range are run beside the middle


def sichardt_reach_m(
    head_m: ArrayLike, foot_m: float, k_m_per_s: float, c: float
) -> NDArray[np.float64]:
    """Distance to which the pumping draws the water down. Source: handbook 6.8 (Sichardt).

    Parameters
    ----------
    head_m
        Water over the rock far away, shape (draws,).
    foot_m
        Water over the rock at the trench.
    k_m_per_s
        Hydraulic conductivity.
    c
        Sichardt's factor, s^0.5 m^-0.5.

    Returns
    -------
    ndarray
        Shape (draws,); 0 where the water stands no higher than at the trench.
    """
    drop = np.maximum(np.asarray(head_m, dtype=np.float64) - foot_m, 0.0)
    return c * drop * np.sqrt(k_m_per_s)


def slot_inflow_m2_per_s(
    head_m: ArrayLike, foot_m: float, k_m_per_s: float, reach_m: ArrayLike
) -> NDArray[np.float64]:
    """Steady inflow from both sides per metre of trench. Source: handbook 6.8 (Dupuit).

    Parameters
    ----------
    head_m, foot_m
        Water over the rock far away, shape (draws,), and at the trench.
    k_m_per_s
        Hydraulic conductivity.
    reach_m
        Distance drawn down, shape (draws,).
    """
    head, reach = np.asarray(head_m, dtype=np.float64), np.asarray(reach_m, dtype=np.float64)
    thickness_term = k_m_per_s * (head**2 - foot_m**2)
    return np.divide(thickness_term, reach, out=np.zeros_like(reach), where=reach > 0.0)


def slot_storage_m3_per_m(
    head_m: ArrayLike, foot_m: float, reach_m: ArrayLike, specific_yield: float
) -> NDArray[np.float64]:
    """Water to pull down first, both sides, per metre of trench.

    Source: handbook 6.9 (above the Dupuit parabola). Shapes (draws,).
    """
    head = np.maximum(np.asarray(head_m, dtype=np.float64), foot_m)
    mean = (2.0 / 3.0) * (head**2 + head * foot_m + foot_m**2) / (head + foot_m)
    return 2.0 * specific_yield * np.asarray(reach_m) * (head - mean)


def pump_power_kw(
    flow_m3_per_s: float, head_m: float, efficiency: float = WATER["pump_efficiency"].value
) -> float:
    """Power that a pump draws. Source: handbook 6.10.

    Raises
    ------
    ValueError
        If the efficiency is not a share above 0 and up to 1.
    """
    if not 0.0 < efficiency <= 1.0:
        raise ValueError(f"an efficiency of {efficiency:g} is not a share above 0 and up to 1")
    return WATER_WEIGHT_KN_PER_M3 * flow_m3_per_s * head_m / efficiency


@dataclass(frozen=True, eq=False, slots=True)
class Inflow:
    """Inflow of the whole trench, shape (draws,) each; flows in m3 an hour.

    `steady_most` and `steady_least` are Sichardt's factor at the low and the high end of its
    range; `reach_m` is drawn down at the high end: wells and buildings within it are looked for.
    """

    head_m: NDArray[np.float64]
    reach_m: NDArray[np.float64]
    steady_m3_per_h: NDArray[np.float64]
    steady_least_m3_per_h: NDArray[np.float64]
    steady_most_m3_per_h: NDArray[np.float64]
    first_stage_m3_per_h: NDArray[np.float64]


def trench_inflow(
    head_m: ArrayLike,
    length_m: ArrayLike,
    *,
    k_m_per_s: float,
    specific_yield: float,
    foot_m: float = FOOT_WATER_M,
    practice: Practice = HANDBOOK,
) -> Inflow:
    """Steady inflow and first stage of a trench. Source: handbook 6.8 and 6.9.

    Parameters
    ----------
    head_m, length_m
        Water over the rock and length of the trench, shapes (draws,).
    k_m_per_s, specific_yield
        Of the bed's sand.
    foot_m
        Water left over the rock at the trench.
    practice
        Time allowed to pull the water down first, least first stage over the steady inflow, and
        Sichardt's factor of the middle figure.
    """
    head = np.asarray(head_m, dtype=np.float64)
    length = np.asarray(length_m, dtype=np.float64)
    low, middle, high = SICHARDT.low, practice.sichardt_c, SICHARDT.high
    reaches = {c: sichardt_reach_m(head, foot_m, k_m_per_s, c) for c in (low, middle, high)}
    steady = {
        c: slot_inflow_m2_per_s(head, foot_m, k_m_per_s, reach) * length * SECONDS_PER_HOUR
        for c, reach in reaches.items()
    }
    stages = []
    for c in (low, high):
        stored = slot_storage_m3_per_m(head, foot_m, reaches[c], specific_yield) * length
        stages += [
            practice.first_stage_factor * steady[c],
            steady[c] + stored / practice.drawdown_hours,
        ]
    return Inflow(
        head_m=head,
        reach_m=reaches[high],
        steady_m3_per_h=steady[middle],
        steady_least_m3_per_h=steady[high],
        steady_most_m3_per_h=steady[low],
        first_stage_m3_per_h=np.max(stages, axis=0),
    )


def count_pumps(first_stage_m3_per_h: ArrayLike, pump_m3_per_h: float) -> NDArray[np.float64]:
    """Pumps that run at once, without the standby. Source: handbook 6.11."""
    return np.ceil(np.asarray(first_stage_m3_per_h, dtype=np.float64) / pump_m3_per_h)


@dataclass(frozen=True, eq=False, slots=True)
class Pumping:
    """Pump hours of every draw, shape (draws,), or None with the reason in `why`.

    `inflow` and `pumps` (running at once; one more stands by) are None where conductivity or
    water level were not measured. `working` says where the hours come from.
    """

    hours: NDArray[np.float64] | None
    working: str
    why: str
    inflow: Inflow | None
    pumps: NDArray[np.float64] | None


def plan_pumping(
    cutoff: Cutoff, water: GroundWater, works: Works, *, practice: Practice = HANDBOOK
) -> Pumping:
    """Pump hours as planned, or from the days below water and the inflow.

    Source: handbook 6.8 to 6.11. Hours that were planned are taken as they are.

    Parameters
    ----------
    cutoff
        The wall of every draw.
    water, works
        What was measured and planned; they go before the practice.
    practice
        Specific yield, capacity of a pump, first stage and Sichardt's factor.
    """
    inflow, lacking = _inflow(cutoff, water, practice)
    capacity = practice.pump_m3_per_hour
    if works.pump_m3_per_hour is not None:
        capacity = works.pump_m3_per_hour
    pumps = None if inflow is None else count_pumps(inflow.first_stage_m3_per_h, capacity)
    if works.pump_hours is not None:
        hours = np.full(cutoff.section.draws, works.pump_hours)
        return Pumping(hours, "as planned in works.pump_hours", "", inflow, pumps)
    if works.days_below_water is None:
        lacking = ("works.pump_hours or works.days_below_water", *lacking)
    if inflow is None or pumps is None or works.days_below_water is None:
        return Pumping(None, "", f"not given: {', '.join(lacking)}", inflow, pumps)
    working = (
        f"{HOURS_PER_DAY:g} h x {works.days_below_water:g} days x {pumps[0]:g} pumps running at "
        f"{capacity:g} m3/h ({STANDBY_PUMPS} more standing by); first stage {inflow.first_stage_m3_per_h[0]:.1f}, steady "
        f"{inflow.steady_m3_per_h[0]:.1f} ({inflow.steady_least_m3_per_h[0]:.1f} to "
        f"{inflow.steady_most_m3_per_h[0]:.1f}) m3/h"
    )
    hours = HOURS_PER_DAY * works.days_below_water * pumps
    return Pumping(hours, working, "", inflow, pumps)


def _inflow(
    cutoff: Cutoff, water: GroundWater, practice: Practice
) -> tuple[Inflow | None, tuple[str, ...]]:
    """Inflow of every draw, or None and what was not given."""
    k, level = water.hydraulic_conductivity_m_per_day, water.water_level_m
    if k is None or level is None:
        given = {
            "ground_water.hydraulic_conductivity_m_per_day": k,
            "ground_water.water_level_m": level,
        }
        return None, tuple(key for key, value in given.items() if value is None)
    specific_yield = water.specific_yield
    if specific_yield is None:
        specific_yield = practice.specific_yield
    inflow = trench_inflow(
        level - cutoff.lowest_rock_m,
        cutoff.length_m,
        k_m_per_s=k / SECONDS_PER_DAY,
        specific_yield=specific_yield,
        practice=practice,
    )
    return inflow, ()
