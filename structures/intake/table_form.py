"""Tables of a survey pack to the neutral tree: nested lists come as one row a reading."""

from __future__ import annotations

import difflib
from typing import TYPE_CHECKING, Final

from structures.intake.fields import PACK_VERSION, PARTS, REFRACTION, SOUNDING
from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.tables import Row, Table
    from structures.intake.tree import Ledger

ONE_ROW: Final = ("site", "toes", "ground_water", "wall", "works")
LISTS: Final = ("ground", "rock", "probes", "rock_line")
# Parts whose rows carry the outer keys of a nested list: part -> (label, outer keys, inner list).
NESTED: Final = {
    "soundings": ("sounding", tuple(field.key for field in SOUNDING), "readings"),
    "refraction": ("line", tuple(field.key for field in REFRACTION), "picks"),
}
SIDE_SLOPE: Final = "side_slope"
TABLES: Final = (*(part for part in PARTS if part != "pack"), SIDE_SLOPE)


def tree_of_tables(source: str, tables: Iterable[Table], ledger: Ledger) -> Node:
    """Give the pack that the tables hold.

    The version may stand in the column `pack` of the site; tables without it are version 1.
    """
    members: dict[str, object] = {}
    slopes: Node | None = None
    for table in _once(tables, ledger):
        if table.name == SIDE_SLOPE:
            slopes = _list(table, "wall.side_slope")
        elif table.name in ONE_ROW:
            members[table.name] = _one_row(table, ledger)
        elif table.name in LISTS:
            members[table.name] = _list(table, table.name)
        else:
            members[table.name] = _nested(table, ledger)
    if slopes:
        members["wall"] = _with_slopes(members.get("wall"), slopes, ledger)
    site = members.get("site")
    version = site.value.pop("pack", None) if site else None
    default = Node(PACK_VERSION, source, "pack", tabular=True)
    members["pack"] = default if version is None or version.blank else version
    return Node(members, source, tabular=True)


def is_part(name: str, where: str, ledger: Ledger) -> bool:
    """Whether a table of that name belongs to a pack; one that does not is told and not read."""
    if name in TABLES:
        return True
    near = difflib.get_close_matches(name, TABLES, n=1)
    hint = f"Was {near[0]} meant?" if near else f"Tables of a pack: {', '.join(TABLES)}."
    level = "warn" if near else "note"
    what = "A pack has no such table; it is left with the file."
    ledger.add(Node(None, where), what, hint, level=level, rule="FI-03")
    return False


def _once(tables: Iterable[Table], ledger: Ledger) -> list[Table]:
    once: dict[str, Table] = {}
    for table in tables:
        if table.name in once:
            what = f"A second table {table.name} is here."
            ledger.add(Node(None, table.where), what, "Keep one.")
        once.setdefault(table.name, table)
    return list(once.values())


def _list(table: Table, part: str) -> Node:
    return Node([table.node(row, part) for row in table.rows], table.where, part, tabular=True)


def _one_row(table: Table, ledger: Ledger) -> Node:
    for row in table.rows[1:]:
        what = f"{table.name} has one row; here is another."
        ledger.add(Node(None, row.where, table.name), what, "Keep one row.")
    return table.node(table.rows[0], table.name)


def _with_slopes(wall: Node | None, slopes: Node, ledger: Ledger) -> Node:
    """Set the list of side slopes into the wall's settings."""
    if wall is None:
        return Node({SIDE_SLOPE: slopes}, slopes.where, "wall", tabular=True)
    if not wall.named(SIDE_SLOPE).blank:
        what = "The side slope stands here and in a table of its own."
        ledger.add(wall.named(SIDE_SLOPE), what, "Keep one of the two.")
    return Node({**wall.value, SIDE_SLOPE: slopes}, wall.where, "wall", tabular=True)


def _nested(table: Table, ledger: Ledger) -> Node:
    """Gather the rows of one label; the outer keys must be the same in each of them."""
    label, outer, inner = NESTED[table.name]
    groups: dict[str, list[tuple[Row, Node]]] = {}
    for row in table.rows:
        node = table.node(row, table.name)
        name = node.named(label)
        if name.blank:
            what = f"The row names no {label}."
            ledger.add(name, what, "Give each one a label and repeat it in all its rows.")
        else:
            groups.setdefault(shown(name.value), []).append((row, node))
    elements = [_element(table, rows, outer, inner, ledger) for rows in groups.values()]
    return Node(elements, table.where, table.name, tabular=True)


def _element(
    table: Table, rows: list[tuple[Row, Node]], outer: tuple[str, ...], inner: str, ledger: Ledger
) -> Node:
    first = rows[0][1]
    members: dict[str, object] = {key: first.value[key] for key in outer if key in first.value}
    readings = []
    for row, node in rows:
        for key, head in members.items():
            here = node.value[key]
            if not here.blank and here.value != head.value:
                what = f"{shown(here.value)} here, {shown(head.value)} at {head.where}."
                ledger.add(here, what, "The rows of one label repeat the same value.")
        rest = {
            key: Node(cell.value, cell.where, f"{table.name}.{inner}.{key}", tabular=True)
            for key, cell in node.value.items()
            if key not in outer
        }
        readings.append(Node(rest, row.where, f"{table.name}.{inner}", tabular=True))
    members[inner] = Node(readings, first.where, f"{table.name}.{inner}", tabular=True)
    return Node(members, first.where, table.name, tabular=True)
