"""From a district's tables to a verdict on a wall, and to the answer to a complaint.

Oracle: the demo's own story: BI-01 was covered on 2024-05-20 and filled with that year's rains; its
pipes BI-W03 and BI-W04 stand on the two faces; a reading of BI-W02 lost its decimal point.
"""

from __future__ import annotations

import csv
import json
from datetime import date, timedelta, timezone
from pathlib import Path

import pytest
from django.core.management import call_command

from structures.intake.district_readings import site_readings_csv
from structures.intake.readings import read_readings
from structures.life.verdict import judge
from structures.water.effect import measure_effect
from structures.water.head import head_across

pytestmark = pytest.mark.journey

FIXTURES = Path(__file__).parents[2] / "fixtures"
ZONE = timezone(timedelta(hours=5, minutes=30))
COMPLETED = date(2024, 5, 20)


def rows(name):
    with (FIXTURES / "demo" / f"{name}.csv").open(newline="") as stream:
        return list(csv.DictReader(stream))


def answer(capsys, site, completed, *more):
    folder = FIXTURES / "readings"
    call_command(
        "assess_effect",
        str(folder / f"{site}.csv"),
        "--completed",
        completed,
        "--rain",
        str(folder / f"{site}-rain.csv"),
        "--json",
        *more,
    )
    return json.loads(capsys.readouterr().out)


def test_the_young_wall_holds_once_its_ground_is_filled(capsys):
    found = answer(capsys, "BI-01", "2024-05-20")
    assert found["wells"] == {"affected": 3, "control": 3}
    assert (found["suggested_verdict"], found["claim"]) == ("holds", "effect")
    assert "effect-first-filling" in {one["code"] for one in found["cautions"]}
    filling = found["first_rains"]
    assert filling["one_step_low_m"] < filling["one_step_m"] < found["effect_m"]
    held = [one for one in found["findings"] if one["rule"] == "LV-08"]
    assert ["7.40 m" in one["what"] for one in held] == [True]
    assert {"reason": "jump, waits for a decision", "count": 1} in found["readings"]["left_out"]


def test_head_and_wells_agree_on_the_young_wall():
    """Oracle: the pipes stood level before; since October 2024 the upper one is 1.1 to 2.1 m higher."""
    text = site_readings_csv(
        "BI-01",
        wells=rows("wells"),
        marks=rows("measuring_points"),
        levels=rows("levels"),
        also=["BI-W04"],
    )
    readings = read_readings("levels.csv", text.encode(), ZONE).readings
    wells = measure_effect([one for one in readings if one.well != "BI-W04"], COMPLETED)
    head = head_across(readings, "BI-W03", "BI-W04", COMPLETED, wells.rules)
    assert 1.1 < head.measured.low_m < head.measured.gain_m < 2.1
    found = judge(head.measured, wells.measured, wells.limits)
    assert found.verdict == "holds"
    assert found.reasons[0].startswith("The head across the wall grew by")


def test_the_older_wall_holds_where_the_office_asks_for_one_year(capsys):
    """Oracle: settings.json of the demo, one full year a side; OD-01 was covered on 2023-05-12."""
    asked = json.loads((FIXTURES / "demo" / "settings.json").read_text())
    least = asked["least_full_years_before"]
    assert least == asked["least_full_years_after"] == 1
    found = answer(capsys, "OD-01", "2023-05-12", "--least-years", str(least))
    assert found["effect_m"] > 0.3
    assert found["low_m"] > 0.0
    assert found["suggested_verdict"] in {"holds", "holds in part"}
    assert "effect-dry-fitted" in {one["code"] for one in found["cautions"]}
    assert answer(capsys, "OD-01", "2023-05-12")["suggested_verdict"] == "not known"


def test_the_command_of_the_readme_is_this_one(capsys):
    readme = " ".join(Path("README.md").read_text(encoding="utf-8").replace("\\", "").split())
    command = (
        "python3 manage.py assess_effect fixtures/readings/BI-01.csv --completed 2024-05-20 "
        "--rain fixtures/readings/BI-01-rain.csv"
    )
    assert command in readme
    call_command(*command.split()[2:])
    assert "suggested verdict: holds" in capsys.readouterr().out
