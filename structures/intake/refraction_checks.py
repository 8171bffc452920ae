"""Doubts about the first arrivals of a refraction spread (handbook 3.5; the office's checks)."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from structures.intake.pack import RefractionPick
    from structures.intake.parts import Placed
    from structures.intake.tree import Ledger, Node

END_TO_END_SHARE: Final = 0.05  # RF-03

Picks = list["Placed[RefractionPick]"]


def check_spread(picks: Picks, node: Node, ledger: Ledger) -> None:
    """Check that arrivals grow with distance, both directions were shot and times agree."""
    branches: dict[tuple[float, bool], Picks] = {}
    for placed in picks:
        if _reach(placed) != 0:
            branches.setdefault((placed.record.shot_m, _reach(placed) > 0), []).append(placed)
    for _, branch in sorted(branches.items()):
        _check_growth(sorted(branch, key=lambda placed: abs(_reach(placed))), ledger)
    if len({forward for _, forward in branches}) == 1:
        what = "Only one direction was shot."
        remedy = "Dip of rock cannot be told; depth is doubtful."
        ledger.add(node, what, remedy, level="warn", rule="RF-02")
    _check_ends(picks, ledger)


def _reach(placed: Placed[RefractionPick]) -> float:
    return placed.record.geophone_m - placed.record.shot_m


def _check_growth(branch: Picks, ledger: Ledger) -> None:
    for (one, _), (later, node) in pairwise(branch):
        if later.time_ms < one.time_ms:
            what = f"Arrival at {later.geophone_m:g} m is earlier than at {one.geophone_m:g} m."
            ledger.add(node.named("time_ms"), what, "Picks mixed up?", level="hold", rule="RF-01")


def _check_ends(picks: Picks, ledger: Ledger) -> None:
    """Compare each path shot both ways; only one of the two is told."""
    times = {(pick.shot_m, pick.geophone_m): pick.time_ms for pick, _ in picks}
    for pick, node in picks:
        back_ms = times.get((pick.geophone_m, pick.shot_m))
        if back_ms is None or pick.shot_m < pick.geophone_m:
            continue
        differ_ms, longer_ms = abs(pick.time_ms - back_ms), max(pick.time_ms, back_ms)
        if differ_ms > END_TO_END_SHARE * longer_ms:
            what = f"Forward and back times differ {100 * differ_ms / longer_ms:.0f} %."
            place = node.named("time_ms")
            ledger.add(place, what, "One trigger was late.", level="warn", rule="RF-03")
