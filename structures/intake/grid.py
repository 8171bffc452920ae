"""Any file of rows as it looks: every sheet, every line, nothing named or judged yet.

Where the readers of packs refuse what is written unusually, this one tells what it made of it, since
the sender confirms that once and is not asked to write the file anew.
"""

from __future__ import annotations

import codecs
import csv
import io
import re
from dataclasses import dataclass
from pathlib import PurePosixPath
from typing import TYPE_CHECKING, Final

from structures.intake.archive import (
    BOOK,
    check_nested,
    entry_names,
    is_packed,
    read_archive,
    too_large,
)
from structures.intake.delimited import MARKS, no_table
from structures.intake.tables import COLUMNS_MOST
from structures.intake.tree import Node

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.tree import Ledger

LINES_MOST: Final = 200_000  # ten wells read daily for half a century
LOOKED_AT: Final = 200  # lines from which the mark between columns is told


@dataclass(frozen=True, slots=True)
class Line:
    """One row; `number` is the line on which it starts, text is stripped."""

    number: int
    cells: tuple[object, ...]

    def cell(self, place: int) -> object:
        """Give a cell; where the row is shorter, a blank one."""
        return self.cells[place] if place < len(self.cells) else ""


@dataclass(frozen=True, slots=True)
class Grid:
    """One table as it looks; `where` names file and sheet, `mark` what stands between columns."""

    where: str
    lines: tuple[Line, ...]
    mark: str = ""

    def place(self, line: Line) -> str:
        """Name a row as findings do."""
        return f"{self.where} line {line.number}"


def read_grids(name: str, data: bytes, ledger: Ledger) -> list[Grid]:
    """Read every table of a file: text, a workbook's sheets, or the tables packed in a zip.

    Source: field practice 8, nos. 1, 19 to 23, 26, 38 and 40.

    Returns
    -------
    list of Grid
        None of them, with findings, where the file cannot be read.
    """
    if what := too_large(len(data)):
        ledger.add(Node(None, name), what, "Split it.", rule="FI-02")
        return []
    if not is_packed(data):
        grid = _read_text(name, data, ledger)
        return [] if grid is None else [grid]
    if BOOK in entry_names(data):
        # The workbook library takes a fifth of a second to load; text does without it.
        from structures.intake.workbook import read_sheets  # noqa: PLC0415 -- see above

        return _filled(
            Grid(f"{name} {title}", _lines_of(rows))
            for title, rows in read_sheets(name, data, ledger)
        )
    files = read_archive(name, data, ledger)
    blocks = ledger.blocks
    check_nested(name, files, ledger)
    if ledger.blocks > blocks:
        return []
    grids = []
    for inner, content in files.items():
        grid = _read_text(f"{name} {PurePosixPath(inner).name}", content, ledger)
        grids += [] if grid is None else [grid]
    return grids


def _filled(grids: Iterable[Grid]) -> list[Grid]:
    return [grid for grid in grids if grid.lines]


def _lines_of(rows: list[list[object]]) -> tuple[Line, ...]:
    lines = (
        Line(number, tuple(one.strip() if isinstance(one, str) else one for one in cells))
        for number, cells in enumerate(rows, start=1)
    )
    return tuple(line for line in lines if any(cell != "" for cell in line.cells))


def _read_text(where: str, data: bytes, ledger: Ledger) -> Grid | None:
    node = Node(None, where)
    if not data.strip():
        ledger.add(node, "The file is empty.", "Send it again, or leave it out.")
        return None
    if kind := no_table(data):
        ledger.add(node, f"This is {kind}, not a table.", "Send the table as CSV or XLSX.")
        return None
    text = _decoded(node, data, ledger)
    if text is None:
        return None
    mark = _mark(text)
    lines = _cut(where, text, mark, ledger)
    if lines is None:
        return None
    if len(lines) < 2:
        what = "Only headings are here, no row." if lines else "The file is empty."
        ledger.add(node, what, "Fill it, or leave it out.")
        return None
    if mark != ",":
        what = f"Columns are separated by {MARKS[mark]}."
        ledger.add(node, what, "Say so if that is wrong.", level="note", rule="FI-04")
    return Grid(where, tuple(lines), mark)


def _decoded(node: Node, data: bytes, ledger: Ledger) -> str | None:
    """Turn bytes into text: UTF-16 by its mark, UTF-8, and Latin letters only where that fails."""
    wide = data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE))
    try:
        text = data.decode("utf-16" if wide else "utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        text = data.decode("cp1252", errors="replace")
        what = f"Line {line} is not UTF-8; the file is read as Latin letters (cp1252)."
        ledger.add(node, what, "Look at the remarks below.", level="warn", rule="FI-04")
    if "\0" in text:
        what = "This is not text, or text of two bytes a letter without its mark."
        ledger.add(node, what, "Save it as CSV UTF-8.")
        return None
    return text


def _mark(text: str) -> str:
    """Tell the mark between columns: the one that most lines have as often as one another."""
    lines = [re.sub(r'"[^"]*"', "", line) for line in text.splitlines()[:LOOKED_AT]]
    best = ","
    score = 0
    for mark in MARKS:
        counts = [line.count(mark) for line in lines if line.strip()]
        usual = max(set(counts), key=counts.count) if counts else 0
        agree = counts.count(usual) * (2 if mark != "," else 1) if usual else 0
        if agree > score:
            best, score = mark, agree
    return best


def _cut(where: str, text: str, mark: str, ledger: Ledger) -> list[Line] | None:
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=mark, strict=True)
    lines: list[Line] = []
    while True:
        number = reader.line_num + 1
        try:
            cells = next(reader)
        except StopIteration:
            return lines
        except csv.Error as error:
            unclosed = "unexpected end" in str(error) or "expected after" in str(error)
            what = "A quote is not closed." if unclosed else f"The row cannot be read: {error}."
            remedy = "Close it, or take the quotes out. Nothing after it was read."
            ledger.add(Node(None, f"{where} line {number}"), what, remedy)
            return lines
        if len(lines) == LINES_MOST or len(cells) > COLUMNS_MOST:
            what = f"The table has more than {LINES_MOST} rows or {COLUMNS_MOST} columns."
            ledger.add(Node(None, f"{where} line {number}"), what, "Split it.", rule="FI-02")
            return None
        if any(cell.strip() for cell in cells):
            lines.append(Line(number, tuple(cell.strip() for cell in cells)))
