"""Tables of what was kept before: rows with exact values, or everything that is wrong with them.

A cell that cannot be read, a row that stands twice or names what is nowhere is refused with file and
line. What a row says of the work is stored as it stands: the rules speak beside it, elsewhere.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import time
from decimal import Decimal
from functools import partial
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID

from structures.intake.field_records import TIME
from structures.intake.fields import Field
from structures.intake.moments import read_day, read_moment, read_month
from structures.intake.single_table import read_single_table, tell_columns
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value

if TYPE_CHECKING:
    from collections.abc import Callable, Collection, Mapping, Sequence
    from datetime import date, tzinfo

    from structures.intake.history_tables import Column, HistoryTable

WATER_YEAR: Final = re.compile(r"(\d{4})-(\d{2})", re.ASCII)
CENTURY: Final = 100
BETWEEN: Final = ";"


@dataclass(frozen=True, slots=True)
class HistoryRow:
    """One row: where it stood, its values by column (None is blank), and its cells as they stood."""

    where: str
    values: Mapping[str, Any]
    told: Mapping[str, str]

    def __getitem__(self, key: str) -> Any:
        return self.values[key]

    def names(self, columns: Sequence[str]) -> tuple[Any, ...]:
        """Give the values of some columns together, as one row names another."""
        return tuple(self.values[key] for key in columns)


History = dict[str, tuple[HistoryRow, ...]]


def read_history(
    files: Mapping[str, bytes],
    tables: Sequence[HistoryTable],
    known: Mapping[str, Collection[Any]],
    zone: tzinfo,
    ledger: Ledger,
    *,
    before: History | None = None,
) -> History:
    """Read tables and hold them against each other; findings go into the ledger.

    Parameters
    ----------
    files
        Name of the file to its bytes.
    tables
        Those to be read, each behind the tables that it names.
    known
        What stands elsewhere, by the name that columns give in `to`: accounts, sites, streams.
    zone
        Of times without one.
    before
        Tables that were read already and that these may name.

    Returns
    -------
    dict
        Name of the table to its rows; to be used only where no finding of the ledger blocks.
    """
    history: History = dict(before or {})
    for table in tables:
        data = files.get(table.file)
        if data is None:
            ledger.add(Node(None, table.file), "The table is missing.", "Put it into the folder.")
            history[table.name] = ()
            continue
        rows = _rows(table, data, known, zone, ledger)
        _tell_twice(table, rows, ledger)
        for other, columns in table.names.items():
            _tell_lost(rows, columns, other, history.get(other, ()), ledger)
        history[table.name] = rows
    return history


def _rows(
    table: HistoryTable,
    data: bytes,
    known: Mapping[str, Collection[Any]],
    zone: tzinfo,
    ledger: Ledger,
) -> tuple[HistoryRow, ...]:
    read = read_single_table(table.file, data, table.name, ledger)
    if read is None:
        return ()
    keys = tuple(column.key for column in table.columns)
    if not tell_columns(read, (*keys, *table.beside), keys, ledger):
        return ()
    rows, readers = [], [(one, _reader(one, zone)) for one in table.columns]
    for line in read.rows:
        node = read.node(line, "")
        values = {
            column.key: _value(node.named(column.key), column, reader, known, ledger)
            for column, reader in readers
        }
        told = {heading: str(node.named(heading).value) for heading in read.headings}
        rows.append(HistoryRow(line.where, values, told))
    return tuple(rows)


def _value(
    node: Node,
    column: Column,
    reader: Callable[[Node, Ledger], Any],
    known: Mapping[str, Collection[Any]],
    ledger: Ledger,
) -> Any:
    if node.blank or (column.blank and node.value == column.blank):
        if column.required:
            ledger.add(node, "This is blank.", "Give it, or take the row out.")
        return None
    value = reader(node, ledger)
    if value is not None and column.to and value not in known[column.to]:
        what = f"{shown(value)} is not among the {column.to} known here."
        ledger.add(node, what, "Enter it first, or look for a slip.")
    return value


def _reader(column: Column, zone: tzinfo) -> Callable[[Node, Ledger], Any]:
    """Give the reader of a column's kind: of the packs where they have it, else one of these."""
    own = {
        "day": read_day,
        "month": _month,
        "clock": _clock,
        "list": _list,
        "uuid": _uuid,
        "water_year": _water_year,
        "levels": partial(_levels, column=column),
        "exact": partial(_exact, column=column),
        "moment": lambda node, ledger: read_moment(node, zone, ledger),
    }
    if column.kind in own:
        return own[column.kind]
    field = _as_field(column, column.kind)
    return lambda node, ledger: read_value(node, field, ledger)


