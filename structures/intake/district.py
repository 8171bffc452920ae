"""The tables of a whole district turned into survey packs, one a site, by the same builder.

A site without toes has no pack yet. A sheet's slips are not mended: they come as findings.
"""

from __future__ import annotations

import math
from pathlib import Path
from typing import TYPE_CHECKING, Final

from structures.intake.archive import FILE_MOST_BYTES
from structures.intake.builder import build_pack, refusal
from structures.intake.delimited import read_delimited
from structures.intake.fields import PACK_VERSION, Field
from structures.intake.json_form import read_json
from structures.intake.tree import Ledger, Node
from structures.intake.values import read_value

if TYPE_CHECKING:
    from collections.abc import Callable

    from structures.intake.pack import SurveyPack

TABLES: Final = (
    "sites",
    "cross_sections",
    "probes",
    "soundings",
    "refraction",
    "underflow",
    "drawings",
)
SETTINGS: Final = "settings.json"
# Columns of the district -> fields of a pack.
SITE: Final = {"site_id": "code", "name": "name", "stream": "stream", "bed_slope": "bed_slope"}
TOES: Final = {"left_toe_m": "left_m", "right_toe_m": "right_m"}
GROUND: Final = {"offset_m": "offset_m", "ground_level_m": "level_m", "feature": "note"}
PROBES: Final = {key: key for key in ("offset_m", "depth_m", "refused", "why_stopped")}
READINGS: Final = {key: key for key in ("ab2_m", "mn2_m", "apparent_resistivity_ohm_m")}
PICKS: Final = {key: key for key in ("shot_m", "geophone_m", "time_ms")}
ROCK_LINE: Final = {"offset_m": "offset_m", "rock_likely_m": "level_m"}
UNDERFLOW: Final = {"k_likely_m_day": "hydraulic_conductivity_m_per_day", "gradient": "gradient"}
WALL: Final = {
    **{
        key: key
        for key in (
            "thickness_m",
            "crest_below_bed_m",
            "key_m",
            "lift_m",
            "film_width_m",
            "film_lap_m",
            "film_anchor_m",
            "film_fold_m",
            "surplus_bulking",
        )
    },
    "side_h_per_v": "side_slope",
    "margin_m": "bottom_margin_m",
}
STRIP_SLACK: Final = 1e-9  # a wall of whole strips has no further one from rounding

Rows = list[Node]


def read_district(folder: Path, *, settled_line: bool = True) -> dict[str, SurveyPack]:
    """Read the packs of a district.

    Parameters
    ----------
    folder
        Holds sites, cross_sections, probes, soundings, refraction, underflow and drawings as CSV,
        and settings.json.
    settled_line
        Whether the newest drawn rock line goes into the pack; without it the line is estimated.

    Returns
    -------
    dict
        Code of the site to its pack, in the order of sites.csv.

    Raises
    ------
    Refused
        If a table cannot be read or a site's rows make no pack.
    """
    ledger = Ledger()
    tables = {name: _rows(folder, name, ledger) for name in TABLES}
    if not (folder / SETTINGS).is_file():
        ledger.add(Node(None, SETTINGS), "The settings are missing.", "Put them into the folder.")
    if ledger.blocks:
        raise refusal(ledger)
    rules = read_json(SETTINGS, (folder / SETTINGS).read_bytes()).named("wall_rules")
    packs: dict[str, SurveyPack] = {}
    for site in tables["sites"]:
        code = _text(site, "site_id")
        if site.named("left_toe_m").blank or site.named("right_toe_m").blank:
            continue
        own = {
            name: [row for row in rows if _text(row, "site_id") == code]
            for name, rows in tables.items()
        }
        doubts = Ledger()
        root = _pack(site, own, rules, doubts, settled_line=settled_line)
        packs[code] = build_pack(root, doubts)
    return packs


def _rows(folder: Path, name: str, ledger: Ledger) -> Rows:
    path = folder / f"{name}.csv"
    if not path.is_file() or path.stat().st_size > FILE_MOST_BYTES:
        ledger.add(
            Node(None, path.name), "The table is missing or too large.", "Put it into the folder."
        )
        return []
    table = read_delimited(name, path.name, path.read_bytes(), ledger)
    return [table.node(row, name) for row in table.rows] if table else []


