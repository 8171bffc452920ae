"""Workbooks: typed cells, cell addresses, formulas with and without a value."""

import datetime
import io
import re
import zipfile

import pytest

from structures.errors import Refused
from structures.intake.survey_pack import read_pack_bytes
from tests.structures.intake.packs import workbook_bytes


def changed(data, part, old, new):
    """The workbook with the XML of one part changed."""
    stream = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(data)) as book, zipfile.ZipFile(stream, "w") as copy:
        for name in book.namelist():
            content = book.read(name)
            if name == part:
                content, count = re.subn(old, new, content)
                assert count == 1
            copy.writestr(name, content)
    return stream.getvalue()


def refusal(data):
    with pytest.raises(Refused) as refused:
        read_pack_bytes("s.xlsx", data)
    return {(f.where, f.field) for f in refused.value.findings if f.level == "block"}


def test_a_formula_counts_as_the_value_last_computed():
    """Oracle: the value 101.6 that the spreadsheet stored beside the formula in ground!B3."""
    formula = rb'<c r="B3"><f>B2-1.6</f><v>101.6</v></c>'
    data = changed(workbook_bytes(), "xl/worksheets/sheet2.xml", rb'<c r="B3".*?</c>', formula)
    pack = read_pack_bytes("s.xlsx", data)
    assert pack.ground[1].level_m == 101.6
    assert [(f.where, f.level) for f in pack.findings] == [("s.xlsx ground!B3", "note")]


def test_a_formula_without_a_value_is_refused_at_its_cell():
    assert ("s.xlsx ground!B3", "") in refusal(workbook_bytes(ground={"B3": "=B2-1.6"}))


def test_a_date_or_an_error_in_a_number_cell_is_refused_at_its_cell():
    data = workbook_bytes(ground={"B3": datetime.date(2026, 1, 3), "B4": "#REF!"})
    assert refusal(data) == {
        ("s.xlsx ground!B3", "ground.level_m"),
        ("s.xlsx ground!B4", "ground.level_m"),
    }


def test_numbers_kept_as_text_are_read_as_numbers():
    pack = read_pack_bytes("s.xlsx", workbook_bytes(ground={"B3": "101.6"}))
    assert pack.ground[1].level_m == 101.6


def test_blank_rows_and_columns_do_not_shift_addresses():
    data = workbook_bytes(probes={"A9": 44, "B9": 70, "C9": True})
    assert refusal(data) == {("s.xlsx probes!B9", "probes.depth_m")}


def test_text_repeated_without_measure_is_refused_before_it_is_spread_out():
    """A text of 2 MB named by 800 cells would open to 1.6 GB."""
    data = workbook_bytes()
    cells = b"".join(b'<c r="D%d" t="s"><v>0</v></c>' % n for n in range(2, 802))
    data = changed(data, "xl/worksheets/sheet2.xml", rb"</sheetData>", cells + b"</sheetData>")
    stream = io.BytesIO(data)
    with zipfile.ZipFile(stream, "a") as book:
        book.writestr(
            "xl/sharedStrings.xml", b"<sst><si><t>" + b"x" * 2_000_000 + b"</t></si></sst>"
        )
    assert refusal(stream.getvalue()) == {("s.xlsx", "")}


@pytest.mark.parametrize("head", [b"<!DOCTYPE a>", b"\0"])
def test_xml_that_is_not_plain_is_refused(head):
    data = changed(workbook_bytes(), "xl/worksheets/sheet1.xml", rb"\A", head)
    assert refusal(data) == {("s.xlsx", "")}


def test_a_workbook_that_is_none_inside_is_refused():
    data = changed(workbook_bytes(), "xl/workbook.xml", rb"<sheets>", b"<sheets")
    assert refusal(data) == {("s.xlsx", "")}


def test_a_sheet_of_a_pack_without_rows_is_refused():
    assert refusal(workbook_bytes(side_slope={})) == {("s.xlsx side_slope", "")}


def test_a_sheet_that_would_open_to_very_many_cells_is_refused():
    """Oracle: a value at CA15000 spans 79 by 15000 cells, over half a million."""
    data = workbook_bytes(ground={"CA15000": 1})
    assert refusal(data) == {("s.xlsx ground", "")}
