"""Why one well stands lower. Oracles: the demo's complaint (parapet raised by 0.60 m on 2025-10-18,
a dry year), shares put into invented programmes.
"""

import csv
from dataclasses import replace
from datetime import date, timedelta, timezone
from pathlib import Path

import pytest

from structures.intake.district_readings import gauge_days_csv, site_readings_csv
from structures.intake.rain import read_rain
from structures.intake.readings import read_readings
from structures.water.one_well import explain_well
from structures.water.rules import EffectRules
from tests.structures.water.programmes import programme

DEMO = Path(__file__).parents[3] / "fixtures" / "demo"
ZONE = timezone(timedelta(hours=5, minutes=30))
COMPLETED = date(2024, 5, 20)
SINCE = date(2025, 6, 1)  # the water year in which the village complained


def rows(name):
    with (DEMO / f"{name}.csv").open(newline="") as stream:
        return list(csv.DictReader(stream))


def readings(*, new_mark):
    """Readings of BI-01 with the well complained of; without the new mark as they came in."""
    marks = rows("measuring_points")
    if not new_mark:
        marks = [{**one, "valid_to": ""} for one in marks if one["mark_id"] == "M1"]
    text = site_readings_csv(
        "BI-01", wells=rows("wells"), marks=marks, levels=rows("levels"), also=["BI-W05"]
    )
    return read_readings("levels.csv", text.encode(), ZONE).readings


def test_the_complaint_is_a_dry_year_and_a_raised_parapet():
    """Oracle: measuring_points.csv and the months of BI-W05 and the controls, counted by hand below."""
    found = explain_well(readings(new_mark=False), "BI-W05", COMPLETED, SINCE, EffectRules())
    assert found.change_m == pytest.approx(
        found.rain.change_m + found.mark_m + found.rest.change_m, abs=1e-9
    )
    assert found.mark.after_day <= date(2025, 10, 18) <= found.mark.by_day
    assert found.mark.size.low_m < -0.60 < found.mark.size.high_m < 0.0
    assert found.rain.high_m < -0.8  # every control well fell as well
    assert found.rest.low_m < 0.05
    assert abs(found.rest.change_m) < 0.10
    assert found.rest.low_m <= 0.0 <= found.rest.high_m
    text = " ".join(found.sentences())
    assert "BI-W05 reads 1.33 m lower" in text
    assert "a parapet raised or a tape cut?" in text
    assert "nothing that these readings can lay to the wall" in text


def test_the_dry_year_is_told_in_millimetres():
    """Oracle: rain.csv of the gauge BI-R1, added up over June to March by the csv module."""
    rain = read_rain("rain.csv", gauge_days_csv("BI-R1", rows("rain")).encode())
    found = explain_well(
        readings(new_mark=False), "BI-W05", COMPLETED, SINCE, EffectRules(), rain=rain
    )

    def fallen(first, last):
        return sum(
            float(row["rain_mm"])
            for row in rows("rain")
            if row["gauge_id"] == "BI-R1" and first <= row["day"] < last
        )

    before = (fallen("2022-06-01", "2023-04-01") + fallen("2023-06-01", "2024-04-01")) / 2
    since = fallen("2025-06-01", "2026-04-01")
    assert found.rain_mm == pytest.approx((before, since))
    assert since < 0.8 * before
    assert f"It rained {since:.0f} mm since" in found.sentences()[1]


def test_the_change_is_that_of_the_months_by_hand():
    """Oracle: means of monthly means of static readings of BI-W05, since against before."""
    levels = [
        row for row in rows("levels") if row["well_id"] == "BI-W05" and row["state"] == "static"
    ]

    def means(first, last):
        months = {}
        for row in levels:
            if first <= row["read_at"][:10] < last:
                months.setdefault(row["read_at"][5:7], []).append(-float(row["depth_below_mark_m"]))
        return {month: sum(values) / len(values) for month, values in months.items()}

    before, since = means("2022-06-01", "2024-05-20"), means("2025-06-01", "2026-06-01")
    common = sorted(before.keys() & since.keys())
    expected = sum(since[month] - before[month] for month in common) / len(common)
    found = explain_well(readings(new_mark=False), "BI-W05", COMPLETED, SINCE, EffectRules())
    assert found.change_m == pytest.approx(expected, abs=0.06)  # pairs want a control's reading


def test_with_the_new_mark_entered_only_the_dry_year_is_left():
    found = explain_well(readings(new_mark=True), "BI-W05", COMPLETED, SINCE, EffectRules())
    assert found.mark is None
    assert found.rest.low_m <= 0.0 <= found.rest.high_m
    (mark,) = found.marks
    assert mark.change_m == pytest.approx(0.60)
    assert found.change_m == pytest.approx(found.rain.change_m, abs=0.1)


def test_a_well_behind_the_wall_stands_higher_than_the_rain_explains():
    found = explain_well(readings(new_mark=True), "BI-W01", COMPLETED, SINCE, EffectRules())
    assert found.rest.low_m > 0.0
    assert "the wall is one cause" in found.sentences()[-1]


def test_of_a_well_that_ran_dry_the_rest_is_not_known():
    """Law: a dry well stands lower than its bottom, so no rest may clear the wall."""
    found = readings(new_mark=True)
    dry = [
        replace(one, dry=True) if one.well == "BI-W05" and one.day >= date(2026, 2, 1) else one
        for one in found
    ]
    told = explain_well(dry, "BI-W05", COMPLETED, SINCE, EffectRules())
    assert told.dry[0] == 0 < told.dry[1] < told.pairs[1]
    assert (told.rest.low_m, told.rest.high_m, told.rain.low_m) == (None, None, None)
    said = told.sentences()
    assert f"0 of the pairs before and {told.dry[1]} since were dry" in said[0]
    assert said[-1].endswith(
        "is left: whether the wall has part in it is not known, as wells were dry."
    )
    assert explain_well(found, "BI-W05", COMPLETED, SINCE, EffectRules()).dry == (0, 0)


def test_shares_that_were_put_in_come_back():
    """Oracle: all wells 0.7 m lower in the last year, this one 0.4 m lower since completion and
    read from 0.5 m higher for its last eighteen months.
    """
    plain, completed = programme(61, coefficient=0.0, effect_m=-0.4, gaps=0.0, pumping=0.0)
    since = date(2020, 6, 1)
    changed = []
    for one in plain:
        deeper_m = 0.7 * (one.day >= since)
        if one.well == "A0":
            deeper_m += 0.5 * (one.day >= date(2019, 12, 1))
        changed.append(replace(one, depth_m=one.depth_m + deeper_m))
    found = explain_well(changed, "A0", completed, since, EffectRules())
    assert found.mark.size.low_m < -0.5 < found.mark.size.high_m
    assert found.rest.low_m < -0.4 < found.rest.high_m
    assert found.change_m == pytest.approx(
        found.rain.change_m + found.mark_m + found.rest.change_m, abs=1e-9
    )


def test_without_controls_or_readings_nothing_is_said():
    found = readings(new_mark=True)
    own = [one for one in found if one.well == "BI-W05"]
    assert explain_well(own, "BI-W05", COMPLETED, SINCE, EffectRules()) is None
    assert explain_well(found, "BI-W05", COMPLETED, date(2026, 4, 1), EffectRules()) is None
    with pytest.raises(ValueError, match="before completion"):
        explain_well(found, "BI-W05", COMPLETED, date(2023, 1, 1), EffectRules())