def _pack(
    site: Node, own: dict[str, Rows], rules: Node, ledger: Ledger, *, settled_line: bool
) -> Node:
    drawn = _newest(own["drawings"], ledger)
    parts: dict[str, object] = {
        "pack": Node(PACK_VERSION, site.where, "pack"),
        "site": _picked(site, SITE, "site"),
        "ground": _list(own["cross_sections"], GROUND, "ground"),
        "toes": _picked(site, TOES, "toes"),
        "rock": _outcrops(own["cross_sections"]),
        "probes": _list(own["probes"], PROBES, "probes"),
        "soundings": _nested(own["soundings"], "sounding_id", _sounding),
        "refraction": _nested(own["refraction"], "line_id", _spread),
        "ground_water": _ground_water(site, own["underflow"]),
        "wall": _picked(rules, WALL, "wall"),
        "works": _works(drawn, rules, ledger),
    }
    if drawn and settled_line:
        parts["rock_line"] = _list(drawn, ROCK_LINE, "rock_line")
    return Node(parts, site.where, tabular=True)


def _text(row: Node, column: str) -> str:
    return str(row.named(column).value)


def _picked(row: Node, columns: dict[str, str], part: str) -> Node:
    """Give the columns of a row that a pack has, under the pack's names."""
    members = {}
    for column, key in columns.items():
        cell = row.named(column)
        members[key] = Node(cell.value, cell.where, f"{part}.{key}", tabular=True)
    return Node(members, row.where, part, tabular=True)


def _list(rows: Rows, columns: dict[str, str], part: str) -> Node:
    return _gathered([_picked(row, columns, part) for row in rows], rows, part)


def _gathered(elements: Rows, rows: Rows, part: str) -> Node:
    where = rows[0].where if rows else ""
    return Node(elements or None, where, part, tabular=True)


def _outcrops(rows: Rows) -> Node:
    seen = [row for row in rows if _text(row, "feature") == "outcrop"]
    known = {"depth_m": 0.0, "method": "outcrop", "met_rock": True}
    elements = []
    for row in seen:
        test = _picked(row, {"offset_m": "offset_m"}, "rock")
        said = {
            key: Node(value, row.where, f"rock.{key}", tabular=True) for key, value in known.items()
        }
        elements.append(Node({**test.value, **said}, row.where, "rock", tabular=True))
    return _gathered(elements, seen, "rock")


def _nested(rows: Rows, label: str, make: Callable[[str, Rows], Node]) -> Node:
    names = dict.fromkeys(_text(row, label) for row in rows)
    elements = [make(name, [row for row in rows if _text(row, label) == name]) for name in names]
    return _gathered(elements, rows, "soundings" if label == "sounding_id" else "refraction")


def _sounding(name: str, rows: Rows) -> Node:
    where, part = rows[0].where, "soundings"
    members = {
        "sounding": Node(name, where, f"{part}.sounding", tabular=True),
        "array": Node("schlumberger", where, f"{part}.array", tabular=True),
        "readings": _list(rows, READINGS, f"{part}.readings"),
    }
    return _crossing(rows[0], members, part)


def _spread(name: str, rows: Rows) -> Node:
    where, part = rows[0].where, "refraction"
    members = {
        "line": Node(name, where, f"{part}.line", tabular=True),
        "picks": _list(rows, PICKS, f"{part}.picks"),
    }
    return _crossing(rows[0], members, part)


def _crossing(row: Node, members: dict[str, Node], part: str) -> Node:
    return Node(
        {**_picked(row, {"offset_m": "offset_m"}, part).value, **members},
        row.where,
        part,
        tabular=True,
    )


def _ground_water(site: Node, underflow: Rows) -> Node:
    part = "ground_water"
    members = dict(_picked(site, {"water_level_m": "water_level_m"}, part).value)
    if underflow:
        members |= _picked(underflow[-1], UNDERFLOW, part).value
    return Node(members, site.where, part, tabular=True)


def _number(row: Node, column: str, ledger: Ledger) -> float:
    """Give a number of the district's own columns; 0, with a finding, where there is none."""
    return read_value(row.named(column), Field(column, column), ledger) or 0.0


def _newest(drawings: Rows, ledger: Ledger) -> Rows:
    versions = [_number(row, "version", ledger) for row in drawings]
    return [
        row for row, version in zip(drawings, versions, strict=True) if version == max(versions)
    ]


def _works(drawn: Rows, rules: Node, ledger: Ledger) -> Node:
    """Give the pump hours: hours of a strip times the strips of the drawn wall."""
    if not drawn:
        return Node(None, "", "works", tabular=True)
    length_m = _number(drawn[0], "right_end_m", ledger) - _number(drawn[0], "left_end_m", ledger)
    strip_m, hours = (_number(rules, key, ledger) for key in ("strip_m", "pump_hours_per_strip"))
    strips = math.ceil(length_m / strip_m - STRIP_SLACK) if strip_m else 0
    value = Node(hours * strips, drawn[0].where, "works.pump_hours", tabular=True)
    return Node({"pump_hours": value}, drawn[0].where, "works", tabular=True)
