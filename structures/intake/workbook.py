"""XLSX bytes to tables, one a sheet; findings name cells as the person sees them (ground!B4).

Before a workbook is opened its XML is scanned for what would make a small file large: a value far
from the table, one long text repeated in many cells.
"""

from __future__ import annotations

import io
import re
from html import unescape
from typing import TYPE_CHECKING, Final

from openpyxl.utils.cell import column_index_from_string, get_column_letter
from python_calamine import CalamineError, CalamineWorkbook, SheetTypeEnum

from structures.intake.archive import BOOK, FILE_MOST_BYTES, read_archive
from structures.intake.table_form import is_part
from structures.intake.tables import COLUMNS_MOST, LINES_MOST, Cell, Row, Table, make_table
from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from structures.intake.tree import Ledger

Sheet = tuple[str, list[list[object]]]  # title, rows of cells

LINKS: Final = "xl/_rels/workbook.xml.rels"
CELLS_MOST: Final = 500_000  # cells of one sheet, empty ones between values included
TEXT_MOST_BYTES: Final = 10 * FILE_MOST_BYTES  # longest text times cells, before it is spread out
# Tags end at the next bracket, so that each pattern passes over its bytes once.
_CELL: Final = re.compile(rb"<(?:\w+:)?c(\s[^<>]*)>")
_FORMULA: Final = re.compile(rb"<(?:\w+:)?c(\s[^<>]*)>\s*<(?:\w+:)?f[\s/>]")
_ADDRESS: Final = re.compile(rb"\sr=[\"']([A-Za-z]{1,3})([0-9]{1,9})[\"']")
_SHEET: Final = re.compile(rb"<(?:\w+:)?sheet\s[^<>]*>")
_LINK: Final = re.compile(rb"<(?:\w+:)?Relationship\s[^<>]*>")
_TEXT: Final = re.compile(rb"<(?:\w+:)?si[\s>]")


def read_workbook(name: str, data: bytes, ledger: Ledger) -> list[Table]:
    """Read the sheets of a workbook that a pack has; none, with findings, where it cannot be read.

    A formula counts as the value it had when the workbook was saved; one without a value is
    refused at its cell.
    """
    opened = _open(name, data, ledger)
    if opened is None:
        return []
    sheets, formulas = opened
    tables = []
    for title, rows in sheets:
        if not is_part(title.strip().lower(), f"{name} {shown(title)[1:-1]}", ledger):
            continue
        _tell_formulas(name, title, rows, formulas.get(title, []), ledger)
        table = _table(name, title, rows, ledger)
        if table is None:
            ledger.unread.add(title.strip().lower())
        else:
            tables.append(table)
    return tables


def read_list_sheet(name: str, data: bytes, title: str, ledger: Ledger) -> Table | None:
    """Read the one sheet of a workbook that holds a list: the only filled one, else by its title.

    Returns
    -------
    Table or None
        None where a finding says why it cannot be read.
    """
    opened = _open(name, data, ledger)
    if opened is None:
        return None
    sheets, formulas = opened
    filled = [
        (one, rows) for one, rows in sheets if any(value != "" for row in rows for value in row)
    ]
    chosen = [one for one in filled if one[0].strip().lower() == title] or filled
    if len(chosen) != 1:
        what = f"Sheets with something in them: {len(filled)}; none is the one to read."
        remedy = f"Name one sheet {title}." if filled else "Fill one, and send it again."
        ledger.add(Node(None, name), what, remedy)
        return None
    ((found, rows),) = chosen
    if len(filled) > 1:
        what = f"Only the sheet {shown(found)[1:-1]} is read; the others stay in the file."
        ledger.add(Node(None, name), what, "", level="note", rule="FI-03")
    _tell_formulas(name, found, rows, formulas.get(found, []), ledger)
    return _table(name, found, rows, ledger)


def read_sheets(name: str, data: bytes, ledger: Ledger) -> list[Sheet]:
    """Read every sheet as it looks; none, with findings, where the workbook cannot be read."""
    opened = _open(name, data, ledger)
    if opened is None:
        return []
    sheets, formulas = opened
    for title, rows in sheets:
        _tell_formulas(name, title, rows, formulas.get(title, []), ledger)
    return sheets


def _open(
    name: str, data: bytes, ledger: Ledger
) -> tuple[list[Sheet], dict[str, list[str]]] | None:
    """Judge a workbook before it is opened; give its sheets and the addresses of formulas."""
    blocks = ledger.blocks
    entries = read_archive(name, data, ledger)
    _check_size(name, entries, ledger)
    if ledger.blocks > blocks:
        return None
    try:
        sheets = _sheets(data)
    except (CalamineError, ValueError, OSError) as error:
        what = f"The workbook cannot be read: {shown(str(error))}."
        ledger.add(Node(None, name), what, "Save it again as XLSX.")
        return None
    return sheets, _formulas(entries)


