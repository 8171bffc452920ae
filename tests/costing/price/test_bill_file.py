"""A contractor's bill as a file."""

from decimal import Decimal
from pathlib import Path

import pytest

from costing.price.bill_file import read_bill
from costing.price.billing import BillLineAsked, judge_lines
from structures.errors import Refused
from tests.costing.demo_works import book, contract

# The project's own: three lines of a bill whose entries were billed before.
TWICE = Path(__file__).parent / "files" / "bill_entry_twice.csv"


def test_a_bill_is_read_exactly():
    """Oracle: the file, read by eye."""
    bill = read_bill("b.csv", TWICE.read_bytes())
    assert bill.number == "TA-05-X"
    assert bill.lines[0] == BillLineAsked(
        1, "TA-05-M01-excavation-0.0", Decimal("24.59"), Decimal("145.00"), Decimal("3565.55")
    )
    assert [one.line_no for one in bill.lines] == [1, 2, 3]


def test_entries_that_were_billed_are_named_with_their_bill():
    """Oracle: rule BL-01 and the invented district's bill TA-05-RB1, lines 1 to 3."""
    bill = read_bill("b.csv", TWICE.read_bytes())
    judged = judge_lines(bill.number, bill.lines, book("TA-05", ("TA-05-RB1",)), contract())
    assert [one.status for one in judged] == ["refused"] * 3
    assert [one.findings[0].what for one in judged] == [
        f"Entry {line.entry_id} was billed in TA-05-RB1, line {line.line_no}."
        for line in bill.lines
    ]


@pytest.mark.parametrize(
    ("rows", "words"),
    [
        (
            b"bill,line,entry,quantity,rate\nA,1,x,1.00,2.00\nB,2,y,1.00,2.00\n",
            "more than one bill",
        ),
        (b"bill,line,entry,quantity,rate\nA,one,x,1.00,2.00\n", "one"),
        (b"bill,line,entry,quantity,rate\nA,1,,1.00,2.00\n", "This is missing."),
        (b"bill,line,entry,quantity,rate\nA,1,x,much,2.00\n", "much"),
        (b"bill,line,entry,quantity\nA,1,x,1.00\n", "This column is missing."),
        (b"", ""),
        (b"\x89PNG\r\n", ""),
    ],
)
def test_what_cannot_be_read_is_said(rows, words):
    with pytest.raises(Refused) as refused:
        read_bill("b.csv", rows)
    assert words in " ".join(one.what for one in refused.value.findings)


def test_a_decimal_comma_is_understood_where_columns_are_marked_by_semicolons():
    rows = b"bill;line;entry;quantity;rate;amount\nA;1;x;4,86;763,00;3708,18\n"
    [line] = read_bill("b.csv", rows).lines
    assert (line.quantity, line.rate, line.amount) == tuple(
        map(Decimal, ("4.86", "763.00", "3708.18"))
    )
