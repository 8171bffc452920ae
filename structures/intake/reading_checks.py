"""What only shows when all readings of a file lie side by side."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import replace
from statistics import median
from typing import TYPE_CHECKING, Final

from structures.intake.tree import Node

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.readings import WellReading
    from structures.intake.tree import Ledger

ZERO_BESIDE_M: Final = 1.0  # a well that is mostly deeper than this hardly stands at its mark


def check_readings(readings: Iterable[WellReading], ledger: Ledger) -> list[WellReading]:
    """Give the readings again, with a reason on those that must wait for a decision.

    A well of two roles blocks; the same row twice counts once; two values at one time and a zero
    in a deep well are held (rules LV-13 and LV-07).
    """
    ordered = list(readings)
    _check_roles(ordered, ledger)
    return _hold_zeros(_hold_doubles(ordered, ledger), ledger)


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


def _what(reading: WellReading) -> tuple[object, ...]:
    return reading.state, reading.dry, reading.depth_m, reading.height_m


def _depth(reading: WellReading) -> str:
    if reading.depth_m is None:
        return "no depth"
    return f"{'dry, ' if reading.dry else ''}{reading.depth_m:g} m"
