"""Readings of wells for `assess_effect`. Oracle: the interface of readings, field practice LV."""

import io
from datetime import UTC, date, datetime, timedelta, timezone

import openpyxl
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.readings import ReadingsFile, WellReading, read_readings

ZONE = timezone(timedelta(hours=5, minutes=30))
HEAD = "well,role,read_at,state,dry,depth_m,height_m\n"
ROW = "W1,affected,2027-06-03T06:40+05:30,static,no,8.30,431.25\n"


def read(rows, head=HEAD, name="r.csv"):
    return read_readings(name, (head + rows).encode(), ZONE)


def refusal(rows, head=HEAD):
    with pytest.raises(Refused) as refused:
        read(rows, head)
    found = refused.value.findings
    return [(one.where, one.field, one.rule) for one in found if one.level == "block"]


def left_out(rows):
    return [one.left_out for one in read(rows).readings]


def test_a_reading_gives_its_level():
    """Oracle: level = height - depth, 431.25 - 8.30."""
    (found,) = read(ROW).readings
    assert found == WellReading(
        "W1",
        "affected",
        datetime(2027, 6, 3, 6, 40, tzinfo=ZONE),
        "static",
        False,
        8.30,
        431.25,
        "r.csv line 2",
    )
    assert found.level_m == pytest.approx(422.95)
    assert found.day == date(2027, 6, 3)


@pytest.mark.parametrize(
    ("row", "reason"),
    [
        ("W1,control,2027-06-03T06:40Z,pumping,no,8.3,431", "pumping"),
        ("W1,control,2027-06-03T06:40Z,recovering,no,8.3,431", "recovering"),
        ("W1,control,2027-06-03T06:40Z,not known,no,8.3,431", "state not known"),
        ("W1,control,2027-06-03T06:40Z,,no,8.3,431", "state not known"),
        ("W1,control,2027-06-03T06:40Z,flooded,no,,431", "flooded"),
        ("W1,control,2027-06-03T06:40Z,static,no,,431", "not read (no depth)"),
        ("W1,control,2027-06-03T06:40Z,static,no,-,431", "not read (no depth)"),
        ("W1,control,2027-06-03T06:40Z,static,yes,,431", "dry, depth of the bottom not given"),
        ("W1,control,2027-06-03T06:40Z,static,,dry,431", "dry, depth of the bottom not given"),
        ("W1,control,2027-06-03T06:40Z,static,,सूखा,431", "dry, depth of the bottom not given"),
        ("W1,control,2027-06-03T06:40Z,static,no,8.3,", "height of the measuring point not given"),
        ("W1,control,2027-06-03T06:40Z,static,yes,11.4,431", ""),
    ],
)
def test_what_takes_no_part_keeps_its_place_with_a_reason(row, reason):
    assert left_out(row + "\n") == [reason]


def test_a_blank_is_never_zero():
    (found,) = read("W1,control,2027-06-03,static,no,,431\n").readings
    assert found.depth_m is None
    with pytest.raises(ValueError, match="no level"):
        _ = found.level_m


@pytest.mark.parametrize(
    ("row", "expected"),
    [
        ("W1,affected,2027-06-03,static,no,-0.4,431", [("r.csv line 2", "depth_m", "")]),
        ("W1,affected,2027-06-03,static,no,422.9,431", [("r.csv line 2", "depth_m", "")]),
        ("W1,affected,2027-06-03,static,no,8.3O,431", [("r.csv line 2", "depth_m", "")]),
        ("W1,affected,2027-06-03,static,maybe,8.3,431", [("r.csv line 2", "dry", "")]),
        ("W1,affected,2027-06-03,quiet,no,8.3,431", [("r.csv line 2", "state", "")]),
        ("W1,upstream,2027-06-03,static,no,8.3,431", [("r.csv line 2", "role", "")]),
        (",affected,2027-06-03,static,no,8.3,431", [("r.csv line 2", "well", "")]),
        ("W1,affected,,static,no,8.3,431", [("r.csv line 2", "read_at", "")]),
        ("W1,affected,03/04/27,static,no,8.3,431", [("r.csv line 2", "read_at", "FI-04")]),
        (
            "W1,affected,soon,static,no,x,y",
            [
                ("r.csv line 2", "read_at", ""),
                ("r.csv line 2", "height_m", ""),
                ("r.csv line 2", "depth_m", ""),
            ],
        ),
    ],
)
def test_wrong_cells_are_all_named(row, expected):
    assert refusal(row + "\n") == expected


def test_missing_columns_are_named_once():
    head = "well,role,read_at,dry,depth_m\n"
    assert refusal("W1,affected,2027-06-03,no,8.3\n" * 3, head) == [
        ("r.csv", "state", "FI-03"),
        ("r.csv", "height_m", "FI-03"),
    ]


def test_a_well_has_one_role():
    rows = ROW + ROW.replace("affected", "control").replace("06-03", "07-03")
    assert refusal(rows) == [("r.csv line 3", "role", "WL-01")]


def test_the_same_row_twice_counts_once():
    assert left_out(ROW + ROW) == ["", "the same row twice"]


def test_two_values_at_one_time_are_both_held():
    found = read(ROW + ROW.replace("8.30", "7.30"))
    assert [one.left_out for one in found.readings] == ["two values at one time"] * 2
    (told,) = found.findings
    assert (told.level, told.rule, told.where) == ("hold", "LV-13", "r.csv line 3")
    assert "8.3 m, 7.3 m" in told.what


