"""The words of an appraisal on paper: the answer, what is not known, names of items and units."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from costing.documents.screen import NOT_KNOWN, WATER_ROWS

if TYPE_CHECKING:
    from datetime import date

    from costing.appraisal import Appraisal
    from costing.price.abstract import Line
    from structures.takeoff.quantity import Quantity
    from structures.wall.wall import Wall

MONTHS: Final = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"]
UNITS: Final = {"m2": "m²", "m3": "m³", "m3/day": "m³/day"}


def day_words(day: date) -> str:
    """Write a day as it stands on paper: 14 Mar 2027."""
    return f"{day.day} {MONTHS[day.month - 1]} {day.year}"


def unit_words(unit: str) -> str:
    """Write a unit as it stands on paper."""
    return UNITS.get(unit, unit)


def item_words(line: Line | Quantity) -> str:
    """Name an item, a lift of the excavation with its limits below ground."""
    words = line.item.replace("_", " ")
    return words if line.from_m is None else f"{words} {line.from_m:.1f} to {line.to_m:.1f} m"


def amount_words(value: float | None) -> str:
    """Write a computed value: two decimals, four under 1; a value not known in words."""
    if value is None:
        return NOT_KNOWN
    return f"{value:.2f}" if abs(value) >= 1.0 or value == 0.0 else f"{value:.4f}"


def answer(found: Appraisal) -> str:
    """Answer in one or two sentences whether the wall closes."""
    if found.design is None:
        return "Not known: there is no rock line, so no wall can be drawn."
    wall = found.design.wall
    if not wall.length_m:
        return "There is no room for a wall: rock stands at or above the crest all along the line."
    return f"{_closing(wall)}{_line_words(found)}"


def _closing(wall: Wall) -> str:
    if wall.closed:
        return (
            f"As drawn, yes: rock reaches bed level {wall.closing_level_m:.2f} m at offset "
            f"{wall.left_end_m:.2f} m on the left and at {wall.right_end_m:.2f} m on the right."
        )
    ends = (
        ("left", wall.closed_left, wall.left_end_m),
        ("right", wall.closed_right, wall.right_end_m),
    )
    still_open = " and ".join(
        f"on the {side} at offset {end:.2f} m" for side, closed, end in ends if not closed
    )
    return f"No, not as surveyed: rock is still below the bed where the line ends, {still_open}."


def _line_words(found: Appraisal) -> str:
    if found.rock.source == "given":
        return " The rock line is the one an engineer settled."
    share = "" if found.spread is None else _share_words(found.spread.open_flank_share)
    return f" The rock line is the 50 % line of the tests.{share}"


def _share_words(share: float) -> str:
    return f" A flank opens in {100.0 * share:.0f} of 100 draws of the line."


def not_known(found: Appraisal) -> list[str]:
    """List what nobody has seen, measured or given, each in one sentence."""
    return [
        *_rock_unknown(found),
        *(
            f"Sounding {one.label}: {one.refusal.sentence}"
            for one in found.soundings
            if one.refusal
        ),
        *_money_unknown(found),
        *(
            f"{words[0].upper()}{words[1:]}: {found.water.reasons[key]}."
            for words, key, _ in WATER_ROWS
            if key in found.water.reasons
        ),
    ]


def _rock_unknown(found: Appraisal) -> list[str]:
    ground = found.pack.ground
    first, last = ground[0].offset_m, ground[-1].offset_m
    if found.rock.source == "none":
        return [f"Rock is not known from {first:.2f} to {last:.2f} m: no rock line, no wall."]
    start, stop = float(found.rock.offset_m[0]), float(found.rock.offset_m[-1])
    parts = ((first, start), (stop, last))
    said = [f"Rock is not surveyed from {a:.2f} to {b:.2f} m." for a, b in parts if b > a]
    wall = None if found.design is None else found.design.wall
    if wall is not None and not wall.closed:
        sides = (("left", wall.closed_left), ("right", wall.closed_right))
        said += [
            f"How far the {side} flank goes on is not known; quantities end with the line."
            for side, closed in sides
            if not closed
        ]
    return said


def _money_unknown(found: Appraisal) -> list[str]:
    if found.estimate is not None:
        return [f"Price of {lacking}." for lacking in found.estimate.unknown]
    if found.design is None:
        return []
    lacking = [item_words(q) for q in found.design.quantities if q.quantity is None]
    return [
        *(f"Quantity of {words}." for words in lacking),
        "Cost: no rate schedule was given.",
    ]


def rests_on(found: Appraisal) -> str:
    """Say what the figures rest on, so that they can be computed again."""
    words = f"Method {found.method}; inputs and method have the digest {found.digest}."
    if found.schedule is not None:
        words += f" Rates: schedule {found.schedule.schedule_id}, {found.schedule.currency}."
    if found.rock.seed is not None:
        words += f" Seed of the rock line's draws {found.rock.seed}."
    if found.spread is not None:
        words += f" {found.spread.draws} draws."
    return words
