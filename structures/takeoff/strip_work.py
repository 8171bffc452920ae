"""How much work one strip is, and what belongs to the wall as a whole: what a measurement is offered."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.intake.pack import GroundWater, Works
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.quantity import Quantity
from structures.takeoff.sheet import measure, quantities
from structures.wall.part import part_of

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.pack import WallSettings
    from structures.takeoff.dewatering import Pumping
    from structures.wall.cutoff import Cutoff

# Measured once for the wall and not strip by strip.
OF_THE_WALL: Final = ("dewatering", "marker", "observation_pipe")


def strip_work(
    cutoff: Cutoff, settings: WallSettings, from_m: float, to_m: float
) -> tuple[Quantity, ...]:
    """Measure the part of a wall between two offsets, in item order, not rounded.

    Source: handbook section 6 on the part alone, so that strips add up to the wall.

    Parameters
    ----------
    cutoff
        The wall of one rock line.
    settings
        The settings that its section was made with.
    from_m, to_m
        Offsets of the strip; what lies outside the wall measures 0.

    Raises
    ------
    ValueError
        If the strip ends before it begins, or there is more than one rock line.
    """
    part = part_of(cutoff, [(from_m, to_m)])
    listed = quantities(measure(part, settings), _dry(cutoff))
    return tuple(one for one in listed if one.item not in OF_THE_WALL)


def wall_work(
    cutoff: Cutoff, settings: WallSettings, pump_hours: Iterable[float]
) -> tuple[Quantity, ...]:
    """Measure what belongs to the wall as a whole: hours pumped, markers, observation pipes.

    Source: the item codes of the interface; the hours are those written down day by day.

    Parameters
    ----------
    cutoff
        The wall of one rock line.
    settings
        The settings that its section was made with.
    pump_hours
        Hours of each day that has a sheet.
    """
    hours = tuple(pump_hours)
    pumped = Quantity(
        "dewatering",
        "hour",
        sum(hours),
        working=f"{len(hours)} day sheets, {' + '.join(f'{one:g}' for one in hours) or '0'} hours",
    )
    listed = quantities(measure(cutoff, settings), _dry(cutoff))
    return (pumped, *(one for one in listed if one.item in OF_THE_WALL[1:]))


def _dry(cutoff: Cutoff) -> Pumping:
    """Pumping of nothing: hours are those of the day sheets."""
    return plan_pumping(cutoff, GroundWater(), Works(pump_hours=0.0))
