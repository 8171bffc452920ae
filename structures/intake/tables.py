"""Tables whose rows and cells know where they stood."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from structures.intake.tree import Ledger

COLUMNS_MOST: Final = 200  # a survey's tables have some ten
LINES_MOST: Final = 20_000  # and some hundred rows


@dataclass(frozen=True, slots=True)
class Cell:
    """One cell: text of a CSV file, or what a workbook holds (text, number, yes/no, date)."""

    value: object
    where: str


@dataclass(frozen=True, slots=True)
class Row:
    """One row under the headings; `where` names its line, for CSV that on which it starts."""

    cells: tuple[Cell, ...]
    where: str


@dataclass(frozen=True, slots=True)
class Table:
    """A table of a pack: headings in small letters and the rows below them that hold anything."""

    name: str
    where: str
    headings: tuple[str, ...]
    rows: tuple[Row, ...]

    def node(self, row: Row, part: str) -> Node:
        """Give a row as an object of the neutral tree; fields stand alone where `part` is empty."""
        before = f"{part}." if part else ""
        members = {
            heading: Node(cell.value, cell.where, before + heading, tabular=True)
            for heading, cell in zip(self.headings, row.cells, strict=True)
        }
        return Node(members, row.where, part, tabular=True)


def make_table(name: str, where: str, lines: list[Row], ledger: Ledger) -> Table | None:
    """Set rows under their headings; None, with findings, where they do not fit."""
    filled = [row for row in lines if any(cell.value not in {"", None} for cell in row.cells)]
    if not filled:
        ledger.add(Node(None, where), "This is empty.", "Fill it, or leave it out.")
        return None
    top, *rows = filled
    headings = _headings(top)
    blocks = ledger.blocks
    for heading in dict.fromkeys(headings):
        if headings.count(heading) > 1:
            remedy = "Name each column once."
            ledger.add(Node(None, top.where, heading), "Two columns have this heading.", remedy)
    if not rows:
        ledger.add(
            Node(None, where), "Only headings are here, no row.", "Fill it, or leave it out."
        )
    for row in rows:
        _check_width(row, len(headings), ledger)
    return Table(name, where, headings, tuple(rows)) if ledger.blocks == blocks else None


def _headings(top: Row) -> tuple[str, ...]:
    names = [str(cell.value).strip() for cell in top.cells]
    return tuple(
        shown(name.lower())[1:-1] if name else f"column {place}"
        for place, name in enumerate(names, start=1)
    )


def _check_width(row: Row, width: int, ledger: Ledger) -> None:
    count = len(row.cells)
    if count != width:
        what = f"This row has {count} cells, the heading {width}."
        remedy = "A comma too many or too few? Decimal commas are written as points."
        ledger.add(Node(None, row.where), what, remedy)
