"""Two real wells, one lowered in 2012. Oracle: tests/oracles/wells/SOURCES.md."""

import csv
from datetime import UTC, date, datetime
from pathlib import Path

import pytest

from structures.intake.rain import read_rain
from structures.intake.readings import WellReading
from structures.water.effect import measure_effect
from structures.water.rules import EffectRules

WELLS = Path(__file__).parents[2] / "oracles" / "wells"
LOWERED = "B51G2150"
COMPLETED = date(2012, 7, 1)
ONE_YEAR = EffectRules(least_full_years=1)  # the control ends a year and a half after


@pytest.fixture(scope="module")
def readings():
    with (WELLS / "heads.csv").open(newline="") as stream:
        return [
            WellReading(
                row["well_id"],
                "affected" if row["well_id"] == LOWERED else "control",
                datetime.fromisoformat(row["date"]).replace(tzinfo=UTC),
                "static",
                dry=False,
                depth_m=50.0 - float(row["level_m"]),
                height_m=50.0,
            )
            for row in csv.DictReader(stream)
        ]


def test_the_known_lowering_is_found_against_the_control(readings):
    """Oracle: -0.19 m and +0.21 m on common months, together -0.40 m; the published interval of
    the step lies wholly below zero. Half months in place of months move the means by a centimetre.
    """
    found = measure_effect(readings, COMPLETED, rules=ONE_YEAR)
    assert found.rivals.change_affected_m == pytest.approx(-0.19, abs=0.015)
    assert found.rivals.change_control_m == pytest.approx(0.21, abs=0.015)
    assert found.estimate.pooled.change_m == pytest.approx(-0.40, abs=0.015)
    assert found.estimate.low_m < -0.40 < found.estimate.high_m < 0.0
    assert found.is_effect


def test_serial_correlation_widens_what_looks_sure(readings):
    """A law of daily nature: wells remember, so the pooled interval is too narrow."""
    found = measure_effect(readings, COMPLETED, rules=ONE_YEAR).estimate
    low, high = found.pooled.interval_m(0.90)
    assert found.high_m - found.low_m > 2.0 * (high - low)


def test_nothing_happened_at_a_day_when_nothing_happened(readings):
    """Oracle: the lowering of 2012; readings before it, parted at 2009-06-01, show no effect."""
    earlier = [one for one in readings if one.day < date(2011, 10, 1)]
    found = measure_effect(earlier, date(2009, 6, 1), rules=ONE_YEAR)
    assert found.estimate.low_m < 0.0 < found.estimate.high_m
    assert not found.is_effect


def test_the_rain_of_both_sides_is_shown_and_not_judged_on_one_year(readings):
    """Oracle: rain.csv added up by the csv module for the water year 2014."""
    rain = read_rain("rain.csv", (WELLS / "rain.csv").read_bytes())
    found = measure_effect(readings, COMPLETED, rain=rain, rules=ONE_YEAR)
    with (WELLS / "rain.csv").open(newline="") as stream:
        year = [
            float(row["rain_mm"])
            for row in csv.DictReader(stream)
            if "2014-06-01" <= row["date"] < "2015-06-01"
        ]
    assert found.rivals.rain_mm[1] == pytest.approx(sum(year))
    assert "effect-rain-too-short" in [one.code for one in found.cautions]
    assert found.rivals.rain_in_effect is None


def test_two_years_are_asked_for_by_default(readings):
    found = measure_effect(readings, COMPLETED)
    assert found.estimate is None
    assert [one.code for one in found.cautions] == ["effect-too-short"]