def _sheets(data: bytes) -> list[Sheet]:
    book = CalamineWorkbook.from_filelike(io.BytesIO(data))
    return [
        (sheet.name, book.get_sheet_by_name(sheet.name).to_python(skip_empty_area=False))
        for sheet in book.sheets_metadata
        if sheet.typ == SheetTypeEnum.WorkSheet
    ]


def _table(name: str, title: str, rows: list[list[object]], ledger: Ledger) -> Table | None:
    where = f"{name} {shown(title)[1:-1]}"
    if len(rows) * len(rows[0] if rows else ()) > CELLS_MOST:
        what = f"The sheet has more than {CELLS_MOST} cells."
        ledger.add(Node(None, where), what, "Save the table alone.", rule="FI-02")
        return None
    lines = [
        Row(
            tuple(
                Cell(
                    value.strip() if isinstance(value, str) else value,
                    f"{where}!{get_column_letter(column)}{line}",
                )
                for column, value in enumerate(values, start=1)
            ),
            f"{where} row {line}",
        )
        for line, values in enumerate(rows, start=1)
    ]
    return make_table(title.strip().lower(), where, lines, ledger)


def _check_size(name: str, entries: dict[str, bytes], ledger: Ledger) -> None:
    """Refuse what would open far beyond its size, or is written so that it cannot be judged."""
    longest = cells = 0
    for inner, content in entries.items():
        if not inner.endswith(".xml"):
            continue
        filled = [tag for tag in _CELL.findall(content) if not tag.endswith(b"/")]
        odd = any(tag.count(b'"') % 2 or tag.count(b"'") % 2 for tag in filled)
        if b"\0" in content or b"<!DOCTYPE" in content or odd:
            ledger.add(
                Node(None, name), f"{shown(inner)} is no plain XML.", "Save it again as XLSX."
            )
        _check_far(f"{name} {inner.rsplit('/', 1)[-1]}", filled, ledger)
        cells += len(filled)
        longest = max([longest, *(len(text) for text in _TEXT.split(content)[1:])])
    if longest * cells > TEXT_MOST_BYTES:
        what = "The texts of this workbook are too long."
        ledger.add(Node(None, name), what, "Save the tables alone.", rule="FI-02")


def _check_far(where: str, filled: list[bytes], ledger: Ledger) -> None:
    for address in filter(None, map(_ADDRESS.search, filled)):
        letters, line = address[1].decode().upper(), int(address[2])
        if line > LINES_MOST or column_index_from_string(letters) > COLUMNS_MOST:
            what = "A value stands far from the table."
            node = Node(None, f"{where}!{letters}{line}")
            ledger.add(node, what, "Delete it and save again.", rule="FI-02")
            return


def _formulas(entries: dict[str, bytes]) -> dict[str, list[str]]:
    """Give the addresses of formula cells by the sheet's title."""
    parts = {
        _attribute(link, b"Id"): _attribute(link, b"Target").removeprefix("/").removeprefix("xl/")
        for link in _LINK.findall(entries.get(LINKS, b""))
    }
    return {
        _attribute(sheet, b"name"): [
            (address[1] + address[2]).decode().upper()
            for tag in _FORMULA.findall(
                entries.get("xl/" + parts.get(_attribute(sheet, rb"\w+:id"), ""), b"")
            )
            if (address := _ADDRESS.search(tag))
        ]
        for sheet in _SHEET.findall(entries.get(BOOK, b""))
    }


def _attribute(tag: bytes, name: bytes) -> str:
    found = re.search(rb"\s" + name + rb"=[\"']([^\"']*)[\"']", tag)
    return unescape(found[1].decode(errors="replace")) if found else ""


def _tell_formulas(
    name: str, title: str, rows: list[list[object]], addresses: list[str], ledger: Ledger
) -> None:
    for address in addresses:
        letters, digits = re.fullmatch(r"([A-Z]+)([0-9]+)", address).groups()
        line, column = int(digits) - 1, column_index_from_string(letters) - 1
        value = rows[line][column] if line < len(rows) and column < len(rows[line]) else ""
        node = Node(None, f"{name} {shown(title)[1:-1]}!{address}")
        if value == "":
            ledger.add(node, "A formula without a value stands here.", "Type the value itself.")
    if addresses:
        node = Node(None, f"{name} {shown(title)[1:-1]}!{addresses[0]}")
        what = f"Cells with formulas: {len(addresses)}; the values last computed were read."
        ledger.add(node, what, "Type the values where they matter.", level="note")