def test_one_time_in_two_zones_is_one_time():
    """Oracle: 06:40 at +05:30 is 01:10 in Z."""
    assert left_out(ROW + ROW.replace("06:40+05:30", "01:10Z")) == ["", "the same row twice"]


def test_a_zero_in_a_deep_well_waits():
    rows = ROW + ROW.replace("06-03", "07-03").replace("8.30", "0")
    found = read(rows)
    assert [one.left_out for one in found.readings] == ["", "zero depth, waits for a decision"]
    assert [(one.level, one.rule) for one in found.findings] == [("hold", "LV-07")]


def test_a_zero_in_a_shallow_well_is_water_at_the_mark():
    rows = ROW.replace("8.30", "0.4") + ROW.replace("06-03", "07-03").replace("8.30", "0")
    assert left_out(rows) == ["", ""]


def months(depths, well="W1"):
    return "".join(
        f"{well},affected,{2020 + place // 12}-{place % 12 + 1:02d}-05,static,no,{depth},431\n"
        for place, depth in enumerate(depths)
    )


COURSE = [8.0, 8.3, 8.6, 8.9, 9.1, 8.7, 8.1, 7.5, 7.1, 7.2, 7.4, 7.7] * 2


def test_a_decimal_slip_waits_and_is_told_with_what_fits():
    """Oracle: 7.4 typed as 0.74 among moves of 0.6 m at most (the demo's BI-W02)."""
    slipped = [*COURSE]
    slipped[10] = 0.74
    found = read(months(slipped))
    assert [one.left_out for one in found.readings].index("jump, waits for a decision") == 10
    (told,) = found.findings
    assert (told.level, told.rule, told.where) == ("hold", "LV-08", "r.csv line 12")
    assert "a decimal slip (7.40 m)" in told.what


def test_feet_in_one_row_are_told():
    """Oracle: 24.28 ft are 7.40 m, the foot of 0.3048 m."""
    feet = [*COURSE]
    feet[10] = 24.28
    (told,) = read(months(feet)).findings
    assert "feet (7.40 m)" in told.what


def test_a_rise_that_stays_is_no_slip():
    """Oracle: rains that bring 4 m in a month, and a level that stays there."""
    risen = [*COURSE[:12], *(depth - 4.0 for depth in COURSE[12:])]
    assert read(months(risen)).findings == ()
    assert read(months(COURSE)).findings == ()


def test_decimal_commas_semicolons_and_other_digits():
    rows = "W1;affected;२०२७-०६-०३;static;no;८,३०;431,25\n"
    (found,) = read(rows, HEAD.replace(",", ";")).readings
    assert (found.depth_m, found.height_m, found.day) == (8.30, 431.25, date(2027, 6, 3))


def test_a_workbook_reads_as_its_csv():
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.append(HEAD.strip().split(","))
    sheet.append(["W1", "affected", datetime(2027, 6, 3, 6, 40), "static", "no", 8.3, 431.25])  # noqa: DTZ001 -- a workbook holds no zone
    sheet.append(["W1", "affected", "2027-07-03T06:40+05:30", "static", "no", None, 431.25])
    data = io.BytesIO()
    book.save(data)
    found = read_readings("r.xlsx", data.getvalue(), ZONE).readings
    assert found[0].read_at == datetime(2027, 6, 3, 1, 10, tzinfo=UTC)
    assert [one.left_out for one in found] == ["", "not read (no depth)"]
    book.active["F2"] = "8.3O"
    data = io.BytesIO()
    book.save(data)
    with pytest.raises(Refused, match=r"r\.xlsx Sheet!F2"):
        read_readings("r.xlsx", data.getvalue(), ZONE)


WELLS = st.sampled_from(["W1", "W2", "C1"])
CELLS = st.one_of(
    st.none(),
    st.floats(0, 60).map(lambda value: round(value, 2)),
    st.sampled_from(["dry", "-", ""]),
)


@given(
    st.lists(
        st.tuples(
            WELLS,
            st.datetimes(datetime(2020, 1, 1), datetime(2030, 1, 1)),  # noqa: DTZ001 -- naive bounds are asked for
            st.sampled_from(["static", "pumping", "not known", "flooded", ""]),
            st.sampled_from(["yes", "no", ""]),
            CELLS,
        ),
        min_size=1,
        max_size=30,
    )
)
def test_every_row_is_taken_or_has_a_reason(rows):
    """A law: what is read is as many as what was sent, and none is changed on the way."""
    lines = [
        f"{well},{'control' if well == 'C1' else 'affected'},{at.isoformat()}+05:30,{state},{dry},"
        f"{'' if depth is None else depth},431\n"
        for well, at, state, dry, depth in rows
    ]
    found = read("".join(lines)).readings
    assert len(found) == len(rows)
    for one, (well, at, _state, _dry, depth) in zip(found, rows, strict=True):
        assert (one.well, one.read_at) == (well, at.replace(tzinfo=ZONE))
        assert one.depth_m == (depth if isinstance(depth, float) else None)
        if not one.left_out:
            assert one.state == "static"
            assert one.level_m == pytest.approx(431 - depth)


@given(st.binary(max_size=400))
def test_any_bytes_are_read_or_refused(data):
    try:
        found = read_readings("r.csv", HEAD.encode() + data, ZONE)
    except Refused as refused:
        found = refused
    assert isinstance(found, ReadingsFile) or found.findings
