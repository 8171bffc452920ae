"""The published JSON Schema (draft 2020-12) of a survey pack, made from the tables of its fields.

The schema says what one value may be; what values say of each other (order of offsets, rock under
the ground, MN against AB) only the reader judges.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.intake import fields
from structures.intake.defaults import WALL, WATER
from structures.intake.parts import ROWS_MOST

if TYPE_CHECKING:
    from structures.intake.fields import Field

Schema = dict[str, object]

DRAFT: Final = "https://json-schema.org/draft/2020-12/schema"
IDENTITY: Final = "urn:underbund:survey-pack:1"
TYPES: Final = {
    "number": "number",
    "whole": "integer",
    "text": "string",
    "code": "string",
    "choice": "string",
    "yes_no": "boolean",
}


def pack_schema() -> Schema:
    """Give the schema of a survey pack, version 1, as a JSON document."""
    return {
        "$schema": DRAFT,
        "$id": IDENTITY,
        "title": "Survey pack",
        "description": (
            "One site's survey. Offsets run from the left bank, looking downstream; levels are "
            "heights above the site's bench mark datum, depths are below ground. Null means not "
            "known. Keys that are not named here are kept as notes, except in ground_water, wall "
            "and works, where they are refused."
        ),
        "type": "object",
        "required": ["pack", "site", "ground", "toes"],
        "properties": {
            "pack": {"description": "version of the pack", "const": fields.PACK_VERSION},
            "site": _object("Site", "the place", fields.SITE),
            "ground": _list("Ground", "points of the ground on the wall line", fields.GROUND, 2),
            "toes": _object("Toes", "feet of the two bank slopes", fields.TOES),
            "rock": _optional(_list("Rock", "what was seen or proved", fields.ROCK)),
            "probes": _optional(_list("Probes", "driven or pushed rods", fields.PROBES)),
            "soundings": _optional(_soundings()),
            "refraction": _optional(_refraction()),
            "rock_line": _optional(
                _list("Rock line", "the line an engineer has settled", fields.ROCK_LINE, 2)
            ),
            "ground_water": _optional(
                _object("Ground water", "as far as measured", fields.GROUND_WATER, closed=True)
            ),
            "wall": _optional(_wall()),
            "works": _optional(_object("Works", "plan of work", fields.WORKS, closed=True)),
        },
    }


def _optional(schema: Schema) -> Schema:
    kind = schema["type"]
    return {**schema, "type": [kind, "null"]}


def _object(
    title: str, words: str, table: tuple[Field, ...], *, closed: bool = False, **more: Schema
) -> Schema:
    required = [field.key for field in table if field.required]
    schema: Schema = {
        "title": title,
        "description": words,
        "type": "object",
        "properties": {**{field.key: _value(field) for field in table}, **more},
    }
    if required:
        schema["required"] = required
    if closed:
        schema["additionalProperties"] = False
    return schema


def _list(title: str, words: str, table: tuple[Field, ...], least: int = 0) -> Schema:
    return _array(title, words, _object(title, f"one of: {words}", table), least)


def _array(title: str, words: str, items: Schema, least: int = 0) -> Schema:
    schema: Schema = {"title": title, "description": words, "type": "array", "items": items}
    if least:
        schema["minItems"] = least
    return {**schema, "maxItems": ROWS_MOST}


def _value(field: Field) -> Schema:
    unit = f", {field.unit}" if field.unit not in {"", "-"} else ""
    default = WALL.get(field.key) or WATER.get(field.key)
    schema: Schema = {"description": field.words + unit, "type": TYPES[field.kind]}
    if field.low is not None:
        schema["exclusiveMinimum" if field.open_low else "minimum"] = field.low
    if field.high is not None:
        schema["maximum"] = field.high
    if field.kind == "code":
        schema["pattern"] = fields.CODE_PATTERN
    if field.kind == "text":
        schema["maxLength"] = fields.TEXT_MOST
    if default is not None:
        schema["default"] = default.value
    if field.choices:
        schema["enum"] = [*field.choices] if field.required else [*field.choices, None]
    return schema if field.required else _optional(schema)


def _readings(table: tuple[Field, ...]) -> Schema:
    return _array("Readings", "in the order of the sheet", _object("Reading", "one", table), 1)


def _soundings() -> Schema:
    """Give the soundings; their readings are judged by the array that was laid out."""
    sounding = _object("Sounding", "one electrical sounding", fields.SOUNDING)
    sounding["required"] = [*sounding["required"], "readings"]
    wenner = {"properties": {"array": {"const": "wenner"}}, "required": ["array"]}
    sounding |= {
        "if": wenner,
        "then": {"properties": {"readings": _readings(fields.WENNER)}},
        "else": {"properties": {"readings": _readings(fields.SCHLUMBERGER)}},
    }
    return _array("Soundings", "electrical soundings", sounding)


def _refraction() -> Schema:
    picks = _list("Picks", "first arrivals", fields.PICKS, 1)
    line = _object("Spread", "one refraction spread", fields.REFRACTION, picks=picks)
    line["required"] = [*line["required"], "picks"]
    return _array("Refraction", "refraction spreads along the stream", line)


def _wall() -> Schema:
    station = _object("Station", "slope at an offset", fields.SLOPE_STATION, closed=True)
    slope = _value(fields.SIDE_SLOPE)
    slopes = {
        "description": slope["description"],
        "anyOf": [slope, _array("Side slopes", "straight between stations", station, 1)],
    }
    words = "overrides of the defaults, each within its accepted range"
    return _object("Wall", words, fields.WALL, closed=True, side_slope=slopes)
