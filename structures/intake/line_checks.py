"""What stands on the wall line, judged together: ground, toes, tests and the settled rock line.

Source of the rules: handbook 1.6 and 1.7; the ids are those of the office's list of checks.
"""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.intake.fields import DEPTH_MOST_M
from structures.intake.parts import Placed, check_rising

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.intake.pack import GroundPoint, GroundWater, RockLinePoint, Toes
    from structures.intake.tree import Ledger, Node

SAME_LEVEL_M: Final = 1e-6  # rounding of levels typed with three decimals
JUMP_M: Final = 3.0  # XS-03: a staff misread by metres
BED_GAP_M: Final = 10.0  # handbook 1.7
POINTS_LEAST: Final = 5  # XS-01
FOOT_ABOVE_M: Final = 0.05  # RK-03: reading of a rod
LEVEL_LIKE_M: Final = 15.0  # LV-09: shallower figures are depths even where the datum lies low


def check_ground(ground: list[Placed[GroundPoint]], ledger: Ledger) -> None:
    """Check the order of the ground points and steps between neighbours."""
    check_rising(ground, ledger, rule="XS-02")
    for (one, _), (later, node) in pairwise(ground):
        jump = abs(later.level_m - one.level_m)
        if jump > JUMP_M:
            what = f"Ground jumps {jump:.2f} m between {one.offset_m:g} and {later.offset_m:g} m."
            ledger.add(
                node.named("level_m"), what, "Staff misread by a metre?", level="warn", rule="XS-03"
            )


def check_toes(toes: Toes, node: Node, ground: list[Placed[GroundPoint]], ledger: Ledger) -> None:
    """Check that the toes lie inside the ground, left before right, each on a ground point."""
    offsets = [point.offset_m for point, _ in ground]
    for key, toe_m in (("left_m", toes.left_m), ("right_m", toes.right_m)):
        place = node.named(key)
        if not offsets[0] <= toe_m <= offsets[-1]:
            what = f"The toe at {toe_m:g} m lies outside the ground ({offsets[0]:g} to {offsets[-1]:g} m)."
            ledger.add(place, what, "Survey the ground past each bank, or mend the offset.")
        elif toe_m not in offsets:
            what = f"No ground point stands at the toe at {toe_m:g} m."
            remedy = "Level the toe; the bed is read between its neighbours until then."
            ledger.add(place, what, remedy, level="warn", rule="XS-01")
    if toes.left_m >= toes.right_m:
        what = (
            f"The left toe ({toes.left_m:g} m) is not left of the right one ({toes.right_m:g} m)."
        )
        ledger.add(node.named("left_m"), what, "Offsets run from the left bank; exchange the toes?")


def check_section(toes: Toes, ground: list[Placed[GroundPoint]], ledger: Ledger) -> None:
    """Warn where the cross line is thin: few points, a bank not surveyed, wide gaps in the bed."""
    if len(ground) < POINTS_LEAST:
        what = f"The line has {len(ground)} points; {POINTS_LEAST} are the least for a shape."
        ledger.add(ground[0].node, what, "Level more points.", level="warn", rule="XS-01")
    first, last = ground[0], ground[-1]
    for side, end, toe_m in (("left", first, toes.left_m), ("right", last, toes.right_m)):
        if end.record.offset_m == toe_m:
            what = f"The line has no {side} bank: it ends at the toe."
            ledger.add(end.node, what, "Survey on to the bank.", level="warn", rule="XS-01")
    for (one, _), (later, node) in pairwise(ground):
        gap = later.offset_m - one.offset_m
        if gap > BED_GAP_M and later.offset_m > toes.left_m and one.offset_m < toes.right_m:
            what = (
                f"{gap:g} m of bed between {one.offset_m:g} and {later.offset_m:g} m have no point."
            )
            remedy = f"Level a point each {BED_GAP_M:g} m and where the slope changes."
            ledger.add(node, what, remedy, level="warn", rule="XS-01")


def check_inside(placed: list[Placed], ground: list[Placed[GroundPoint]], ledger: Ledger) -> bool:
    """Refuse what was tested outside the surveyed ground: its level is not known there."""
    first_m, last_m = ground[0].record.offset_m, ground[-1].record.offset_m
    blocks = ledger.blocks
    for record, node in placed:
        if not first_m <= record.offset_m <= last_m:
            what = f"Offset {record.offset_m:g} m lies outside the ground ({first_m:g} to {last_m:g} m)."
            ledger.add(node.named("offset_m"), what, "Other line, or wrong offset?", rule="PR-08")
    return ledger.blocks == blocks


