"""Workbooks that calculate: live formulas with the values they give, and words that stay words.

A text that begins like a formula is written as text, so that nothing typed into a survey is ever
calculated by a spreadsheet. Each formula carries its value, for readers that do not calculate. The
same content on the same day gives the same bytes.
"""

from __future__ import annotations

import io
import re
import zipfile
from dataclasses import dataclass, field
from datetime import date, datetime
from decimal import Decimal
from html import escape
from typing import TYPE_CHECKING, Final

from openpyxl import Workbook
from openpyxl.cell.cell import ILLEGAL_CHARACTERS_RE
from openpyxl.styles import Alignment, Border, Font, Side
from openpyxl.utils import get_column_letter

if TYPE_CHECKING:
    from openpyxl.cell.cell import Cell
    from openpyxl.worksheet.worksheet import Worksheet

FORMULA_SIGNS: Final = ("=", "+", "-", "@", "\t", "\r")  # what spreadsheets may take for a formula
EPOCH: Final = (1980, 1, 1, 0, 0, 0)  # the earliest time that a zip entry can carry
CREATOR: Final = "Underbund"
RULE: Final = Border(bottom=Side(style="thin"))
MODIFIED: Final = re.compile(r"(<dcterms:modified[^>]*>)[^<]*(</dcterms:modified>)")
FORMULA_CELL: Final = re.compile(
    r'<c r="(?P<at>[A-Z]+[0-9]+)"(?P<rest>[^>]*)><f>(?P<formula>[^<]*)</f><v ?/></c>'
)


@dataclass(frozen=True, slots=True)
class Formula:
    """A live formula, written without "=", and the value that it gives now."""

    text: str
    value: Decimal | float | str


Value = str | float | int | Decimal | date | Formula | None


@dataclass(slots=True)
class Leaf:
    """One sheet of a workbook, filled row by row."""

    sheet: Worksheet
    row: int = 0
    formulas: dict[str, Formula] = field(default_factory=dict)

    def add(self, *values: Value, bold: bool = False, form: str | None = None) -> int:
        """Write one row and give its number; `form` is the number format of its numbers."""
        self.row += 1
        for column, value in enumerate(values, 1):
            if value is None:
                continue
            cell = self.sheet.cell(self.row, column)
            write_value(cell, value, bold=bold, form=form)
            if isinstance(value, Formula):
                self.formulas[cell.coordinate] = value
        return self.row

    def say(self, words: str, *, bold: bool = False) -> int:
        """Write a sentence that runs on over the empty cells beside it."""
        row = self.add(words, bold=bold)
        self.sheet.cell(row, 1).alignment = Alignment(wrap_text=False)
        return row

    def head(self, *words: str) -> int:
        """Write the head of a table, with a rule below it."""
        row = self.add(*words, bold=True)
        for column in range(1, len(words) + 1):
            cell = self.sheet.cell(row, column)
            cell.border = RULE
            cell.alignment = Alignment(wrap_text=True, vertical="bottom")
        return row

    def skip(self) -> None:
        """Leave a row empty."""
        self.row += 1

    def widths(self, *characters: float) -> None:
        """Set how wide the columns are."""
        for column, width in enumerate(characters, 1):
            self.sheet.column_dimensions[get_column_letter(column)].width = width


def write_value(cell: Cell, value: Value, *, bold: bool = False, form: str | None = None) -> None:
    """Write one value; words stay words whatever they begin with."""
    if isinstance(value, Formula):
        cell.value = f"={value.text}"
    elif isinstance(value, str):
        cell.value = ILLEGAL_CHARACTERS_RE.sub("", value)
        cell.data_type = "s"
        cell.quotePrefix = value.startswith(FORMULA_SIGNS)
        cell.alignment = Alignment(wrap_text=True, vertical="top")
    else:
        cell.value = value
    if form is not None and not isinstance(value, str):
        cell.number_format = form
    if bold:
        cell.font = Font(bold=True)


@dataclass(slots=True)
class Book:
    """A workbook in the making."""

    made_on: date
    book: Workbook
    leaves: list[Leaf] = field(default_factory=list)

    @classmethod
    def begin(cls, title: str, made_on: date) -> Book:
        """Begin an empty workbook of a day."""
        book = Workbook()
        book.remove(book.active)
        moment = datetime(made_on.year, made_on.month, made_on.day)  # noqa: DTZ001 -- the format has no zone
        book.properties.creator = CREATOR
        book.properties.title = ILLEGAL_CHARACTERS_RE.sub("", title)
        book.properties.created = moment
        return cls(made_on, book)

    def leaf(self, name: str, *, landscape: bool = False) -> Leaf:
        """Add a sheet that prints on A4, as wide as the page."""
        sheet = self.book.create_sheet(name)
        sheet.page_setup.orientation = "landscape" if landscape else "portrait"
        sheet.page_setup.paperSize = sheet.PAPERSIZE_A4
        sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
        sheet.sheet_properties.pageSetUpPr.fitToPage = True
        self.leaves.append(Leaf(sheet))
        return self.leaves[-1]

    def save(self) -> bytes:
        """Give the file's bytes, with the value of each formula written beside it."""
        raw = io.BytesIO()
        self.book.save(raw)
        leaves = {f"xl/worksheets/sheet{i}.xml": leaf for i, leaf in enumerate(self.leaves, 1)}
        packed = io.BytesIO()
        with zipfile.ZipFile(raw) as source, zipfile.ZipFile(packed, "w") as target:
            for entry in source.infolist():
                content = source.read(entry)
                if entry.filename in leaves:
                    content = _with_values(content, leaves[entry.filename].formulas)
                elif entry.filename == "docProps/core.xml":
                    content = self._dated(content)
                info = zipfile.ZipInfo(entry.filename, EPOCH)
                info.compress_type = zipfile.ZIP_DEFLATED
                target.writestr(info, content)
        return packed.getvalue()

    def _dated(self, content: bytes) -> bytes:
        """Set the time of the last change to the day itself, so that it is no clock's."""
        moment = f"{self.made_on.isoformat()}T00:00:00Z"
        return MODIFIED.sub(rf"\g<1>{moment}\g<2>", content.decode()).encode()


def _with_values(content: bytes, formulas: dict[str, Formula]) -> bytes:
    """Write into each formula's cell the value it gives."""

    def fill(match: re.Match[str]) -> str:
        value = formulas[match["at"]].value
        kind = ' t="str"' if isinstance(value, str) else ""
        shown = escape(value) if isinstance(value, str) else str(value)
        rest = re.sub(r' t="[^"]*"', "", match["rest"])
        return f'<c r="{match["at"]}"{rest}{kind}><f>{match["formula"]}</f><v>{shown}</v></c>'

    return FORMULA_CELL.sub(fill, content.decode()).encode()
