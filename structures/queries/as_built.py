"""A wall as built beside the wall as drawn: strips, levels, quantities, and what its sheet draws."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from structures.drawing.as_built_view import view_as_built
from structures.drawing.view import StripBuilt
from structures.errors import Refused
from structures.ground.found import take_in
from structures.intake.pack import RockLinePoint
from structures.life import strips as life
from structures.models import Well
from structures.queries.as_dug import found_levels
from structures.queries.districts import today_of
from structures.queries.drawn_wall import drawn_wall
from structures.queries.settings import counted_in
from structures.queries.sites import newest_survey
from structures.queries.surveys import pack_of
from structures.takeoff.as_built import Compared, compare, levelled
from structures.takeoff.markers import count_markers
from structures.wall.cutoff import cut
from structures.wall.section import make_section

if TYPE_CHECKING:
    from datetime import date

    from structures.drawing.view import SectionView
    from structures.ground.found import FoundLevel
    from structures.intake.pack import SurveyPack
    from structures.models import Strip, Structure
    from structures.takeoff.as_built import AsBuilt, Missed
    from structures.wall.cutoff import Cutoff


@dataclass(frozen=True, slots=True)
class StripRow:
    """One strip: lowest rock as drawn and as found, and which part of it nobody measured."""

    strip: Strip
    drawn_m: float | None
    found_m: float | None
    levels: tuple[FoundLevel, ...]
    missed: tuple[Missed, ...]

    @property
    def difference_m(self) -> float | None:
        """Found less drawn, negative where the rock lay deeper."""
        if self.drawn_m is None or self.found_m is None:
            return None
        return self.found_m - self.drawn_m


@dataclass(frozen=True, slots=True)
class Counted:
    """What is counted once for the whole wall; as built None where no record says it."""

    item: str
    unit: str
    drawn: float | None
    built: float | None
    why: str = ""


@dataclass(frozen=True, eq=False, slots=True)
class AsBuiltSheet:
    """Everything on the sheet as built; without ground or levels `why_none` says what is missing."""

    structure: Structure
    today: date
    rows: tuple[StripRow, ...]
    design: int | None
    compared: AsBuilt | None
    counted: tuple[Counted, ...]
    view: SectionView | None
    why_none: str

    @property
    def missed(self) -> tuple[Missed, ...]:
        """Stretches that were covered and that nobody measured."""
        return tuple(
            one for row in self.rows if row.strip.covered_on is not None for one in row.missed
        )

    @property
    def unseen(self) -> tuple[Strip, ...]:
        return tuple(row.strip for row in self.rows if row.strip.covered_unseen)

    @property
    def uncovered(self) -> tuple[Strip, ...]:
        return tuple(row.strip for row in self.rows if row.strip.covered_on is None)

    @property
    def quantities(self) -> tuple[Compared, ...]:
        return () if self.compared is None else self.compared.rows


def as_built_of(structure: Structure) -> AsBuiltSheet:
    """Read the wall as built; where no drawing was frozen here only what was found is known."""
    found = found_levels(structure)
    strips = tuple(structure.strips.order_by("number"))
    pieces = tuple(life.Strip(one.number, one.from_m, one.to_m) for one in strips)
    _, missed = levelled(pieces, found)
    rows = tuple(_row(one, found, missed) for one in strips)
    today = today_of(structure.site.watershed.district)
    blank = AsBuiltSheet(structure, today, rows, None, None, (), None, "")
    if not strips:
        return replace(blank, why_none=_no_strips())
    if not found:
        return replace(blank, why_none=_nothing_found())
    try:
        walls = _walls(structure, found)
    except Refused as refused:
        return replace(blank, why_none=refused.sentence())
    if walls is None:
        return replace(blank, why_none=_no_ground())
    pack, drawn, built, version = walls
    compared = compare(drawn, built, pack.wall, pieces, found)
    marked = tuple(StripBuilt(one.number, one.from_m, one.to_m, _unseen(one)) for one in strips)
    return replace(
        blank,
        design=version,
        compared=compared,
        counted=_counted(structure, pack, drawn),
        view=view_as_built(pack, drawn, built, compared, marked, found),
    )


def _walls(
    structure: Structure, found: tuple[FoundLevel, ...]
) -> tuple[SurveyPack, Cutoff | None, Cutoff, int | None] | None:
    """Give survey, wall as drawn, wall as built and the version of the drawing."""
    kept = drawn_wall(structure)
    if kept is not None:
        pack, line = kept.pack, list(zip(kept.offset_m, kept.level_m, strict=True))
        points = tuple(RockLinePoint(float(x), float(z)) for x, z in line)
        built = _cut(take_in(replace(pack, rock_line=points), found).pack)
        return pack, _cut(replace(pack, rock_line=points)), built, kept.design.version
    survey = newest_survey(structure.site)
    if survey is None:
        return None
    survey.site = structure.site
    counted = counted_in(structure.site.watershed.district)
    bare = pack_of(survey, wall=counted.wall)
    ordered = {one.offset_m: one.level_m for one in sorted(found, key=lambda one: -one.level_m)}
    points = tuple(RockLinePoint(x, ordered[x]) for x in sorted(ordered))
    return bare, None, _cut(replace(bare, rock_line=points)), None


def _cut(pack: SurveyPack) -> Cutoff:
    x, z = ([getattr(one, key) for one in pack.rock_line] for key in ("offset_m", "level_m"))
    return cut(make_section(pack.ground, pack.toes, x, z, pack.wall))


def _row(strip: Strip, found: tuple[FoundLevel, ...], missed: tuple[Missed, ...]) -> StripRow:
    mine = tuple(one for one in found if one.strip == strip.number)
    return StripRow(
        strip,
        strip.drawn_rock_m,
        min((one.level_m for one in mine), default=None),
        mine,
        tuple(one for one in missed if one.strip == strip.number),
    )


def _unseen(strip: Strip) -> str:
    return (strip.unseen_what or "nobody saw it") if strip.covered_unseen else ""


def _counted(structure: Structure, pack: SurveyPack, drawn: Cutoff | None) -> tuple[Counted, ...]:
    """Count what belongs to the whole wall by the records that say it; no record is not zero."""
    sheets = list(structure.day_sheets.filter(pump_hours__isnull=False))
    paper = structure.papers.filter(kind="restored-bed").order_by("-version").first()
    pipes = structure.site.wells.filter(kind=Well.Kind.PIPE).count()
    spacing = pack.wall.marker_spacing_m
    return (
        Counted(
            "dewatering",
            "hour",
            None,
            sum(one.pump_hours for one in {one.day: one for one in reversed(sheets)}.values())
            if sheets
            else None,
            "" if sheets else "no day sheet gives hours of the pump",
        ),
        Counted(
            "marker",
            "each",
            None if drawn is None else _markers(drawn, spacing),
            None if paper is None else paper.content["markers"],
            "" if paper is not None else "no sheet of the restored bed",
        ),
        Counted(
            "observation_pipe",
            "each",
            None if drawn is None else float(pack.wall.observation_pipes),
            pipes or None,
            "" if pipes else "no pipe is entered",
        ),
    )


def _markers(drawn: Cutoff, spacing_m: float) -> float:
    return float(count_markers(drawn.ends.line_m, spacing_m)[0])


def _no_strips() -> str:
    return "No strip is cut here: there is no record of a trench. Cut the wall into strips first."


def _nothing_found() -> str:
    return "Nobody wrote down a level of rock in this trench: the wall as built is not known."


def _no_ground() -> str:
    return "No survey of the ground is kept here: levels found cannot be drawn. Hand in the survey."