def check_depths(tests: list[Placed], ground: list[Placed[GroundPoint]], ledger: Ledger) -> None:
    """Hold a depth that stands among the ground's levels."""
    levels = [point.level_m for point, _ in ground]
    for test, node in tests:
        if test.depth_m > LEVEL_LIKE_M and min(levels) - JUMP_M <= test.depth_m <= max(levels):
            what = f"{test.depth_m:g} m stands among the levels of the ground."
            remedy = "A level typed as a depth? Write the depth below ground."
            ledger.add(node.named("depth_m"), what, remedy, level="hold", rule="LV-09")


def check_rock_line(
    line: list[Placed[RockLinePoint]], ground: list[Placed[GroundPoint]], ledger: Ledger
) -> None:
    """Refuse a rock line out of order, outside the ground, above it, or far below it."""
    blocks = ledger.blocks
    check_rising(line, ledger, rule="XS-02")
    if not check_inside(line, ground, ledger) or ledger.blocks > blocks:
        return
    for (point, node), ground_m in zip(line, levels_at(line, ground), strict=True):
        above_m = point.level_m - ground_m
        place = node.named("level_m")
        if above_m > SAME_LEVEL_M:
            what = f"Rock stands {above_m:.2f} m above the ground at {point.offset_m:g} m."
            ledger.add(place, what, "A depth typed as a level, or another bench mark?")
        elif above_m < -DEPTH_MOST_M:
            what = f"Rock lies {-above_m:.2f} m below the ground at {point.offset_m:g} m."
            ledger.add(place, what, "A depth typed as a level?")
    if ledger.blocks == blocks:
        _check_between(line, ground, ledger)


def _check_between(
    line: list[Placed[RockLinePoint]], ground: list[Placed[GroundPoint]], ledger: Ledger
) -> None:
    """Refuse a line that is under the ground at its points and above it between them."""
    covered = _within(ground, line)
    for (point, node), rock_m in zip(covered, levels_at(covered, line), strict=True):
        above_m = rock_m - point.level_m
        if above_m > SAME_LEVEL_M:
            later = next(placed for placed in line if placed.record.offset_m >= point.offset_m)
            what = (
                f"Rock drawn straight stands {above_m:.2f} m above the ground point at "
                f"{point.offset_m:g} m ({node.where})."
            )
            ledger.add(later.node, what, "Add a point of the rock line there.")
            return


def check_feet(
    line: list[Placed[RockLinePoint]],
    feet: list[Placed],
    ground: list[Placed[GroundPoint]],
    ledger: Ledger,
) -> None:
    """Hold a settled line that stands above the foot of a probe or of a hole that ended in soil."""
    covered = _within(feet, line)
    rocks_m, grounds_m = levels_at(covered, line), levels_at(covered, ground)
    for (test, node), rock_m, ground_m in zip(covered, rocks_m, grounds_m, strict=True):
        foot_m = ground_m - test.depth_m
        if rock_m - foot_m > FOOT_ABOVE_M:
            what = (
                f"Rock drawn at {rock_m:.2f} m, but the test at {test.offset_m:g} m went down to "
                f"{foot_m:.2f} m."
            )
            place = node.named("depth_m")
            ledger.add(place, what, "Lower the line.", level="hold", rule="RK-03")


def check_water_level(
    water: GroundWater, node: Node, ground: list[Placed[GroundPoint]], ledger: Ledger
) -> None:
    """Refuse a water level far below the ground; hold one above all of it."""
    level_m = water.water_level_m
    if level_m is None:
        return
    levels = [point.level_m for point, _ in ground]
    place = node.named("water_level_m")
    if level_m < min(levels) - DEPTH_MOST_M:
        what = f"Water at {level_m:g} m lies {min(levels) - level_m:.2f} m below the bed."
        ledger.add(place, what, "A depth typed as a level? Write the level on the site's datum.")
    elif level_m > max(levels):
        what = f"Water at {level_m:g} m stands above all surveyed ground ({max(levels):g} m)."
        ledger.add(place, what, "Another bench mark?", level="hold", rule="LV-09")


def levels_at(placed: list[Placed], points: list[Placed]) -> NDArray[np.float64]:
    """Levels of a line at the offsets of records, straight between its points (handbook 1.6)."""
    return np.interp(
        [record.offset_m for record, _ in placed],
        [point.offset_m for point, _ in points],
        [point.level_m for point, _ in points],
    )


def _within(placed: list[Placed], line: list[Placed]) -> list[Placed]:
    first_m, last_m = line[0].record.offset_m, line[-1].record.offset_m
    return [each for each in placed if first_m <= each.record.offset_m <= last_m]
