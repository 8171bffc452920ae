"""Doubts about probes: a boulder, a gap, the end of the rod.

The ids are those of the office's list of checks; figures marked C there are common practice.
"""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING, Final

from structures.intake.line_checks import levels_at

if TYPE_CHECKING:
    from structures.intake.pack import GroundPoint, Probe, RockTest, Toes
    from structures.intake.parts import Placed
    from structures.intake.tree import Ledger, Node

BOULDER_M: Final = 1.0  # PR-05
GAP_M: Final = 12.0  # PR-06 [C]
ROD_TIMES: Final = 3  # PR-07


def check_lone_refusal(
    probes: list[Placed[Probe]], ground: list[Placed[GroundPoint]], ledger: Ledger
) -> None:
    """Warn of a refusal more than 1 m above the feet of both neighbours."""
    ordered = sorted(probes, key=lambda placed: placed.record.offset_m)
    feet = levels_at(ordered, ground) - [probe.depth_m for probe, _ in ordered]
    for before_m, foot_m, after_m, (probe, node) in zip(
        feet, feet[1:], feet[2:], ordered[1:], strict=False
    ):
        above_m = foot_m - max(before_m, after_m)
        if probe.refused and above_m > BOULDER_M:
            what = (
                f"The probe at {probe.offset_m:g} m refused {above_m:.2f} m above its neighbours."
            )
            remedy = "Boulder? Probe again within 1 m."
            ledger.add(node.named("depth_m"), what, remedy, level="warn", rule="PR-05")


def check_gaps(
    probes: list[Placed[Probe]], rock: list[Placed[RockTest]], toes: Toes, ledger: Ledger
) -> None:
    """Hold a gap of more than 12 m between tests across the bed."""
    if not probes:
        return
    tests = sorted([*probes, *rock], key=lambda placed: placed.record.offset_m)
    for (one, _), (later, node) in pairwise(tests):
        gap = later.offset_m - one.offset_m
        if gap > GAP_M and later.offset_m > toes.left_m and one.offset_m < toes.right_m:
            what = f"No probe between {one.offset_m:g} and {later.offset_m:g} m."
            remedy = "Rock is not known there: probe, or bore."
            ledger.add(node.named("offset_m"), what, remedy, level="hold", rule="PR-06")


def check_rod(probes: list[Placed[Probe]], ledger: Ledger) -> None:
    """Warn where more than three probes stopped at one depth: that is the rod, not the ground."""
    stopped: dict[float, list[Node]] = {}
    for probe, node in probes:
        if not probe.refused:
            stopped.setdefault(probe.depth_m, []).append(node)
    for depth_m, nodes in stopped.items():
        if len(nodes) > ROD_TIMES:
            what = f"{len(nodes)} probes stop at {depth_m:g} m, the length of the rod."
            remedy = "Rock is deeper; a longer rod or a bore is needed here."
            ledger.add(nodes[0].named("depth_m"), what, remedy, level="warn", rule="PR-07")
