"""Rules of the drawing sheet: how the sides stand, where water and clay go and come from.

Source: the office's practice, rules DW-01 to DW-08; handbook sections 11 and 12.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.intake.defaults import LEAST_SLOPE, WALL, WORKS
from structures.life.paper_rules import Rule, say

if TYPE_CHECKING:
    from structures.errors import Finding
    from structures.life.paper_rules import Content

PAPER: Final = "drawing sheet"


@dataclass(frozen=True, slots=True)
class Limits:
    """Settings by which a drawing sheet is judged; the office may set stricter ones."""

    licensed_depth_m: float = WORKS["licensed_depth_m"].value  # to the bottom of the key
    bund_least_m: float = WORKS["clay_pit_from_bund_m"].value  # no permission


def drawing_rules(limits: Limits) -> tuple[Rule, ...]:
    """Give the rules of the drawing sheet under the settings of an office."""

    def depth(content: Content) -> list[Finding]:
        return _depth(content, limits)

    def borrow(content: Content) -> list[Finding]:
        return _borrow(content, limits)

    return (
        Rule(_sides, ("side_slope", "wet_sand", "support_design")),
        Rule(depth, ("trench_depth_m", "support_design")),
        Rule(_pumped, ("water_goes_to",)),
        Rule(_clay, ("clay_proven_m3", "clay_needed_m3")),
        Rule(borrow, ("bund_distance_m", "no_bund_near", "bund_consent")),
    )


def _sides(content: Content) -> list[Finding]:
    slope, least_ever = content["side_slope"], WALL["side_slope"].low
    if slope == 0 and content["wet_sand"]:
        what = "Refused: vertical sides in wet sand kill."
        remedy = "Slope or support designed by a licensed engineer under local code."
        return [say(PAPER, "side_slope", what, remedy, rule="DW-01")]
    if slope < least_ever:
        what = f"Sides of {slope:g} across to 1 up are steeper than {least_ever:g}."
        return [say(PAPER, "side_slope", what, "Flatten them.", rule="DW-02")]
    if slope < LEAST_SLOPE and not content["support_design"]:
        what = f"Side {slope:g} is steeper than {LEAST_SLOPE:g} for this ground."
        remedy = "Flatten, or name the signed support design of a licensed engineer."
        return [say(PAPER, "side_slope", what, remedy, rule="DW-02")]
    return []


def _depth(content: Content, limits: Limits) -> list[Finding]:
    depth_m = content["trench_depth_m"]
    if depth_m <= limits.licensed_depth_m or content["support_design"]:
        return []
    what = f"Trench {depth_m:g} m deep with the key."
    return [
        say(
            PAPER, "trench_depth_m", what, "Attach the design of a licensed engineer.", rule="DW-03"
        )
    ]


def _pumped(content: Content) -> list[Finding]:
    if content["water_goes_to"]:
        return []
    what, remedy = "Where does pumped water go?", "Not onto fields or the road."
    return [say(PAPER, "water_goes_to", what, remedy, "hold", "DW-08")]


def _clay(content: Content) -> list[Finding]:
    proven_m3, needed_m3 = content["clay_proven_m3"], content["clay_needed_m3"]
    if proven_m3 >= needed_m3:
        return []
    what = f"Clay proven {proven_m3:g} m3, needed {needed_m3:g}."
    remedy = "Find more before the trench is open."
    return [say(PAPER, "clay_proven_m3", what, remedy, "hold", "DW-06")]


def _borrow(content: Content, limits: Limits) -> list[Finding]:
    distance_m = content["bund_distance_m"]
    if distance_m is None:
        if content["no_bund_near"]:
            return []
        what = "How far the borrow pit lies from a tank bund is blank."
        remedy = "Measure it, or say that there is no bund near."
        return [say(PAPER, "bund_distance_m", what, remedy, rule="DW-07")]
    near = distance_m < limits.bund_least_m
    if not near and content["bund_consent"]:
        return []
    what = f"Borrow pit is {distance_m:g} m from the tank bund."
    remedy = f"{limits.bund_least_m:g} m is this program's least, not a permission: " + (
        "move it."
        if near
        else "move it, or attach the written consent of the bund's owner and of a licensed engineer."
    )
    return [say(PAPER, "bund_distance_m", what, remedy, "block" if near else "hold", "DW-07")]
