import io
from decimal import Decimal

import openpyxl
import pytest

from costing.documents.estimate_workbook import estimate_xlsx
from costing.documents.wording import item_words
from costing.price.money import measured
from structures.life.cautions import CLOSING_SENTENCE
from tests.costing.documents.appraisals import (
    estimated,
    example,
    unpriced,
    without_hours,
    without_rock,
)
from tests.structures.documents.sums import calculate


def opened(found, *, values=False):
    return openpyxl.load_workbook(io.BytesIO(estimate_xlsx(found)), data_only=values)


def row_of(sheet, words):
    """Row whose first cell holds these words."""
    (row,) = [cell.row for cell in sheet["A"] if cell.value == words]
    return row


def formulas(sheet):
    return [cell.coordinate for row in sheet for cell in row if cell.data_type == "f"]


@pytest.mark.parametrize(
    ("name", "total", "sanction"),
    [
        ("A", "548403.21", "548500.00"),
        ("B", "693762.60", "693800.00"),
        ("C", "337716.02", "337800.00"),
    ],
)
def test_formulas_give_the_printed_estimate(name, total, sanction):
    """Oracle: handbook 13, examples A, B and C."""
    sheet = opened(example(name))["Abstract"]
    assert calculate(sheet, f"E{row_of(sheet, 'total')}") == Decimal(total)
    rounded = row_of(sheet, "for sanction, rounded up to the next 100")
    assert calculate(sheet, f"E{rounded}") == Decimal(sanction)


@pytest.mark.parametrize("make", [lambda: example("B"), unpriced, without_hours, estimated])
def test_values_written_beside_formulas_are_what_they_give(make):
    found = make()
    live, written = opened(found), opened(found, values=True)
    for name in ("Abstract", "Measurement"):
        cells = formulas(live[name])
        assert cells
        for at in cells:
            value, shown = calculate(live[name], at), written[name][at].value
            if isinstance(value, Decimal):
                assert float(value) == pytest.approx(shown, rel=1e-9), (name, at)
            else:
                assert value == (shown or ""), (name, at)


def test_every_line_of_the_abstract_is_a_line_of_the_estimate():
    found = example("B")
    sheet = opened(found)["Abstract"]
    for line in found.estimate.lines:
        row = row_of(sheet, item_words(line))
        assert Decimal(str(sheet.cell(row, 3).value)) == line.quantity
        assert Decimal(str(sheet.cell(row, 4).value)) == line.rate
        assert calculate(sheet, f"E{row}") == line.amount


def test_a_changed_rate_goes_through_to_the_sanction():
    """Oracle: hand sum, example B with clay at 830.00 instead of 820.00.

    160.16 x 10 = 1601.60 more: subtotal 649977.86, contingency 32498.89, overhead 12999.56,
    total 695476.31, for sanction 695500.
    """
    sheet = opened(example("B"))["Abstract"]
    sheet.cell(row_of(sheet, "clay"), 4).value = 830.0
    wanted = {
        "subtotal": "649977.86",
        "contingency": "32498.89",
        "overhead": "12999.56",
        "total": "695476.31",
        "for sanction, rounded up to the next 100": "695500.00",
    }
    for words, amount in wanted.items():
        assert calculate(sheet, f"E{row_of(sheet, words)}") == Decimal(amount), words


def test_measured_rows_add_up_to_the_quantities():
    """Oracle: handbook 13, example B; the sums are those of the abstract once rounded."""
    found = example("B")
    book = opened(found)
    sheet, abstract = book["Measurement"], book["Abstract"]
    heads = {cell.value: cell.column_letter for cell in sheet[2]}
    last = row_of(sheet, "rounded")
    columns = {
        "excavation 0.0 to 1.5 m": "excavation 0 to 1.5 m, m3",
        "excavation 6.0 to 7.5 m": "excavation 6 to 7.5 m, m3",
        "rock key": "rock key m3",
        "clay": "clay m3",
        "film": "film m2",
        "centering": "centering m2",
        "backfill": "backfill m3",
        "surplus": "surplus m3",
    }
    for item, head in columns.items():
        quantity = abstract.cell(row_of(abstract, item), 3).value
        assert calculate(sheet, f"{heads[head]}{last}") == Decimal(str(quantity)), item
    face = calculate(sheet, f"{heads['face with key m2']}{last}")
    assert face == measured(177.95)


def test_a_rate_filled_in_completes_an_unpriced_abstract():
    """Oracle: handbook 13, example B, whose rates an auditor writes in by hand."""
    sheet = opened(unpriced())["Abstract"]
    sanction = row_of(sheet, "for sanction, rounded up to the next 100")
    assert calculate(sheet, f"E{sanction}") == "not known"
    for line in example("B").estimate.lines:
        sheet.cell(row_of(sheet, item_words(line)), 4).value = float(line.rate)
    assert calculate(sheet, f"E{sanction}") == Decimal(693800)


def test_a_quantity_not_known_keeps_its_place_without_an_amount():
    sheet = opened(without_hours())["Abstract"]
    row = row_of(sheet, "dewatering")
    assert sheet.cell(row, 3).value == "not known"
    assert calculate(sheet, f"E{row}") == ""
    rounded = row_of(sheet, "for sanction, rounded up to the next 100")
    assert calculate(sheet, f"E{rounded}") == "not known"
    assert "INCOMPLETE: see the sheet Cautions" in [cell.value for cell in sheet["A"]]


def test_percentiles_are_values_of_the_draws():
    found = estimated()
    sheet = opened(found)["Abstract"]
    for words, value in (("P10", found.spread.p10), ("P90", found.spread.p90)):
        assert Decimal(str(sheet.cell(row_of(sheet, words), 5).value)) == value


def test_without_rock_nothing_is_measured_or_priced():
    book = opened(without_rock())
    assert formulas(book["Abstract"]) == []
    assert "Quantities and cost are not known: there is no wall." in [
        cell.value for cell in book["Abstract"]["A"]
    ]
    assert book["Measurement"]["A1"].value == "Nothing is measured: the rock line is not known."


def test_cautions_and_water_have_their_sheets():
    found = example("B")
    book = opened(found)
    said = [row[2].value for row in book["Cautions"].iter_rows(min_row=2)]
    assert said == [*(one.text for one in found.cautions), CLOSING_SENTENCE]
    assert [cell.value for cell in book["Water"]["A"]][1:] == [
        "saturated section",
        "underflow before the wall",
        "held behind the wall, at most",
        "through sound clay, at most",
    ]


def test_names_are_never_formulas_and_bytes_repeat():
    data = estimate_xlsx(estimated())
    assert data == estimate_xlsx(estimated())
    cell = openpyxl.load_workbook(io.BytesIO(data))["Abstract"]["A1"]
    assert cell.value == "NE-07 नेर्लवाडी <ford> & #sys.inputs"
    assert cell.data_type != "f"
