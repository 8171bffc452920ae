"""The fields of a well and of a measuring point: one table for page, interface and list."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any, Final

from structures.ground.angle import read_position
from structures.intake.fields import LEVEL_MOST_M, Field
from structures.intake.moments import read_day
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value, tell_missing, tell_spare

if TYPE_CHECKING:
    from collections.abc import Mapping

ROLES: Final = ("upstream", "downstream", "control", "other")
KINDS: Final = ("dug", "bored", "pipe")
CONSENTS: Final = ("yes", "no", "not known")
NAME_MOST: Final = 120
INITIALS: Final = re.compile(r"\w{1,2}\.?( ?\w{1,2}\.?){0,3}")  # an owner stands here by initials
DAYS: Final = ("bottom_sounded_on", "existed_from", "ended_on")


def _level(key: str, words: str) -> Field:
    return Field(key, words, unit="m", low=-LEVEL_MOST_M, high=LEVEL_MOST_M)


WELL_FIELDS: Final = (
    Field("code", "code of the well", "code", required=True),
    Field(
        "role",
        "role of the well",
        "choice",
        required=True,
        choices=ROLES,
        rule="WL-01",
        missing_says=("Is it upstream, downstream, control or other?", "Say which."),
    ),
    Field("kind", "kind of well", "choice", choices=KINDS),
    Field("name", "name of the well", "text"),
    Field("diameter_m", "diameter", unit="m", low=0.02, high=10.0),
    _level("ground_level_m", "level of the ground at the well"),
    Field(
        "bottom_below_ground_m", "depth of the bottom below ground", unit="m", low=0.5, high=60.0
    ),
    Field(
        "upstream_of_wall_m",
        "distance upstream of the wall, minus downstream",
        unit="m",
        low=-50_000.0,
        high=50_000.0,
    ),
    Field("owner_consents", "whether the owner agrees to the readings", "choice", choices=CONSENTS),
    Field("used_for", "what the water is used for", "text"),
    Field("pump", "pump", "text"),
)
MARK_FIELDS: Final = (
    Field("mark", "name of the measuring point", "code", required=True),
    Field("what", "what it is and where", "text", required=True),
    Field("height_above_ground_m", "height above ground", unit="m", low=-20.0, high=LEVEL_MOST_M),
    _level("level_m", "level of the measuring point"),
    Field("why_changed", "why it changed", "text"),
    Field("witness", "second person who saw it", "text"),
)
CONSENT_VALUES: Final = {"yes": True, "no": False, "not known": None}
OTHER: Final = (
    "watershed",
    "site",
    "lat",
    "lon",
    "position",
    "other_names",
    "owner_initials",
    *DAYS,
)


def read_well(row: Node, ledger: Ledger) -> dict[str, Any] | None:
    """Read one well; None where a finding blocks it. What was not given is not in the answer."""
    blocks = ledger.blocks
    values = _read(row, WELL_FIELDS, ledger)
    if "owner_consents" in values:
        values["owner_consents"] = CONSENT_VALUES.get(values["owner_consents"])
    values |= _position(row, ledger) | _days(row, DAYS, ledger) | _names(row)
    initials = row.named("owner_initials")
    if not initials.blank:
        values["owner_initials"] = _initials(initials, ledger)
    known = (*(field.key for field in WELL_FIELDS), *OTHER)
    for key, member in row.members().items():
        if key not in known and not member.blank:
            tell_spare(key, member, known, ledger, what="A well has no such field; it is left out.")
    return values if ledger.blocks == blocks else None


def read_mark(row: Node, ledger: Ledger) -> dict[str, Any] | None:
    """Read one measuring point; None where a finding blocks it."""
    blocks = ledger.blocks
    values = _read(row, MARK_FIELDS, ledger) | _days(row, ("valid_from",), ledger)
    if "valid_from" not in values and row.named("valid_from").blank:
        ledger.add(row.named("valid_from"), "This is missing.", "From which day on is it used?")
    return values if ledger.blocks == blocks else None


def _read(row: Node, fields: tuple[Field, ...], ledger: Ledger) -> dict[str, Any]:
    values: dict[str, Any] = {}
    for field in fields:
        node = row.named(field.key)
        if node.blank:
            if field.required:
                tell_missing(node, field, ledger)
            continue
        values[field.key] = read_value(node, field, ledger)
        if field.kind == "text" and values[field.key] and len(values[field.key]) > NAME_MOST:
            what = f"The text has {len(values[field.key])} characters."
            ledger.add(node, what, f"Keep it to {NAME_MOST}.")
    return values


def _days(row: Node, keys: tuple[str, ...], ledger: Ledger) -> dict[str, Any]:
    nodes = {key: row.named(key) for key in keys}
    return {key: read_day(node, ledger) for key, node in nodes.items() if not node.blank}


def _names(row: Node) -> dict[str, Any]:
    node = row.named("other_names")
    if node.blank:
        return {}
    names = node.value if isinstance(node.value, list) else str(node.value).split(";")
    return {"other_names": [str(one).strip()[:NAME_MOST] for one in names if str(one).strip()]}


def _position(row: Node, ledger: Ledger) -> dict[str, Any]:
    lat, lon = row.named("lat"), row.named("lon")
    if lat.blank and lon.blank:
        return {}
    if lat.blank or lon.blank:
        ledger.add(lat if lat.blank else lon, "A position is latitude and longitude.", "Give both.")
        return {}
    found = read_position(f"{lat.value},{lon.value}")
    if found is None:
        what = f"{shown(lat.value)} and {shown(lon.value)} are no position."
        ledger.add(lat, what, "Degrees like 15.7237 and 77.4424.")
        return {}
    return {"lon": found[0], "lat": found[1]}


def _initials(node: Node, ledger: Ledger) -> str:
    text = str(node.value).strip()
    if not INITIALS.fullmatch(text):
        ledger.add(node, "Of the owner only initials are kept.", "Write them like R.K.")
    return text


def typed_row(values: Mapping[str, Any], where: str) -> Node:
    """Give values of a page or a program as a row that can be read."""
    members = {key: Node(value, where, key, tabular=True) for key, value in values.items()}
    return Node(members, where, tabular=True)
