"""Times, days and months of cells. Oracle: ISO 8601 as the interface of readings shows it."""

from datetime import UTC, date, datetime, timedelta, timezone

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.moments import read_day, read_moment, read_month
from structures.intake.tree import Ledger, Node

ZONE = timezone(timedelta(hours=5, minutes=30))
DEVANAGARI = "२०२७-०६-०३T०६:४०+०५:३०"  # noqa: RUF001 -- digits of another script are the case
AS_IN_A_WORKBOOK = datetime.fromisoformat("2027-06-03T06:40")


def read(value, reader=read_moment):
    ledger = Ledger()
    node = Node(value, "r.csv line 2", "read_at", tabular=True)
    found = reader(node, ZONE, ledger) if reader is read_moment else reader(node, ledger)
    return found, [(one.level, one.rule) for one in ledger.findings]


@pytest.mark.parametrize(
    ("text", "expected", "told"),
    [
        ("2027-06-03T06:40+05:30", datetime(2027, 6, 3, 6, 40, tzinfo=ZONE), []),
        ("2027-06-03 06:40:10 +0530", datetime(2027, 6, 3, 6, 40, 10, tzinfo=ZONE), []),
        ("2027-06-03T06:40", datetime(2027, 6, 3, 6, 40, tzinfo=ZONE), [("warn", "LV-12")]),
        ("2027-06-03", datetime(2027, 6, 3, tzinfo=ZONE), []),
        (DEVANAGARI, datetime(2027, 6, 3, 6, 40, tzinfo=ZONE), []),
        (
            AS_IN_A_WORKBOOK,
            datetime(2027, 6, 3, 6, 40, tzinfo=ZONE),
            [("warn", "LV-12")],
        ),
        (date(2027, 6, 3), datetime(2027, 6, 3, tzinfo=ZONE), []),
    ],
)
def test_times_that_can_be_read(text, expected, told):
    found, findings = read(text)
    assert (found, found.utcoffset(), findings) == (expected, expected.utcoffset(), told)


def test_a_time_in_z_falls_on_the_day_of_the_place():
    """Oracle: 20:10 in Z is 01:40 of the next day at +05:30; the shift is told."""
    found, findings = read("2027-06-03T20:10Z")
    assert found == datetime(2027, 6, 3, 20, 10, tzinfo=UTC)
    assert found.date() == date(2027, 6, 4)
    assert findings == [("note", "LV-12")]


@pytest.mark.parametrize(
    ("text", "rule"),
    [
        ("03/04/24", "FI-04"),
        ("3.4.2024", "FI-04"),
        ("45321", "FI-04"),
        (45321.25, "FI-04"),
        ("2027-02-30", "RN-04"),
        ("2027-06-03T25:00", "RN-04"),
        ("yesterday", ""),
        ("2027-06", ""),
        ("9" * 5000, ""),
    ],
)
def test_times_that_cannot_be_read_say_so(text, rule):
    assert read(text) == (None, [("block", rule)])


@pytest.mark.parametrize(
    ("reader", "value", "expected"),
    [
        (read_day, "2027-06-03", date(2027, 6, 3)),
        (read_day, date(2027, 6, 3), date(2027, 6, 3)),
        (read_day, datetime(2027, 6, 3, 4), date(2027, 6, 3)),  # noqa: DTZ001 -- as a workbook gives it
        (read_day, "2027-02-30", None),
        (read_day, "3 June", None),
        (read_month, "2027-06", (2027, 6)),
        (read_month, date(2027, 6, 1), (2027, 6)),
        (read_month, "2027-13", None),
        (read_month, "June 2027", None),
    ],
)
def test_days_and_months(reader, value, expected):
    found, findings = read(value, reader)
    assert found == expected
    assert bool(findings) == (expected is None)


@given(st.datetimes(min_value=datetime(1970, 1, 1), max_value=datetime(2100, 1, 1)))  # noqa: DTZ001 -- naive bounds are asked for
def test_what_is_written_is_read_back(moment):
    aware = moment.replace(tzinfo=ZONE)
    assert read(aware.isoformat()) == (aware, [])


@given(st.text(max_size=60))
def test_any_text_gives_a_time_or_one_finding(text):
    found, findings = read(text)
    assert (found is None) == any(level == "block" for level, _ in findings)
