"""What only shows when all readings of a file lie side by side."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import replace
from itertools import pairwise
from statistics import median, quantiles
from typing import TYPE_CHECKING, Final

from structures.intake.tree import Node

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.readings import WellReading
    from structures.intake.tree import Ledger

JUMP_FROM: Final = 12  # readings of a well from which on a usual move is known (project choice)
JUMP_TIMES: Final = 3.0  # rule LV-08; usual is what three moves in four stay under
JUMP_LEAST_M: Final = (
    0.5  # quiet wells are not held for less than three times this (project choice)
)
SLIPS: Final = (
    (10.0, "a decimal slip"),
    (0.1, "a decimal slip"),
    (0.3048, "feet"),  # exact, international foot
)
ZERO_BESIDE_M: Final = 1.0  # a well that is mostly deeper than this hardly stands at its mark


def check_readings(readings: Iterable[WellReading], ledger: Ledger) -> list[WellReading]:
    """Give the readings again, with a reason on those that must wait for a decision.

    A well of two roles blocks; the same row twice counts once; two values at one time, a zero in a
    deep well and a lone jump there and back are held (rules LV-13, LV-07 and LV-08).
    """
    ordered = list(readings)
    _check_roles(ordered, ledger)
    return _hold_jumps(_hold_zeros(_hold_doubles(ordered, ledger), ledger), ledger)


def _check_roles(readings: list[WellReading], ledger: Ledger) -> None:
    first: dict[str, WellReading] = {}
    told = set()
    for reading in readings:
        known = first.setdefault(reading.well, reading)
        if known.role != reading.role and reading.well not in told:
            what = f"{reading.well} is {reading.role} here and {known.role} at {known.where}."
            ledger.add(Node(None, reading.where, "role"), what, "One role a well.", rule="WL-01")
            told.add(reading.well)


def _hold_doubles(readings: list[WellReading], ledger: Ledger) -> list[WellReading]:
    """Keep one of rows that say the same; hold those that say different things of one time."""
    same: dict[tuple[str, object], list[int]] = defaultdict(list)
    for place, reading in enumerate(readings):
        same[reading.well, reading.read_at].append(place)
    kept = list(readings)
    for places in same.values():
        if len(places) == 1:
            continue
        first = readings[places[0]]
        others = [readings[place] for place in places[1:]]
        if all(_what(other) == _what(first) for other in others):
            for place in places[1:]:
                kept[place] = replace(kept[place], left_out="the same row twice")
            node = Node(None, others[0].where)
            what = f"The same reading of {first.well} stands at {first.where}; counted once."
            ledger.add(node, what, "Nothing to do.", level="note", rule="LV-13")
            continue
        for place in places:
            kept[place] = replace(kept[place], left_out="two values at one time")
        values = ", ".join(_depth(readings[place]) for place in places)
        what = (
            f"Readings of {first.well} at {first.read_at.isoformat(timespec='minutes')}: {values}."
        )
        node = Node(None, others[0].where, "depth_m")
        remedy = f"None is used; keep one (the first is at {first.where})."
        ledger.add(node, what, remedy, level="hold", rule="LV-13")
    return kept


def _hold_zeros(readings: list[WellReading], ledger: Ledger) -> list[WellReading]:
    depths: dict[str, list[float]] = defaultdict(list)
    for reading in readings:
        if reading.depth_m and not reading.left_out:
            depths[reading.well].append(reading.depth_m)
    usual_m = {well: median(values) for well, values in depths.items()}
    held = {
        place
        for place, one in enumerate(readings)
        if one.depth_m == 0.0
        and not (one.left_out or one.dry)
        and usual_m.get(one.well, 0.0) > ZERO_BESIDE_M
    }
    for reading in (readings[place] for place in sorted(held)):
        what = f"0 m where {reading.well} mostly stands at {usual_m[reading.well]:.2f} m."
        node = Node(None, reading.where, "depth_m")
        remedy = "It is not used. Blank typed as zero? Zero means water at the mark."
        ledger.add(node, what, remedy, level="hold", rule="LV-07")
    reason = "zero depth, waits for a decision"
    return [
        replace(one, left_out=reason) if place in held else one
        for place, one in enumerate(readings)
    ]


def _hold_jumps(readings: list[WellReading], ledger: Ledger) -> list[WellReading]:
    """Hold a reading that leaves both its neighbours the same way by far more than is usual."""
    by_well: dict[str, list[int]] = defaultdict(list)
    for place, one in enumerate(readings):
        if not (one.left_out or one.dry):
            by_well[one.well].append(place)
    kept = list(readings)
    for places in by_well.values():
        places.sort(key=lambda place: readings[place].read_at)
        rows = [readings[place] for place in places]
        if len(rows) < JUMP_FROM:
            continue
        jumps_m = [later.level_m - earlier.level_m for earlier, later in pairwise(rows)]
        usual_m = quantiles([abs(jump) for jump in jumps_m], n=4)[-1]
        most_m = JUMP_TIMES * max(usual_m, JUMP_LEAST_M)
        for place, (there_m, back_m) in zip(places[1:], pairwise(jumps_m), strict=False):
            if there_m * back_m < 0.0 and min(abs(there_m), abs(back_m)) > most_m:
                kept[place] = replace(kept[place], left_out="jump, waits for a decision")
                _tell_jump(readings[place], there_m, usual_m, ledger)
    return kept


def _tell_jump(reading: WellReading, jump_m: float, usual_m: float, ledger: Ledger) -> None:
    expected_m = reading.depth_m + jump_m
    fitting = [
        f"{words} ({reading.depth_m * factor:.2f} m)"
        for factor, words in SLIPS
        if abs(reading.depth_m * factor - expected_m) <= max(usual_m, JUMP_LEAST_M)
    ]
    guess = f" It fits as {' or '.join(fitting)}." if fitting else ""
    what = (
        f"{reading.well} moved {jump_m:+.2f} m and back in one reading; {usual_m:.2f} m is a great "
        f"move for it.{guess}"
    )
    remedy = "It is not used. Decimal slip, feet, wrong well? Decide."
    node = Node(None, reading.where, "depth_m")
    ledger.add(node, what, remedy, level="hold", rule="LV-08")


def _what(reading: WellReading) -> tuple[object, ...]:
    return reading.state, reading.dry, reading.depth_m, reading.height_m


def _depth(reading: WellReading) -> str:
    if reading.depth_m is None:
        return "no depth"
    return f"{'dry, ' if reading.dry else ''}{reading.depth_m:g} m"
