"""CSV bytes to a table (RFC 4180), with the styles that spreadsheets of other countries write.

The mark between columns and the decimal mark are told from the whole file and said as a note; where
both readings fit, nothing is guessed and the file is refused with the question.
"""

from __future__ import annotations

import codecs
import csv
import io
import re
from typing import TYPE_CHECKING, Final

from structures.intake.tables import COLUMNS_MOST, LINES_MOST, Cell, Row, Table, make_table
from structures.intake.tree import Node

if TYPE_CHECKING:
    from structures.intake.tree import Ledger

MARKS: Final = {",": "commas", ";": "semicolons", "\t": "tabs"}
# First bytes of what is sometimes sent under the name of a table: (bytes, what it is).
NO_TABLES: Final = (
    (b"\x89PNG", "a PNG picture"),
    (b"\xff\xd8\xff", "a JPEG picture"),
    (b"GIF8", "a GIF picture"),
    (b"II*\x00", "a TIFF picture"),
    (b"MM\x00*", "a TIFF picture"),
    (b"%PDF", "a PDF paper"),
    (b"PK\x03\x04", "an archive or a workbook"),
    (b"\xd0\xcf\x11\xe0", "a workbook of the old XLS kind"),
)
_COMMA: Final = re.compile(r"[+-]?\d+,\d+")  # digits of any script
_POINT: Final = re.compile(r"[+-]?\d*\.\d+")
THOUSANDS_DIGITS: Final = 3  # 1,234 is read both ways


def no_table(data: bytes) -> str:
    """Name what bytes are by their beginning where they are certainly no text; else nothing."""
    return next((what for magic, what in NO_TABLES if data.startswith(magic)), "")


def read_delimited(
    name: str, where: str, data: bytes, ledger: Ledger, *, lines_most: int = LINES_MOST
) -> Table | None:
    """Read a CSV file.

    Parameters
    ----------
    name
        The part of the pack that the table holds.
    where
        The file, as findings name it.
    lines_most
        More rows than these are refused.

    Returns
    -------
    Table or None
        None where a finding says why it cannot be read.
    """
    text = _text(where, data, ledger)
    if text is None:
        return None
    mark = _column_mark(text, where, ledger)
    lines = _lines(text, mark, where, lines_most, ledger) if mark else None
    if lines is None:
        return None
    if mark != ",":
        lines = _points_for_commas(lines, where, mark, ledger)
    return make_table(name, where, lines, ledger) if lines is not None else None


def _text(where: str, data: bytes, ledger: Ledger) -> str | None:
    node = Node(None, where)
    if not data.strip():
        ledger.add(node, "The file is empty.", "Send it again, or leave it out.")
        return None
    kind = no_table(data)
    if kind:
        ledger.add(node, f"This is {kind}, not a table.", "Send the table as CSV.")
        return None
    wide = data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE))
    try:
        text = data.decode("utf-16" if wide else "utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        remedy = "Save it as CSV UTF-8."
        ledger.add(Node(None, f"{where} line {line}"), "This is not UTF-8 text.", remedy)
        return None
    if "\0" in text:
        line = text.count("\n", 0, text.index("\0")) + 1
        remedy = "Save it as CSV UTF-8."
        ledger.add(Node(None, f"{where} line {line}"), "This is not text.", remedy)
        return None
    if not text.strip():
        ledger.add(node, "The file is empty.", "Send it again, or leave it out.")
        return None
    return text


def _column_mark(text: str, where: str, ledger: Ledger) -> str:
    """Tell the mark between columns; empty, with a finding, where two fit equally."""
    heading = re.sub(r'"[^"]*"', "", text.lstrip().splitlines()[0])
    fitting = [mark for mark in MARKS if mark in heading]
    if len(fitting) > 1:
        fitting = [mark for mark in fitting if _same_width(text, mark)]
        if len(fitting) != 1:
            what = "Columns could be separated in more than one way."
            ledger.add(Node(None, f"{where} line 1"), what, "Save it with commas between columns.")
            return ""
    return fitting[0] if fitting else ","


def _same_width(text: str, mark: str) -> bool:
    try:
        rows = [row for row in csv.reader(io.StringIO(text, newline=""), delimiter=mark) if row]
    except csv.Error:
        return False
    return len({len(row) for row in rows}) == 1 and len(rows[0]) > 1


def _lines(text: str, mark: str, where: str, lines_most: int, ledger: Ledger) -> list[Row] | None:
    """Cut text into rows; a quoted line end keeps the number of the line where the row starts."""
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=mark, strict=True)
    rows = []
    while True:
        place = f"{where} line {reader.line_num + 1}"
        try:
            cells = next(reader)
        except StopIteration:
            return rows
        except csv.Error as error:
            unclosed = "unexpected end" in str(error) or "expected after" in str(error)
            what = "A quote is not closed." if unclosed else f"The row cannot be read: {error}."
            ledger.add(Node(None, place), what, "Close it, or take the quotes out.")
            return None
        if len(rows) == lines_most or len(cells) > COLUMNS_MOST:
            what = f"The table has more than {lines_most} rows or {COLUMNS_MOST} columns."
            ledger.add(Node(None, place), what, "Split it.", rule="FI-02")
            return None
        rows.append(Row(tuple(Cell(_unguarded(cell.strip()), place) for cell in cells), place))


def _unguarded(text: str) -> str:
    """Take off the mark that keeps spreadsheets from running a cell (see `pack_writer`)."""
    return text[1:] if text[:1] == "'" and text[1:2] in {"'", "=", "+", "-", "@"} else text


def _points_for_commas(lines: list[Row], where: str, mark: str, ledger: Ledger) -> list[Row] | None:
    """Read decimal commas as points, where the whole file writes its numbers so."""
    node = Node(None, where)
    cells = [cell for row in lines for cell in row.cells]
    commas = [cell for cell in cells if _COMMA.fullmatch(cell.value)]
    if not commas:
        what = f"Columns are separated by {MARKS[mark]}."
        ledger.add(node, what, "Say so if that is wrong.", level="note", rule="FI-04")
        return lines
    thousands = all(len(cell.value.split(",")[1]) == THOUSANDS_DIGITS for cell in commas)
    if thousands or any(_POINT.fullmatch(cell.value) for cell in cells):
        what = f"Is the comma in {commas[0].value} a decimal comma or a thousands mark?"
        remedy = "Write decimal points and no thousands marks."
        ledger.add(Node(None, commas[0].where), what, remedy, rule="FI-04")
        return None
    what = (
        f"Columns are separated by {MARKS[mark]}, numbers written with a decimal comma: "
        f"{commas[0].value} is read as {commas[0].value.replace(',', '.')}."
    )
    ledger.add(node, what, "Say so if that is wrong.", level="note", rule="FI-04")
    return [Row(tuple(_pointed(cell) for cell in row.cells), row.where) for row in lines]


def _pointed(cell: Cell) -> Cell:
    matched = _COMMA.fullmatch(cell.value)
    return Cell(cell.value.replace(",", "."), cell.where) if matched else cell
