"""Water that flows through the bed's sand before there is a wall."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.water.bounds import insist_not_negative

if TYPE_CHECKING:
    from collections.abc import Sequence


def underflow_m3_per_day(
    hydraulic_conductivity_m_per_day: float, section_area_m2: float, gradient: float
) -> float:
    """Flow through a saturated section. Source: handbook 9.1 (Darcy).

    Parameters
    ----------
    hydraulic_conductivity_m_per_day
        Of the bed's sand, measured by pumping or slug test.
    section_area_m2
        Saturated area across the stream.
    gradient
        Slope of the water table along the stream.

    Raises
    ------
    ValueError
        If one of them is negative.
    """
    return layered_underflow_m3_per_day(
        gradient, [(hydraulic_conductivity_m_per_day, section_area_m2)]
    )


def layered_underflow_m3_per_day(gradient: float, layers: Sequence[tuple[float, float]]) -> float:
    """Flow through a section of several layers. Source: handbook 9.2.

    Parameters
    ----------
    gradient
        Slope of the water table along the stream.
    layers
        Of each layer its conductivity (m/day) and its saturated area (m2).

    Raises
    ------
    ValueError
        If the gradient, a conductivity or an area is negative.
    """
    insist_not_negative(gradient=gradient)
    for conductivity, area in layers:
        insist_not_negative(conductivity=conductivity, area=area)
    return gradient * sum(conductivity * area for conductivity, area in layers)
