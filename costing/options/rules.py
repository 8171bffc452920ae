"""The rules that a way must pass again with its new depth: drawing, support, water, season.

Source: the office's practice, "rock runs deeper"; rules DW-01 to DW-05 and SG-01.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.errors import Finding
from structures.life.drawing_rules import Limits, drawing_rules

if TYPE_CHECKING:
    from collections.abc import Iterable

    from costing.appraisal import Appraisal
    from costing.options.site import Season
    from structures.errors import Level
    from structures.wall.cutoff import Cutoff

ASKED: frozenset[str] = frozenset({"side_slope", "wet_sand", "support_design", "trench_depth_m"})


def judge_wall(walk: Appraisal) -> Iterable[Finding]:
    """Say where the wall of a way does not close. Source: DW-05 and RK-02."""
    wall = walk.design.wall
    sides = (
        ("left", wall.closed_left, wall.left_end_m, wall.rock_at_left_m),
        ("right", wall.closed_right, wall.right_end_m, wall.rock_at_right_m),
    )
    for side, closed, end_m, rock_m in sides:
        if not closed:
            what = (
                f"{side.capitalize()} end stops in sand at {end_m:.2f} m, rock "
                f"{max(wall.closing_level_m - rock_m, 0.0):.2f} m below the bed."
            )
            yield Finding("wall", f"{side}_end", what, "Survey further out.", "block", "DW-05")
    if not wall.length_m:
        what = "Rock stands at or above the crest all along: there is no room for a wall."
        yield Finding("wall", "crest", what, "Look at another line.", "block", "DW-05")


def judge_trench(
    walk: Appraisal, part: Cutoff | None, *, licensed_design: str = ""
) -> Iterable[Finding]:
    """Say what speaks against digging a part of a wall to its new depth.

    Source: DW-01 to DW-03 as the drawing sheet has them. Sand whose water was not measured counts
    as wet.

    Parameters
    ----------
    walk
        The way's wall.
    part
        What is not covered of it; None where all is.
    licensed_design
        Names the signed design of a licensed engineer for this depth; empty where there is none.
    """
    if part is None or not part.stands.any():
        return
    stands, water_m = part.stands, walk.pack.ground_water.water_level_m
    slopes = (*part.left.slope[stands], *part.right.slope[stands])
    content = {
        "side_slope": round(float(min(slopes)), 6),
        "wet_sand": water_m is None or water_m > float(part.lowest_rock_m[0]),
        "support_design": walk.pack.works.support_design or licensed_design,
        "trench_depth_m": round(float(part.greatest_depth_to_key_m[0]), 6),
    }
    for rule in drawing_rules(Limits(licensed_depth_m=walk.practice.licensed_depth_m)):
        if ASKED.issuperset(rule.needs):
            yield from rule.judge(content)


def judge_water(walk: Appraisal, before: Appraisal) -> Iterable[Finding]:
    """Say what the new depth asks of the pumping. Source: handbook 6.8 to 6.11.

    Parameters
    ----------
    walk, before
        The way's wall, and the wall as it was drawn.
    """
    pumping = walk.design.pumping
    if pumping.hours is None:
        what = f"Pump hours are not known, {pumping.why}."
        yield Finding("dewatering", "pump_hours", what, "Plan the pumping.", "block")
        return
    planned = walk.pack.works.pump_hours is not None
    deeper = walk.design.wall.greatest_depth_m > before.design.wall.greatest_depth_m
    if planned and deeper:
        what = f"{float(pumping.hours[0]):g} pump hours were planned for the drawn depth."
        if pumping.inflow is not None:
            stage = float(pumping.inflow.first_stage_m3_per_h[0])
            what += f" The first stage is {stage:.1f} m3/h now, {float(pumping.pumps[0]):g} pumps."
        remedy = "Plan the pumping again; the price counts the hours as planned."
        yield Finding("dewatering", "pump_hours", what, remedy, "warn")


def judge_season(days: int | None, season: Season, *, level: Level = "block") -> Iterable[Finding]:
    """Say whether a way can be done before the stream is likely to come. Source: SG-01.

    Filling an open trench is only warned of: no date makes it right to leave it open.
    """
    if days is None or season.days_left is None:
        why = season.why or "the days needed are not known"
        what = f"The season cannot be computed: {why}."
        remedy = "Give what is missing."
        yield Finding("season", "days", what, remedy, level, "SG-01")
    elif days > season.days_left:
        late = days - season.days_left
        left = f"{max(season.days_left, 0)} are left"
        what = f"It needs {days} days and {left}: too late by {late} days."
        remedy = "Do not go this way this season." if level == "block" else "Fill it at once."
        yield Finding("season", "days", what, remedy, level, "SG-01")
