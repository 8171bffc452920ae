"""CSV as it really arrives: marks, encodings, digits, quotes, line ends."""

import csv
import io

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.delimited import read_delimited
from structures.intake.tree import Ledger


def read(data):
    ledger = Ledger()
    table = read_delimited("t", "t.csv", data if isinstance(data, bytes) else data.encode(), ledger)
    values = None if table is None else [[cell.value for cell in row.cells] for row in table.rows]
    return table, values, ledger.findings


GRID = [["1.5", "wet"], ["2.25", ""]]


@pytest.mark.parametrize(
    "data",
    [
        "a,b\r\n1.5,wet\r\n2.25,\r\n",
        "a,b\r1.5,wet\r2.25,\r",
        "a,b\n\n1.5,wet\r\n2.25,\r,\n",
        "\ufeffa,b\n1.5,wet\n2.25,\n",
        ' A ,"b"\n1.5,"wet"\n 2.25 ,',
        "a,b\n1.5,wet\n2.25,\n".encode("utf-16"),
        b"\xfe\xff" + "a\tb\n1.5\twet\n2.25\t\n".encode("utf-16-be"),
        "a;b\n1,5;wet\n2,25;\n",
        "a\tb\n1,5\twet\n2,25\t\n",
    ],
)
def test_one_table_in_many_styles(data):
    """Oracle: the same two rows, written in the styles of the list of what really arrives."""
    table, values, findings = read(data)
    assert table.headings == ("a", "b")
    assert values == GRID
    assert {f.level for f in findings} <= {"note"}


def test_decimal_commas_are_told_once():
    _, _, (finding,) = read("a;b\n1,5;x\n2,25;y\n")
    assert finding.what == (
        "Columns are separated by semicolons, numbers written with a decimal comma: "
        "1,5 is read as 1.5."
    )


def test_a_quoted_line_end_keeps_the_line_where_the_row_starts():
    """Oracle: RFC 4180; line numbers counted by hand."""
    table, values, _ = read('a,b\n1,"wet,\nread ""twice"""\n2,ok\n')
    assert values == [["1", 'wet,\nread "twice"'], ["2", "ok"]]
    assert [row.where for row in table.rows] == ["t.csv line 2", "t.csv line 4"]


@pytest.mark.parametrize(
    ("data", "where", "words"),
    [
        (b"", "t.csv", "is empty"),
        (b"\xef\xbb\xbf", "t.csv", "is empty"),
        (b"\xff\xfe", "t.csv", "is empty"),
        (b"a,b\n1,caf\xe9\n", "t.csv line 2", "not UTF-8"),
        (b"\xff\xfea\x00\n", "t.csv line 1", "not UTF-8"),
        (b"a\x00,b\n", "t.csv line 1", "not text"),
        (b"\xff\xd8\xff\xe0", "t.csv", "a JPEG picture"),
        (b"%PDF-1.7", "t.csv", "a PDF paper"),
        (b"PK\x03\x04", "t.csv", "an archive"),
        (b'a,b\n1,x\n2,"open\n3,y\n', "t.csv line 3", "quote is not closed"),
        (b'a,b\n1,"x"y\n', "t.csv line 2", "quote is not closed"),
        (b"a,b\n1,2,3\n", "t.csv line 2", "has 3 cells, the heading 2"),
        (b"a,b\n1\n", "t.csv line 2", "has 1 cells, the heading 2"),
        (b"a,b\n", "t.csv", "Only headings"),
        (b"a,a\n1,2\n", "t.csv line 1", "Two columns"),
        (b"a;b\n1,5;2.5\n", "t.csv line 2", "decimal comma or a thousands mark"),
        (b"a;b\n1,234;5\n", "t.csv line 2", "decimal comma or a thousands mark"),
        (b"a;b,c\n1;2,3\n1;2,3\n", "t.csv line 1", "more than one way"),
        (b"a,b\n" + b"x" * 200_000 + b",1\n", "t.csv line 2", "cannot be read"),
        (",".join(f"c{n}" for n in range(300)).encode(), "t.csv line 1", "200 columns"),
    ],
)
def test_what_cannot_be_read_is_said_at_its_line(data, where, words):
    """Oracle: lines counted by hand."""
    table, _, findings = read(data)
    assert table is None
    assert [f.where for f in findings if words in f.what and f.level == "block"] == [where]


def test_the_mark_that_fits_every_row_is_taken():
    table, _, _ = read("depth (m, below mark);b\n1;2\n3;4\n")
    assert table.headings == ("depth (m, below mark)", "b")


@given(st.binary(max_size=300))
def test_any_bytes_give_a_table_or_a_finding(data):
    table, _, findings = read(data)
    assert table is not None or findings


@given(
    st.lists(
        st.lists(st.text("ab\"',\n1", min_size=1, max_size=5), min_size=2, max_size=2), min_size=1
    )
)
def test_what_a_csv_writer_wrote_is_read_back(rows):
    """Oracle: the csv module's writer (RFC 4180); cells are stripped, guards taken off."""
    stream = io.StringIO()
    csv.writer(stream).writerows([["x", "y"], *rows])
    _, values, _ = read(stream.getvalue())
    expected = [[_plain(cell) for cell in row] for row in rows]
    assert (values or []) == [row for row in expected if any(row)]


def _plain(cell):
    text = cell.strip().replace("\r\n", "\n")
    return text[1:] if text[:2] == "''" else text
