"""What is written down at a trench, on a phone or a page: kinds of record and their fields.

One table for the form, the parcel of a phone and the interface. Limits are sanity limits of this
project: beyond them a value is a slip; what it means for the work is judged by the rules of `life`.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final, Literal

from structures.intake.fields import (
    DEPTH_MOST_M,
    LEVEL_MOST_M,
    OFFSET_LEAST_M,
    OFFSET_MOST_M,
    Field,
)
from structures.intake.moments import read_day
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value, tell_unknown, with_point

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.errors import Finding

Kind = Literal["number", "whole", "text", "long text", "yes no", "choice", "day", "time"]
RESULTS: Final = ("no stop found", "stop", "not looked")
HOLDS: Final = ("H1", "H2", "H3", "H4", "H5", "H6", "H7", "H8", "H9")
HOLD: Final = re.compile(r"H[1-9]|H7\.[1-9]\d{0,2}", re.ASCII)
TIME: Final = re.compile(r"([01]\d|2[0-3]):[0-5]\d", re.ASCII)
AS_INTAKE: Final = {"long text": "text", "yes no": "yes_no"}


@dataclass(frozen=True, slots=True)
class RecordField:
    """One field: its name, what is asked, how it is answered."""

    key: str
    asks: str
    kind: Kind = "number"
    unit: str = ""
    low: float | None = None
    high: float | None = None
    required: bool = False
    choices: tuple[str, ...] = ()
    help: str = ""


@dataclass(frozen=True, slots=True)
class RecordKind:
    """One kind of record: its name in a parcel, its title, its fields in the order of asking.

    `strip` says whether it belongs to a strip: "must", "may" or "no".
    """

    name: str
    title: str
    fields: tuple[RecordField, ...]
    strip: Literal["must", "may", "no"]


def _level(key: str, asks: str, *, required: bool = False, help: str = "") -> RecordField:  # noqa: A002 -- the word of forms
    return RecordField(
        key, asks, unit="m", low=-LEVEL_MOST_M, high=LEVEL_MOST_M, required=required, help=help
    )


DAY: Final = RecordField("day", "Which day is it?", "day", required=True)
NOTE: Final = RecordField("note", "Anything to add?", "long text")

LOOK: Final = RecordKind(
    "look",
    "Look into the trench",
    (
        DAY,
        RecordField("looked_at", "At what time did you look?", "time", required=True),
        RecordField(
            "result",
            "Is there a reason to stop?",
            "choice",
            required=True,
            choices=RESULTS,
            help="No stop found is no promise that the trench is safe.",
        ),
        RecordField(
            "depth_m", "How deep is it at the deepest?", unit="m", low=0, high=DEPTH_MOST_M
        ),
        RecordField(
            "slope_as_cut",
            "How flat are the sides as cut?",
            unit="across per 1 up",
            low=0,
            high=10,
            help="The steeper side; 0 is upright.",
        ),
        RecordField("crack", "Is there a crack or a bulge beside it or in it?", "yes no"),
        RecordField("sides", "What do the sides do?", "text", help="For example: dry, no change."),
        RecordField("water", "Where does water stand or come in?", "text"),
        RecordField(
            "spoil_back_m", "How far back is the spoil from the edge?", unit="m", low=0, high=200
        ),
        RecordField(
            "ladder_within_m", "How far is the farthest way to a ladder?", unit="m", low=0, high=500
        ),
        RecordField(
            "rain_since_last", "Did it rain, or the stream rise, since the last look?", "yes no"
        ),
        RecordField("weather", "What is the weather?", "text"),
    ),
    "may",
)
HOLD_READINGS: Final[dict[str, tuple[RecordField, ...]]] = {
    "H1": (_level("peg_level_m", "What level do the pegs read?"),),
    "H2": (
        _level("rock_start_m", "Level of the rock at the start of the strip?"),
        _level("rock_middle_m", "Level of the rock in its middle?"),
        _level("rock_end_m", "Level of the rock at its end?"),
    ),
    "H3": (RecordField("hammer", "How does it sound under the hammer?", "text"),),
    "H4": (
        RecordField("key_width_m", "How wide is the key?", unit="m", low=0, high=5),
        RecordField("key_depth_m", "How deep is the key?", unit="m", low=0, high=3),
    ),
    "H5": (
        RecordField("pump_hours", "How many hours did the pump run?", unit="h", low=0, high=2400),
    ),
    "H6": (RecordField("lap_m", "How wide is the lap of the film?", unit="m", low=0, high=5),),
    "H7": (
        RecordField("layer_m", "How thick is the layer, trodden?", unit="m", low=0, high=1),
        RecordField("passes", "How many passes of feet or roller?", "whole", low=0, high=100),
        RecordField(
            "wetness", "How wet is the clay?", "text", help="For example: rolls, no cracks."
        ),
    ),
    "H8": (),
    "H9": (_level("bed_level_m", "Level of the bed over the strip?"),),
}
HOLD_ASKED: Final = RecordKind(
    "hold-asked",
    "Ask for a hold point",
    (
        RecordField(
            "hold", "Which hold point?", "text", required=True, help="H1 to H9; H7.1, H7.2 …"
        ),
        *(one for hold in HOLDS for one in HOLD_READINGS[hold]),
        RecordField("from_edge", "Was it taken from the edge?", "yes no"),
        NOTE,
    ),
    "must",
)
FOUND_LEVEL: Final = RecordKind(
    "found-level",
    "Rock as found",
    (
        DAY,
        RecordField(
            "offset_m",
            "At which offset?",
            unit="m",
            low=OFFSET_LEAST_M,
            high=OFFSET_MOST_M,
            required=True,
        ),
        _level("level_m", "Level of the rock there?", required=True, help="Above the bench mark."),
    ),
    "must",
)
CLAY_TEST: Final = RecordKind(
    "clay-test",
    "Test of the clay",
    (
        DAY,
        RecordField("layer", "Which layer of the strip?", "whole", low=1, high=200),
        RecordField("hand_roll_holds", "Does the hand roll hold?", "yes no"),
        RecordField("water_content_percent", "Water content?", unit="%", low=0, high=200),
        RecordField("liquid_limit_percent", "Liquid limit?", unit="%", low=0, high=400),
        RecordField("plastic_limit_percent", "Plastic limit?", unit="%", low=0, high=200),
        RecordField("fines_percent", "Fines?", unit="%", low=0, high=100),
        RecordField("free_swell_percent", "Free swell?", unit="%", low=0, high=500),
        RecordField(
            "permeability_m_per_s",
            "Permeability of an undisturbed ring?",
            unit="m/s",
            low=0,
            high=1,
            help="For example 4e-9.",
        ),
        RecordField("crumb_reaction", "Did the crumb cloud the water?", "yes no"),
        NOTE,
    ),
    "may",
)
DAY_SHEET: Final = RecordKind(
    "day-sheet",
    "Day sheet",
    (
        DAY,
        RecordField("people", "How many people were there?", "whole", low=0, high=2000),
        RecordField("machines", "Which machines?", "text"),
        RecordField("pump_hours", "How many hours did the pumps run?", unit="h", low=0, high=240),
        RecordField("weather", "What was the weather?", "text"),
        RecordField("done", "What was done?", "long text", required=True),
    ),
    "no",
)
INCIDENT_KINDS: Final = ("hurt", "near", "collapse", "flood", "other")
INCIDENT: Final = RecordKind(
    "incident",
    "Somebody hurt, or nearly",
    (
        DAY,
        RecordField("kind", "What was it?", "choice", required=True, choices=INCIDENT_KINDS),
        RecordField("what", "What happened?", "long text", required=True),
        RecordField("hurt", "How many people were hurt?", "whole", low=0, high=2000),
        RecordField("done", "What was done about it?", "long text"),
    ),
    "may",
)
KINDS: Final[dict[str, RecordKind]] = {
    one.name: one for one in (INCIDENT, LOOK, DAY_SHEET, FOUND_LEVEL, CLAY_TEST, HOLD_ASKED)
}


def point_of(hold: str) -> str:
    """Give the hold point that a layer belongs to: H7 for H7.2."""
    return hold.partition(".")[0]


def read_record(
    kind: RecordKind, given: Mapping[str, Any], where: str
) -> tuple[dict[str, Any], tuple[Finding, ...]]:
    """Read the fields of a record: every field with its key, None where nothing was given.

    Days and times stay text in ISO 8601, so that the values are ready for JSON. A name that is no
    field of the kind is refused: a misspelt answer would be a blank.
    """
    ledger = Ledger()
    node = Node(dict(given), where, tabular=True)
    values: dict[str, Any] = {}
    for field in kind.fields:
        value = given.get(field.key)
        member = Node(value, where, field.key, tabular=True)
        if value is None or (isinstance(value, str) and not value.strip()):
            values[field.key] = None
            if field.required:
                ledger.add(member, "This is blank.", f"{field.asks} Answer it.")
        else:
            values[field.key] = _read(member, field, ledger)
    known = tuple(field.key for field in kind.fields)
    tell_unknown(node, known, ledger, closed=True)
    return values, tuple(ledger.findings)


def _read(node: Node, field: RecordField, ledger: Ledger) -> Any:
    if field.kind == "day":
        day = read_day(node, ledger)
        return None if day is None else day.isoformat()
    if field.kind == "time":
        text = str(node.value).strip()[:5]
        if TIME.fullmatch(text):
            return text
        ledger.add(node, f"{shown(node.value)} is no time.", "Write hours and minutes, as 07:40.")
        return None
    if field.key == "hold":
        return _read_hold(node, ledger)
    if field.kind in ("number", "whole") and isinstance(node.value, str):
        node = Node(with_point(node.value), node.where, node.field, tabular=True)
    kind: Any = AS_INTAKE.get(field.kind, field.kind)
    asked = Field(
        field.key, field.asks, kind, field.unit, field.low, field.high, choices=field.choices
    )
    return read_value(node, asked, ledger)


def _read_hold(node: Node, ledger: Ledger) -> str | None:
    text = str(node.value).strip().upper()
    if HOLD.fullmatch(text):
        return text
    ledger.add(node, f"{shown(node.value)} is no hold point.", "H1 to H9; the layers H7.1, H7.2 …")
    return None
