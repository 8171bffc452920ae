"""Rain files. Oracle: hand sums; field practice RN-01 to RN-06."""

import calendar
import io
from datetime import date

import openpyxl
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.rain import Rain, months_to, read_rain


def read(text, name="rain.csv"):
    return read_rain(name, text.encode())


def refusal(text):
    with pytest.raises(Refused) as refused:
        read(text)
    return [
        (one.where, one.field, one.rule) for one in refused.value.findings if one.level == "block"
    ]


def test_months_are_read_and_a_blank_is_not_zero():
    found = read("month,rain_mm\n2027-06,120.5\n2027-07,\n2027-08,0\n")
    assert found.months == {(2027, 6): 120.5, (2027, 7): None, (2027, 8): 0.0}
    assert [(one.level, one.rule) for one in found.findings] == [("hold", "RN-01")]
    assert found.sum_mm([(2027, 6), (2027, 8)]) == 120.5
    assert found.sum_mm([(2027, 6), (2027, 7)]) is None
    assert found.sum_mm([(2027, 6), (2027, 9)]) is None


def test_days_add_up_to_whole_months_only():
    """Oracle: 30 days of 2 mm; a month with a blank day or a missing day has no sum."""
    rows = [f"2027-06-{day:02d},2" for day in range(1, 31)]
    rows += [f"2027-07-{day:02d},{'' if day == 9 else 1}" for day in range(1, 32)]
    rows += [f"2027-08-{day:02d},1" for day in range(1, 31)]
    found = read("day,rain_mm\n" + "\n".join(rows) + "\n")
    assert found.months == {(2027, 6): 60.0, (2027, 7): None, (2027, 8): None}


def test_a_trace_is_rain_below_a_tenth():
    found = read("month,rain_mm\n2027-06,trace\n2027-07,-\n")
    assert found.months == {(2027, 6): 0.05, (2027, 7): None}


def test_a_great_rain_is_looked_at_again():
    found = read("day,rain_mm\n2027-06-01,260\n")
    assert [(one.level, one.rule) for one in found.findings] == [("warn", "RN-02")]


def test_decimal_commas_and_a_gauge_column():
    found = read("gauge_id;month;rain_mm\nQ1;2027-06;12,5\nQ1;2027-07;3,5\n")
    assert found.months == {(2027, 6): 12.5, (2027, 7): 3.5}


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("month,rain_mm\n2027-06,-3\n", [("rain.csv line 2", "rain_mm", "")]),
        ("month,rain_mm\n2027-13,3\n", [("rain.csv line 2", "month", "RN-04")]),
        ("day,rain_mm\n2027-02-30,3\n", [("rain.csv line 2", "day", "RN-04")]),
        ("month,mm\n2027-06,3\n", [("rain.csv", "rain_mm", "FI-03")]),
        ("month,rain_mm\n2027-06,3\n2027-06,4\n", [("rain.csv line 3", "rain_mm", "")]),
        ("gauge,month,rain_mm\nA,2027-06,3\nB,2027-07,4\n", [("rain.csv line 2", "gauge", "")]),
        ("month,rain_mm\n2027-06,2-day total\n", [("rain.csv line 2", "rain_mm", "")]),
        ("", [("rain.csv", "", "")]),
    ],
)
def test_wrong_files_are_refused_at_their_cell(text, expected):
    assert refusal(text) == expected


def test_a_workbook_reads_as_its_csv():
    book = openpyxl.Workbook()
    book.active.append(["month", "rain_mm"])
    book.active.append([date(2027, 6, 1), 12.5])
    book.active.append(["2027-07", 3])
    data = io.BytesIO()
    book.save(data)
    assert read_rain("rain.xlsx", data.getvalue()).months == {(2027, 6): 12.5, (2027, 7): 3.0}


def test_months_run_over_the_turn_of_the_year():
    assert months_to((2027, 2), 4) == [(2026, 11), (2026, 12), (2027, 1), (2027, 2)]
    assert len(set(months_to((2027, 5)))) == 12


@given(
    st.integers(1990, 2080),
    st.integers(1, 12),
    st.lists(st.integers(0, 900), min_size=31, max_size=31),
)
def test_days_and_their_month_agree(year, month, tenths):
    """A law: the sum of the days is the month, as RN-05 asks."""
    count = calendar.monthrange(year, month)[1]
    rows = [f"{year}-{month:02d}-{day:02d},{tenths[day - 1] / 10}" for day in range(1, count + 1)]
    found = read("day,rain_mm\n" + "\n".join(rows) + "\n")
    assert found.months[year, month] == pytest.approx(sum(tenths[:count]) / 10)


@given(st.binary(max_size=300))
def test_any_bytes_are_read_or_refused(data):
    try:
        found = read_rain("rain.csv", data)
    except Refused as refused:
        found = refused
    assert isinstance(found, Rain) or found.findings
