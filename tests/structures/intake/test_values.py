"""What a cell or a JSON value may hold in place of a number, and what is said of it."""

import pytest

from structures.intake.fields import Field
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_fields, read_value

DEPTH = Field("depth_m", "depth", unit="m", low=0, high=60)

READ = [("4", 4.0), (" 4.50 ", 4.5), ("+.5", 0.5), ("1e1", 10.0), ("6.", 6.0), (7, 7.0), (0.0, 0.0)]
SLIPS = [
    ("12,5", "has a comma"),
    ("1,23,456.00", "has a comma"),
    ("3 m", "has words behind the number"),
    ("3.2 (ref)", "has words behind the number"),
    ("O.5", "has a letter in place of a digit"),
    ("l7.2", "has a letter in place of a digit"),
    (">4.5", "is a limit"),
    ("4.5+", "is a limit"),
    ("=B2+1", "is a formula"),
    ("+A1", "is a formula"),
    ("NaN", "is not a number"),
    ("-inf", "is not a number"),
    ("R 3.2", "is not a number"),
    ("--3", "is not a number"),
    ("1" * 50, "is not a number"),
]


@pytest.mark.parametrize(("cell", "value"), READ)
def test_a_number_in_a_table_is_read(cell, value):
    ledger = Ledger()
    assert read_value(Node(cell, "p.csv line 2", "depth_m", tabular=True), DEPTH, ledger) == value
    assert ledger.findings == []


@pytest.mark.parametrize(("cell", "words"), SLIPS)
def test_a_slip_is_named_with_its_remedy(cell, words):
    """Oracle: the list of what really arrives in number cells."""
    ledger = Ledger()
    assert read_value(Node(cell, "p.csv line 2", "depth_m", tabular=True), DEPTH, ledger) is None
    (finding,) = ledger.findings
    assert words in finding.what
    assert finding.remedy


@pytest.mark.parametrize("value", ["4", True, [], {}, "=4"])
def test_json_takes_numbers_only(value):
    ledger = Ledger()
    assert read_value(Node(value, "$", "depth_m"), DEPTH, ledger) is None
    assert ledger.blocks == 1


def test_digits_of_another_script_are_read_and_told_once_a_column():
    """Oracle: Unicode, DEVANAGARI DIGIT NINE and ONE have the decimal values 9 and 1."""
    ledger = Ledger()
    for line in (2, 3):
        node = Node("९.१", f"p.csv line {line}", "depth_m", tabular=True)
        assert read_value(node, DEPTH, ledger) == 9.1
    assert [(f.where, f.level) for f in ledger.findings] == [("p.csv line 2", "note")]
    assert read_value(Node("९.१", "$", "depth_m"), DEPTH, ledger) is None


def test_an_open_limit_leaves_out_its_own_value():
    field = Field("k", "k", low=0, high=1, open_low=True)
    ledger = Ledger()
    assert read_value(Node(0, "$", "k"), field, ledger) is None
    assert read_value(Node(1, "$", "k"), field, ledger) == 1.0


@pytest.mark.parametrize("value", ["a\x00b", "a\x1bb", "\ud800", "x" * 2001, 5, None])
def test_text_that_cannot_be_printed_or_is_none_is_refused(value):
    ledger = Ledger()
    assert read_value(Node(value, "$", "note"), Field("note", "note", "text"), ledger) is None
    assert ledger.blocks == 1


def test_text_like_a_formula_is_kept_and_told():
    ledger = Ledger()
    node = Node('=HYPERLINK("x")', "g.csv line 2", "note", tabular=True)
    assert read_value(node, Field("note", "note", "text"), ledger) == '=HYPERLINK("x")'
    assert [f.level for f in ledger.findings] == ["note"]


def test_a_code_typed_as_a_number_in_a_sheet_is_text():
    node = Node(12.0, "s.xlsx site!A2", "site.code", tabular=True)
    assert read_value(node, Field("code", "code", "code"), Ledger()) == "12"


def test_what_a_message_repeats_is_short_and_printable():
    assert shown("a\n" + "b" * 100) == '"a\N{REPLACEMENT CHARACTER}' + "b" * 38 + '..."'
    assert shown({"a": 1}) == "an object"
    assert shown(None) == "nothing"


def test_missing_and_unknown_fields_are_told_together():
    fields = (Field("depth_m", "depth", required=True), Field("note", "note", "text"))
    ledger = Ledger()
    assert read_fields(Node({"dept_m": 3}, "$.p[0]", "p"), fields, ledger) is None
    assert [(f.field, f.level) for f in ledger.findings] == [
        ("p.depth_m", "block"),
        ("p.dept_m", "warn"),
    ]
