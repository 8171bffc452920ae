"""Uploads of readings: three piles. Oracle: the interface of readings, field practice 7 and 8."""

from datetime import UTC, datetime, timedelta, timezone
from uuid import UUID

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.level_file import LevelFile, read_level_file

ZONE = timezone(timedelta(hours=5, minutes=30))
HEAD = "id,well,mark,read_at,state,dry,depth_m,read_by,note\n"
ROW = "f50f3e6d-7fff-4eef-a17f-06cb85f0b1fc,W8,M1,2027-06-03T06:25+05:30,static,no,8.31,field-5,\n"
NOW = datetime(2027, 12, 1, tzinfo=UTC)


def read(rows, head=HEAD):
    return read_level_file("l.csv", (head + rows).encode(), ZONE, now=NOW)


def piles(rows):
    return [
        (row.pile, [one.rule for one in row.findings if one.level != "note"])
        for row in read(rows).rows
    ]


def test_a_row_is_kept_as_it_was_sent():
    (row,) = read(ROW).rows
    assert (row.id, row.well, row.mark) == (
        UUID("f50f3e6d-7fff-4eef-a17f-06cb85f0b1fc"),
        "W8",
        "M1",
    )
    assert row.read_at == datetime(2027, 6, 3, 0, 55, tzinfo=UTC)
    assert (row.state, row.dry, row.depth_m) == ("static", False, 8.31)
    assert (row.read_by, row.note, row.pile, row.findings) == ("field-5", "", "kept", ())


@pytest.mark.parametrize(
    ("change", "pile", "rules"),
    [
        (("8.31", ""), "refused", [""]),
        (("8.31", "-"), "refused", [""]),
        (("8.31", "-0.2"), "refused", [""]),
        (("8.31", "431.2"), "refused", [""]),
        (("static,no,8.31", "flooded,,"), "kept", []),
        (("static", "flowing"), "held", [""]),
        (("no,8.31", "yes,11.4"), "kept", []),
        (("no,8.31", ",dry"), "kept", ["LV-05"]),
        (("2027-06", "2028-06"), "held", ["LV-11"]),
        (("field-5,", "field-5,parapet raised"), "held", ["LV-03"]),
        (("f50f3e6d", "zzz"), "refused", [""]),
        (("W8", ""), "refused", [""]),
        (("M1", ""), "refused", [""]),
    ],
)
def test_each_row_has_its_pile(change, pile, rules):
    assert piles(ROW.replace(*change)) == [(pile, rules)]


def test_one_bad_row_leaves_the_others_alone():
    other = ROW.replace("8.31", "wet").replace("06-03", "06-18").replace("f50f", "a50f")
    found = read(ROW + other)
    assert [found.count(pile) for pile in ("kept", "held", "refused")] == [1, 0, 1]
    (why,) = found.rows[1].findings
    assert (why.where, why.field) == ("l.csv line 3", "depth_m")


def test_doubles_are_kept_once_and_contradictions_wait():
    assert piles(ROW + ROW) == [("kept", []), ("refused", ["PC-01"])]
    assert piles(ROW + ROW.replace("8.31", "7.31")) == [("held", ["LV-13"]), ("held", ["LV-13"])]


def test_an_identifier_may_be_absent():
    (row,) = read(ROW.split(",", 1)[1], HEAD.split(",", 1)[1]).rows
    assert (row.id, row.pile) == (None, "kept")


def test_a_file_without_its_columns_is_refused():
    with pytest.raises(Refused) as refused:
        read("a,b\n", "x,y\n")
    fields = [one.field for one in refused.value.findings if one.level == "block"]
    assert fields == ["well", "mark", "read_at", "depth_m"]


@given(
    st.lists(
        st.text(st.characters(codec="utf-8", exclude_characters='\r\n"\0;\t'), max_size=12),
        max_size=9,
    )
)
def test_any_row_finds_a_pile(cells):
    try:
        found = read(ROW + ",".join(cells) + "\n")
    except Refused as refused:
        found = refused
    assert isinstance(found, LevelFile) or found.findings
    for row in getattr(found, "rows", ()):
        assert (row.pile == "refused") == any(one.level == "block" for one in row.findings)
