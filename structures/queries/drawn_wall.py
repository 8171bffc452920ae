"""The wall as it was drawn and frozen: its ends, its rock line, and how far that may be off."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from structures.queries.runs import runs_of_kind
from structures.queries.sites import newest_rock_line, newest_survey
from structures.queries.survey_reading import READ
from structures.queries.surveys import pack_of
from structures.wall.wall import design_wall

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.intake.pack import SurveyPack
    from structures.models import Design, RockLine, Structure, Survey
    from structures.wall.wall import Wall

# Taken where no test gives the line a range (project choice): rock further below it was not drawn.
ALLOWED_M: Final = 0.50


@dataclass(frozen=True, slots=True, eq=False)
class DrawnWall:
    """A wall with its rock line, shapes (n,); the range is None where no test gives one.

    `design` is the frozen one, None for a survey that nobody drew.
    """

    design: Design | None
    pack: SurveyPack
    wall: Wall
    offset_m: NDArray[np.float64]
    level_m: NDArray[np.float64]
    range_offset_m: NDArray[np.float64] | None
    low_m: NDArray[np.float64] | None
    high_m: NDArray[np.float64] | None

    def line_at(self, offset_m: float) -> float:
        return float(np.interp(offset_m, self.offset_m, self.level_m))

    def range_at(self, offset_m: float) -> tuple[float, float]:
        """Lowest and highest level at which rock was drawn there: the line with its range."""
        line = self.line_at(offset_m)
        if self.range_offset_m is None:
            return line - ALLOWED_M, line + ALLOWED_M
        low = float(np.interp(offset_m, self.range_offset_m, self.low_m))
        high = float(np.interp(offset_m, self.range_offset_m, self.high_m))
        return min(line, low), max(line, high)

    def lowest_m(self, from_m: float, to_m: float) -> tuple[float, float]:
        """Lowest level of the line in a stretch, and of its range."""
        own = () if self.range_offset_m is None else self.range_offset_m
        places = np.concatenate([[from_m, to_m], self.offset_m, own])
        inside = places[(places >= from_m) & (places <= to_m)]
        line = min(self.line_at(one) for one in inside)
        return line, min(self.range_at(one)[0] for one in inside)


def drawn_wall(structure: Structure) -> DrawnWall | None:
    """Give the newest frozen design as a wall; None where nothing is frozen or no line is known.

    Raises
    ------
    Refused
        If ground and rock line of the design share no stretch.
    """
    design = (
        structure.designs.filter(frozen=True)
        .select_related("survey__site__watershed__district", "rock_line")
        .order_by("-version")
        .first()
    )
    return (
        None if design is None else _wall_of(design.survey, design.rock_line, design.wall, design)
    )


def surveyed_wall(structure: Structure) -> DrawnWall | None:
    """Give the wall that the newest survey has, for a sheet of works taken over from before.

    Nothing is judged by it: nobody froze it. None where the survey knows no rock line.

    Raises
    ------
    Refused
        If its ground and rock line share no stretch.
    """
    survey = newest_survey(structure.site)
    return None if survey is None else _wall_of(survey, newest_rock_line(survey), {}, None)


def _wall_of(
    survey: Survey, line: RockLine | None, wall: dict[str, Any], design: Design | None
) -> DrawnWall | None:
    read = _newest_reading(survey)
    own = survey.pack.get("rock_line") or read.get("estimated") or []
    points = own if line is None else line.points
    if not points:
        return None
    pack = pack_of(survey, points=None if line is None else points, wall=wall)
    offset, level = _columns(points, "offset_m", "level_m")
    drawn, _ = design_wall(pack.ground, pack.toes, offset, level, pack.wall)
    estimated = read.get("estimated") or []
    spread = _columns(estimated, "offset_m", "low_m", "high_m") if estimated else (None, None, None)
    return DrawnWall(design, pack, drawn, offset, level, *spread)


def _newest_reading(survey: Survey) -> dict[str, Any]:
    runs = runs_of_kind(READ).filter(params__survey=survey.pk, state="done")
    run = runs.order_by("-created_at").first()
    return {} if run is None else run.result


def _columns(points: list[dict[str, float]], *names: str) -> tuple[NDArray[np.float64], ...]:
    return tuple(np.array([point[name] for point in points], dtype=float) for name in names)