def _as_field(column: Column, kind: str) -> Field:
    return Field(
        column.key, column.key, kind, low=column.low, high=column.high, choices=column.choices
    )


def _month(node: Node, ledger: Ledger) -> date | None:
    read = read_month(node, ledger)
    return None if read is None else read_day(Node(f"{read[0]:04}-{read[1]:02}-01", ""), ledger)


def _clock(node: Node, ledger: Ledger) -> time | None:
    if TIME.fullmatch(str(node.value)):
        return time.fromisoformat(node.value)
    ledger.add(node, f"{shown(node.value)} is no time of day.", "Write it as 07:40.")
    return None


def _list(node: Node, _ledger: Ledger) -> tuple[str, ...]:
    return tuple(part.strip() for part in str(node.value).split(BETWEEN) if part.strip())


def _levels(node: Node, ledger: Ledger, *, column: Column) -> tuple[float, ...] | None:
    field = _as_field(column, "number")
    parts = [
        read_value(Node(part, node.where, node.field, tabular=True), field, ledger)
        for part in _list(node, ledger)
    ]
    return None if None in parts else tuple(parts)


def _exact(node: Node, ledger: Ledger, *, column: Column) -> Decimal | None:
    """Read a decimal digit by digit; a third decimal is told, since nothing here has one."""
    if read_value(node, _as_field(column, "number"), ledger) is None:
        return None
    value = Decimal(str(node.value).strip())
    if value != round(value, 2):
        ledger.add(node, f"{shown(node.value)} has more than two decimals.", "Write hundredths.")
        return None
    return value


def _uuid(node: Node, ledger: Ledger) -> UUID | None:
    try:
        return UUID(str(node.value))
    except ValueError:
        ledger.add(node, f"{shown(node.value)} is no UUID.", "Give it as the phone made it.")
        return None


def _water_year(node: Node, ledger: Ledger) -> int | None:
    matched = WATER_YEAR.fullmatch(str(node.value))
    if matched and (int(matched[1]) + 1) % CENTURY == int(matched[2]):
        return int(matched[1])
    ledger.add(node, f"{shown(node.value)} is no water year.", "Write it as 2024-25.")
    return None


def _tell_twice(table: HistoryTable, rows: Sequence[HistoryRow], ledger: Ledger) -> None:
    first: dict[tuple[Any, ...], str] = {}
    for row in rows:
        key = row.names(table.key)
        if key in first:
            words = ", ".join(map(str, key))
            what = f"{words} stands here twice; the first is at {first[key]}."
            ledger.add(Node(None, row.where, table.key[-1]), what, "Keep one.")
        first.setdefault(key, row.where)


def _tell_lost(
    rows: Sequence[HistoryRow],
    columns: Sequence[str],
    other: str,
    theirs: Sequence[HistoryRow],
    ledger: Ledger,
) -> None:
    """Tell of rows that name what is in no row of another table; a blank names nothing."""
    there = {row.names(columns) for row in theirs}
    for row in rows:
        named = row.names(columns)
        if None not in named and named not in there:
            what = f"{', '.join(map(str, named))} is in no row of {other}.csv."
            remedy = "Add the row there, or look for a slip."
            ledger.add(Node(None, row.where, columns[-1]), what, remedy)
