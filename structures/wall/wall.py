"""The wall of one rock line in plain numbers, and the cautions that go with it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from structures.intake.defaults import LEAST_SLOPE, WALL
from structures.intake.practice import HANDBOOK, Practice
from structures.life.cautions import Caution, caution
from structures.life.changed import changed_default
from structures.wall.cutoff import Cutoff, cut
from structures.wall.section import make_section
from structures.wall.stretch import LowGround, Stretch, find_bars, find_low_ground

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from structures.intake.pack import GroundPoint, Toes, WallSettings, Works


@dataclass(frozen=True, slots=True)
class Wall:
    """One wall: levels, ends, lengths, areas, greatest height and depths.

    With an open flank the end is the last known offset and the figures are those of the surveyed
    part. `rock_at_left_m` and `rock_at_right_m` are the rock at the ends; `steepest_slope` the
    least side slope along the wall, None where no wall stands.
    """

    bed_level_m: float
    crest_level_m: float
    closing_level_m: float
    left_end_m: float
    right_end_m: float
    closed_left: bool
    closed_right: bool
    rock_at_left_m: float
    rock_at_right_m: float
    length_m: float
    face_area_m2: float
    face_above_rock_m2: float
    greatest_height_m: float
    greatest_depth_m: float
    greatest_depth_to_key_m: float
    steepest_slope: float | None
    bars: tuple[Stretch, ...]
    low_ground: tuple[LowGround, ...]

    @property
    def closed(self) -> bool:
        """Do both flanks tie into rock."""
        return self.closed_left and self.closed_right


def design_wall(
    ground: tuple[GroundPoint, ...],
    toes: Toes,
    offset_m: ArrayLike,
    level_m: ArrayLike,
    settings: WallSettings,
) -> tuple[Wall, Cutoff]:
    """Design the wall of one rock line.

    Source: handbook section 5.

    Parameters
    ----------
    ground
        Points of the ground, offsets rising.
    toes
        Feet of the bank slopes.
    offset_m, level_m
        The rock line, shapes (m,).
    settings
        Settings of wall and trench.

    Raises
    ------
    Refused
        If ground and rock line have no stretch in common.
    ValueError
        If the rock line has more than one draw, or shapes differ.
    """
    cutoff = cut(make_section(ground, toes, offset_m, level_m, settings))
    return describe_wall(cutoff), cutoff


def describe_wall(cutoff: Cutoff) -> Wall:
    """Put the wall of one rock line in plain numbers.

    Raises
    ------
    ValueError
        If the section holds more than one rock line.
    """
    section, ends = cutoff.section, cutoff.ends
    bars, low_ground = find_bars(cutoff), find_low_ground(cutoff)
    left, right = float(ends.left_m[0]), float(ends.right_m[0])
    stands = cutoff.stands
    slopes = (*cutoff.left.slope[stands], *cutoff.right.slope[stands])
    return Wall(
        bed_level_m=section.bed_level_m,
        crest_level_m=section.crest_level_m,
        closing_level_m=section.closing_level_m,
        left_end_m=left,
        right_end_m=right,
        closed_left=bool(ends.closed_left[0]),
        closed_right=bool(ends.closed_right[0]),
        rock_at_left_m=section.rock_at_m(left),
        rock_at_right_m=section.rock_at_m(right),
        length_m=float(cutoff.length_m[0]),
        face_area_m2=float(cutoff.face_area_m2[0]),
        face_above_rock_m2=float(cutoff.face_above_rock_m2[0]),
        greatest_height_m=float(cutoff.greatest_height_m[0]),
        greatest_depth_m=float(cutoff.greatest_depth_m[0]),
        greatest_depth_to_key_m=float(cutoff.greatest_depth_to_key_m[0]),
        steepest_slope=float(min(slopes)) if slopes else None,
        bars=bars,
        low_ground=low_ground,
    )


def wall_cautions(
    wall: Wall, settings: WallSettings, works: Works, *, practice: Practice = HANDBOOK
) -> tuple[Caution, ...]:
    """List what must be said beside a wall, in the order of the handbook.

    Source: handbook 5.4 to 5.6 (flanks, low ground, rock bars), 11 and 12 (depth, slopes,
    engineering defaults that were changed).
    """
    return (
        *_flank_cautions(wall),
        *(
            caution(f"low-ground-{low.side}", from_m=low.from_m, to_m=low.to_m)
            for low in wall.low_ground
        ),
        *_bar_cautions(wall),
        *_depth_cautions(wall, practice.licensed_depth_m),
        *_slope_cautions(wall, works),
        *_default_cautions(settings, practice),
    )


def _flank_cautions(wall: Wall) -> list[Caution]:
    flanks = (
        ("left", wall.closed_left, wall.left_end_m, wall.rock_at_left_m),
        ("right", wall.closed_right, wall.right_end_m, wall.rock_at_right_m),
    )
    return [
        caution(
            f"flank-open-{side}", offset_m=end_m, below_m=max(0.0, wall.closing_level_m - rock_m)
        )
        for side, closed, end_m, rock_m in flanks
        if not closed
    ]


def _bar_cautions(wall: Wall) -> list[Caution]:
    if not wall.length_m:
        return [caution("no-wall")]
    return [caution("rock-bar", from_m=bar.from_m, to_m=bar.to_m) for bar in wall.bars]


def _depth_cautions(wall: Wall, limit_m: float) -> list[Caution]:
    # Six decimals, so that levels booked to the centimetre meet the limit exactly (handbook 8.4).
    if round(wall.greatest_depth_to_key_m, 6) <= limit_m:
        return []
    return [caution("trench-deep", depth_m=wall.greatest_depth_to_key_m, limit_m=limit_m)]


def _slope_cautions(wall: Wall, works: Works) -> list[Caution]:
    slope = wall.steepest_slope
    if slope is None or round(slope, 6) >= WALL["side_slope"].value:
        return []
    if round(slope, 6) >= LEAST_SLOPE:
        return [caution("side-drained", slope=slope)]
    if works.support_design:
        return [caution("side-supported", slope=slope, design=works.support_design)]
    return [caution("side-steep", slope=slope, limit=LEAST_SLOPE)]


def _default_cautions(settings: WallSettings, practice: Practice) -> list[Caution]:
    changed = [WALL[key] for key in settings.changed if WALL[key].owner == "E"]
    return [
        changed_default(default, _value(settings, default.key), practice.decision(default.key))
        for default in changed
    ]


def _value(settings: WallSettings, key: str) -> float:
    """Value of one setting; of side slopes the one farthest from the default."""
    if key != "side_slope":
        return getattr(settings, key)
    slopes = [station.slope for station in settings.side_slope]
    return max(slopes, key=lambda slope: abs(slope - WALL[key].value))
