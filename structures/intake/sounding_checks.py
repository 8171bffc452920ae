"""Doubts about a sounding's readings, kept in the order of the sheet and corrected openly.

The ids are those of the office's list of checks; 15 % and the factor 2 are common practice there.
"""

from __future__ import annotations

import math
from itertools import groupby, pairwise
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from structures.intake.pack import SoundingReading
    from structures.intake.parts import Placed
    from structures.intake.tree import Ledger, Node

READINGS_LEAST: Final = 8  # SO-08
OVERLAP_SHARE: Final = 0.15  # SO-04 [C]
NEIGHBOUR_RATIO: Final = 2.0  # SO-05
STEEPEST: Final = 1.0  # SO-06: 45 degrees on log-log, the limit over insulating rock
SDS_OF_SLOPE: Final = 2.0  # a slope is called too steep only beyond the noise of its two readings
SAME: Final = 1e-6  # relative; spacings typed from the same sheet

Readings = list["Placed[SoundingReading]"]


def leave_out_wide(readings: Readings, ledger: Ledger) -> Readings:
    """Give the readings without those whose MN/2 exceeds a third of AB/2, each held by a finding."""
    kept = []
    for place, placed in enumerate(readings, start=1):
        reading, node = placed
        if reading.mn2_m <= reading.ab2_m / 3.0 * (1.0 + SAME):
            kept.append(placed)
            continue
        what = f"MN/2 {reading.mn2_m:g} is too wide for AB/2 {reading.ab2_m:g} at reading {place}"
        mn = node.named("mn2_m")
        if reading.mn2_m >= reading.ab2_m:
            ledger.add(
                mn, f"{what}.", "Was full MN typed as half, or the columns exchanged?", rule="SO-02"
            )
        else:
            what += "; the reading is left out."
            ledger.add(mn, what, "Was full MN typed as half?", level="hold", rule="SO-02")
    return kept


def check_sounding(array: str, readings: Readings, node: Node, ledger: Ledger) -> None:
    """Check one sounding's curve; nothing is taken away or reordered here."""
    if len(readings) < READINGS_LEAST:
        what = f"Only {len(readings)} readings; {READINGS_LEAST} are needed to read layers."
        ledger.add(node, what, "Kept as a note.", level="hold", rule="SO-08")
    segments = [readings]
    if array == "schlumberger":
        segments = [list(part) for _, part in groupby(readings, key=lambda p: p.record.mn2_m)]
        for before, after in pairwise(segments):
            _check_overlap(before, after, ledger)
    for segment in segments:
        _check_order(segment, ledger)
        _check_slope(segment, ledger)
    _check_neighbours(readings, ledger)


def _check_order(segment: Readings, ledger: Ledger) -> None:
    for (one, _), (later, node) in pairwise(segment):
        if later.ab2_m < one.ab2_m:
            what = f"AB/2 falls from {one.ab2_m:g} to {later.ab2_m:g} m."
            remedy = "Order or typing? Keep the sheet's order and correct openly."
            ledger.add(node.named("ab2_m"), what, remedy, level="hold", rule="SO-01")


def _check_overlap(before: Readings, after: Readings, ledger: Ledger) -> None:
    """Compare the readings taken twice where MN changed."""
    first = after[0]
    earlier = {f"{one.record.ab2_m:.6g}": one.record for one in before}
    repeats = [(earlier.get(f"{later.record.ab2_m:.6g}"), later) for later in after]
    twice = [(one, later) for one, later in repeats if one]
    if not twice:
        what = f"MN changed at {first.record.ab2_m:g} m without a repeat reading."
        remedy = "The two branches cannot be tied: repeat one AB/2 with both."
        ledger.add(first.node.named("mn2_m"), what, remedy, level="warn", rule="SO-03")
    for one, (later, node) in twice:
        share = abs(later.apparent_resistivity_ohm_m / one.apparent_resistivity_ohm_m - 1.0)
        if share > OVERLAP_SHARE:
            what = f"The repeat at AB/2 {later.ab2_m:g} differs {100 * share:.0f} %."
            remedy = "Near-surface patch or loose contact."
            place = node.named("apparent_resistivity_ohm_m")
            ledger.add(place, what, remedy, level="warn", rule="SO-04")


def _check_neighbours(readings: Readings, ledger: Ledger) -> None:
    blamed = False
    for (one, _), (later, node) in pairwise(readings):
        ratio = later.apparent_resistivity_ohm_m / one.apparent_resistivity_ohm_m
        off = not 1.0 / NEIGHBOUR_RATIO <= ratio <= NEIGHBOUR_RATIO
        blamed = off and not blamed  # the way back from a slip is not a second one
        if blamed:
            what = (
                f"{later.apparent_resistivity_ohm_m:g} ohm m at AB/2 {later.ab2_m:g} stands off by "
                f"{max(ratio, 1.0 / ratio):.1f} times."
            )
            place = node.named("apparent_resistivity_ohm_m")
            ledger.add(place, what, "Decimal point slipped?", level="hold", rule="SO-05")


def _check_slope(segment: Readings, ledger: Ledger) -> None:
    for (one, _), (later, node) in pairwise(segment):
        if later.ab2_m <= one.ab2_m:
            continue
        step = math.log(later.ab2_m / one.ab2_m)
        rise = math.log(later.apparent_resistivity_ohm_m / one.apparent_resistivity_ohm_m)
        noise = math.hypot(one.log_sd(), later.log_sd())
        if rise > STEEPEST * step + SDS_OF_SLOPE * noise:
            what = f"The curve climbs steeper than layered ground allows at AB/2 {later.ab2_m:g}."
            remedy = "Check cable leak or a wrong factor."
            place = node.named("apparent_resistivity_ohm_m")
            ledger.add(place, what, remedy, level="hold", rule="SO-06")
