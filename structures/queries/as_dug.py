"""The wall as it was dug: the frozen drawing with the rock that the trench showed in its line."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from structures.ground.found import FoundLevel, take_in
from structures.intake.pack import RockLinePoint
from structures.models import FoundLevel as Level
from structures.queries.drawn_wall import drawn_wall
from structures.takeoff.strip_work import strip_work, wall_work
from structures.wall.cutoff import cut
from structures.wall.section import make_section

if TYPE_CHECKING:
    from structures.models import Strip, Structure
    from structures.queries.drawn_wall import DrawnWall
    from structures.takeoff.quantity import Quantity
    from structures.wall.cutoff import Cutoff


@dataclass(frozen=True, eq=False, slots=True)
class DugWall:
    """A wall along the as-found line; `seen` are numbers of the strips whose rock was levelled."""

    drawn: DrawnWall
    cutoff: Cutoff
    seen: frozenset[int]

    def work_of(self, strip: Strip) -> tuple[Quantity, ...]:
        """Measure one strip; where its rock was not levelled, along the line as drawn."""
        return strip_work(self.cutoff, self.drawn.pack.wall, strip.from_m, strip.to_m)

    def work_of_wall(self, structure: Structure) -> tuple[Quantity, ...]:
        """Measure what belongs to the whole wall; of two sheets of a day the later one counts."""
        sheets = structure.day_sheets.filter(pump_hours__isnull=False).order_by("at")
        hours = {one.day: one.pump_hours for one in sheets}
        return wall_work(self.cutoff, self.drawn.pack.wall, hours.values())


def found_levels(structure: Structure) -> tuple[FoundLevel, ...]:
    """Rock seen so far, strip by strip, without the levels that another one corrects."""
    rows = Level.objects.filter(strip__structure=structure, corrections__isnull=True)
    return tuple(
        FoundLevel(*row)
        for row in rows.order_by("strip__number", "offset_m").values_list(
            "offset_m", "level_m", "strip__number"
        )
    )


def dug_wall(structure: Structure) -> DugWall | None:
    """Give the wall as dug so far; None where no drawing with a rock line is frozen.

    Raises
    ------
    Refused
        If a level cannot be so, or ground and line share no stretch.
    """
    drawn = drawn_wall(structure)
    if drawn is None:
        return None
    line = tuple(
        RockLinePoint(*point)
        for point in zip(drawn.offset_m.tolist(), drawn.level_m.tolist(), strict=True)
    )
    found = found_levels(structure)
    pack = take_in(replace(drawn.pack, rock_line=line), found).pack
    x, z = ([getattr(one, key) for one in pack.rock_line] for key in ("offset_m", "level_m"))
    cutoff = cut(make_section(pack.ground, pack.toes, x, z, pack.wall))
    return DugWall(drawn, cutoff, frozenset(one.strip for one in found))
