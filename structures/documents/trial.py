"""A wall with other settings on a rock line that was read before: nothing is sounded again."""

from __future__ import annotations

from dataclasses import asdict, dataclass, replace
from typing import TYPE_CHECKING, Any

from structures.drawing.section import draw_section
from structures.drawing.survey import view_section
from structures.drawing.view import GroundTest
from structures.ground.rock_line import RockLine
from structures.intake.practice import HANDBOOK, Practice
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.sheet import measure, quantities
from structures.wall.wall import design_wall, wall_cautions

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.intake.pack import SurveyPack
    from structures.life.cautions import Caution


@dataclass(frozen=True, slots=True)
class Trial:
    """A tried wall: its figures as a reading keeps them, its narrow drawing, what goes with it."""

    wall: dict[str, Any]
    quantities: list[dict[str, Any]]
    drawing: str
    cautions: tuple[Caution, ...]


def kept_rock(rock: Mapping[str, Any]) -> RockLine:
    """Give a rock line back from the JSON values of an appraisal; without its draws.

    Parameters
    ----------
    rock
        `rock` of an appraisal, with at least one point in `line`.
    """
    line = rock["line"]
    columns = {name: [point[name] for point in line] for name in line[0]}
    spread = {
        name: None if columns[name][0] is None else columns[name] for name in ("low_m", "high_m")
    }
    return RockLine(rock["source"], columns["offset_m"], columns["level_m"], **spread)


def try_wall(
    pack: SurveyPack,
    rock: Mapping[str, Any],
    tests: Sequence[Mapping[str, Any]],
    *,
    practice: Practice = HANDBOOK,
) -> Trial:
    """Draw the wall of a pack's settings on the middle line of a reading.

    Source: handbook sections 5 and 6.

    Parameters
    ----------
    pack
        The survey with the settings to try.
    rock
        `rock` of the reading's appraisal, source "given" or "estimated".
    tests
        The tests as the reading drew them.
    practice
        The defaults in force of the reading.

    Raises
    ------
    Refused
        If ground and rock line share no stretch.
    """
    line = kept_rock(rock)
    wall, cutoff = design_wall(pack.ground, pack.toes, line.offset_m, line.level_m, pack.wall)
    pumping = plan_pumping(cutoff, pack.ground_water, pack.works, practice=practice)
    said = tuple(wall_cautions(wall, pack.wall, pack.works, practice=practice))
    drawn = view_section(pack, line, cutoff, cautions=said)
    view = replace(drawn, tests=tuple(GroundTest(**test) for test in tests))
    plain = asdict(wall)
    plain["closed"] = {"left": wall.closed_left, "right": wall.closed_right}
    return Trial(
        wall=plain,
        quantities=[asdict(one) for one in quantities(measure(cutoff, pack.wall), pumping)],
        drawing=draw_section(view, name="tried", narrow=True),
        cautions=said,
    )
