import io
from datetime import date, datetime
from decimal import Decimal

import openpyxl
import pytest

from structures.documents.workbook import Book, Formula
from tests.structures.documents.sums import calculate

ON = date(2027, 3, 14)


def saved(fill):
    book = Book.begin("NE-07: estimate", ON)
    fill(book.leaf("Sheet"))
    return book.save()


def opened(data, *, values=False):
    return openpyxl.load_workbook(io.BytesIO(data), data_only=values)["Sheet"]


@pytest.mark.parametrize(
    "words", ["=1+1", "+41", "-5", "@SUM(A1)", "=cmd|' /C calc'!A0", "\tx", "plain", "नेर <&>"]
)
def test_words_stay_words_whatever_they_begin_with(words):
    cell = opened(saved(lambda leaf: leaf.add(words)))["A1"]
    assert cell.value == words
    assert cell.data_type in ("s", "inlineStr")
    assert bool(cell.quotePrefix) == (words[0] in "=+-@\t")


def test_characters_that_a_workbook_cannot_hold_are_left_out():
    assert opened(saved(lambda leaf: leaf.add("a\x00b\x0bc")))["A1"].value == "abc"


def test_a_formula_is_live_and_carries_its_value():
    """Oracle: handbook 8.b, 12.345 rounded to 12.35 times 100.10 is 1236.24 by hand."""

    def fill(leaf):
        leaf.add(12.35, Decimal("100.10"), Formula("ROUND(A1*B1,2)", Decimal("1236.24")))
        leaf.add(Formula('IF(COUNT(A1:B1)=2,"a < b","")', "a < b"))

    data = saved(fill)
    assert opened(data)["C1"].value == "=ROUND(A1*B1,2)"
    assert opened(data, values=True)["C1"].value == 1236.24
    assert opened(data, values=True)["A2"].value == "a < b"
    assert calculate(opened(data), "C1") == Decimal("1236.24")
    assert calculate(opened(data), "A2") == "a < b"


def test_the_same_content_on_the_same_day_gives_the_same_bytes():
    def fill(leaf):
        leaf.add("x", 1.5, Formula("B1*2", 3.0))

    data = saved(fill)
    assert data == saved(fill)
    properties = openpyxl.load_workbook(io.BytesIO(data)).properties
    assert (properties.created, properties.modified) == (datetime(2027, 3, 14),) * 2  # noqa: DTZ001
    assert properties.title == "NE-07: estimate"


def test_sheets_print_on_a4():
    book = Book.begin("t", ON)
    book.leaf("Upright").add("x")
    book.leaf("Across", landscape=True).add("x")
    sheets = openpyxl.load_workbook(io.BytesIO(book.save()))
    assert [sheet.page_setup.paperSize for sheet in sheets] == [9, 9]  # 9 is A4, ECMA-376 18.3.1.63
    assert [sheet.page_setup.orientation for sheet in sheets] == ["portrait", "landscape"]
