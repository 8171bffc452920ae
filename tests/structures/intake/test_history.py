"""Tables of what was kept before: read whole, or refused with file and line."""

from __future__ import annotations

import csv
from datetime import date, time
from decimal import Decimal
from pathlib import Path
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.history import read_history
from structures.intake.history_tables import (
    HOLD_POINTS,
    MEASUREMENTS,
    MOVES,
    STRIPS,
    TABLES,
    VERDICT_ROWS,
)
from structures.intake.tree import Ledger
from structures.life.stages import STAGES
from structures.life.verdict import VERDICTS

DEMO = Path(__file__).parents[3] / "fixtures" / "demo"
ZONE = ZoneInfo("Asia/Kolkata")
KNOWN = {
    "people": {"field-1", "engineer-1", "engineer-2", "engineer-3", "field-5"},
    "sites": {"TA-05", "OD-01"},
    "stages": STAGES,
    "verdicts": VERDICTS,
}
STRIP = b"structure_id,strip_no,from_m,to_m,lowest_drawn_rock_m,opened_on,covered_on\n"
HOLD = (
    b"structure_id,strip_no,hold,asked_at,asked_by,seen_at,seen_by,result,reading_m,photo\n"
    b"TA-05,1,H2,2026-02-10T09:32+05:30,field-5,,,,429.52;430.13;430.75,no\n"
)


def demo_rows(name):
    with (DEMO / f"{name}.csv").open(newline="", encoding="utf-8") as stream:
        return list(csv.DictReader(stream))


def read(files, tables):
    ledger = Ledger()
    history = read_history(files, tables, KNOWN, ZONE, ledger)
    return history, [f"{one.where}, {one.field}: {one.what}" for one in ledger.findings]


def test_the_demo_is_read_whole():
    """Oracle: the tables read by the csv module, row by row."""
    known = {
        **KNOWN,
        "people": {row["login"] for row in demo_rows("people")},
        "sites": {row["site_id"] for row in demo_rows("sites")},
        "streams": {row["stream"] for row in demo_rows("sites")},
        "watersheds": {row["watershed"] for row in demo_rows("sites")},
    }
    ledger = Ledger()
    files = {path.name: path.read_bytes() for path in DEMO.glob("*.csv")}
    history = read_history(files, TABLES, known, ZONE, ledger)
    assert ledger.findings == []
    for table in TABLES:
        assert [dict(row.told) for row in history[table.name]] == demo_rows(table.name)
    first = history["measurements"][0]
    assert first.where == "measurements.csv line 2"
    assert (first["quantity"], first["measured_on"]) == (Decimal("24.59"), date(2026, 1, 21))
    assert history["trench_looks"][0]["time_local"] == time(7, 40)
    assert history["hold_points"][1]["reading_m"] == (423.28, 422.75, 422.14)
    assert history["verdicts"][0]["water_year"] == 2023
    assert history["rain_monthly"][0]["month"] == date(2002, 6, 1)
    whole = [row for row in history["measurements"] if row["strip_no"] is None]
    assert [row["item"] for row in whole] == ["dewatering", "marker", "observation_pipe"]


@pytest.mark.parametrize(
    ("table", "heading", "row", "said"),
    [
        (
            STRIPS,
            STRIP,
            b"XX-01,1,0,6,,,\n",
            'strips.csv line 2, structure_id: "XX-01" is not among the sites known here.',
        ),
        (
            STRIPS,
            STRIP,
            b"TA-05,1,0,6,,2026-02-30,\n",
            'strips.csv line 2, opened_on: "2026-02-30" does not exist.',
        ),
        (
            STRIPS,
            STRIP,
            b"TA-05,1,0,,,,\n",
            "strips.csv line 2, to_m: This is blank.",
        ),
        (
            STRIPS,
            STRIP,
            b"TA-05,1,0,6,,,\nTA-05,1,6,12,,,\n",
            (
                "strips.csv line 3, strip_no: TA-05, 1 stands here twice; the first is at "
                "strips.csv line 2."
            ),
        ),
        (
            MOVES,
            b"structure_id,move_no,from_state,to_state,moved_on,moved_by\n",
            b"TA-05,1,,dug,2026-01-01,field-5\n",
            'moves.csv line 2, to_state: "dug" is not among the stages known here.',
        ),
        (
            VERDICT_ROWS,
            b"structure_id,water_year,verdict,proposed_by,reviewed_by,given_on\n",
            b"TA-05,2024-26,holds,engineer-1,,2025-07-01\n",
            'verdicts.csv line 2, water_year: "2024-26" is no water year.',
        ),
    ],
)
def test_what_cannot_be_read_is_told_with_file_and_line(table, heading, row, said):
    _, told = read({table.file: heading + row}, (table,))
    assert told == [said]


def test_a_row_that_names_what_is_nowhere_is_told():
    files = {"strips.csv": STRIP + b"TA-05,2,0,6,,,\n", "hold_points.csv": HOLD}
    _, told = read(files, (STRIPS, HOLD_POINTS))
    assert told == ["hold_points.csv line 2, strip_no: TA-05, 1 is in no row of strips.csv."]


def test_a_missing_table_and_a_missing_column_are_told():
    _, told = read({"strips.csv": b"structure_id,strip_no\nTA-05,1\n"}, (STRIPS, MOVES))
    assert told == [
        *(
            f"strips.csv, {key}: This column is missing."
            for key in ("from_m", "to_m", "lowest_drawn_rock_m", "opened_on", "covered_on")
        ),
        "moves.csv, : The table is missing.",
    ]


@given(st.decimals(min_value="0.01", max_value="99999999.99", places=2))
def test_a_quantity_is_read_digit_by_digit(quantity):
    """Law: what is written with two decimals is that number, never a float near it."""
    row = (
        "entry_id,structure_id,strip_no,item,from_m,to_m,quantity,unit,measured_on,covered_on,"
        "measured_by,checked_by,relies_on\n"
        f"E1,TA-05,0,marker,,,{quantity},each,2026-02-01,,engineer-2,engineer-3,\n"
    )
    history, told = read({"measurements.csv": row.encode()}, (MEASUREMENTS,))
    assert told == []
    assert history["measurements"][0]["quantity"] == quantity


def test_a_third_decimal_is_no_hundredth():
    row = (
        b"entry_id,structure_id,strip_no,item,from_m,to_m,quantity,unit,measured_on,covered_on,"
        b"measured_by,checked_by,relies_on\n"
        b"E1,TA-05,0,marker,,,1.005,each,2026-02-01,,engineer-2,engineer-3,\n"
    )
    _, told = read({"measurements.csv": row}, (MEASUREMENTS,))
    assert told == ['measurements.csv line 2, quantity: "1.005" has more than two decimals.']
