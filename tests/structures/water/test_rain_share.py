"""Rain beside the step. Oracles: handbook 10.j, rain put into invented programmes."""

from dataclasses import replace

import numpy as np
import pytest

from structures.intake.rain import Rain, months_to
from structures.water.effect import measure_effect
from structures.water.rain_share import RainYear, pair_years, rain_before_mm
from tests.structures.water import invented_wells as wells
from tests.structures.water.programmes import programme


def years(affected, control, rain):
    return [
        RainYear(place, *values)
        for place, values in enumerate(zip(affected, control, rain, strict=True), start=1)
    ]


def test_the_paired_years_of_the_invented_wells():
    """Oracle: handbook 10.j, after y1..y5 with before y1, y2, y3, y4, y5."""
    before = years(wells.BEFORE_AFFECTED, wells.BEFORE_CONTROL, wells.BEFORE_RAIN)
    after = years(wells.AFTER_AFFECTED, wells.AFTER_CONTROL, wells.AFTER_RAIN)
    found = pair_years(before, after)
    assert found.pairs == ((1, 1), (2, 2), (3, 3), (4, 4), (5, 5))
    assert found.affected_m == pytest.approx(0.75400, abs=5e-6)
    assert found.control_m == pytest.approx(0.05400, abs=5e-6)
    assert found.difference_m == pytest.approx(0.70000, abs=5e-6)
    assert found.twice == ()


def test_of_two_equally_near_years_the_drier_serves_and_may_serve_twice():
    """Oracle: handbook 10.7."""
    before = [RainYear(1, 1.0, 0.0, 900.0), RainYear(2, 2.0, 0.0, 700.0)]
    after = [RainYear(3, 3.0, 0.0, 800.0), RainYear(4, 5.0, 0.0, 600.0)]
    found = pair_years(before, after)
    assert found.pairs == ((3, 2), (4, 2))
    assert (found.twice, found.affected_m) == ((2,), 2.0)
    assert pair_years([], after) is None


M_PER_MM = 0.002


def rained(seed, *, in_controls):
    """A programme whose levels follow the rain of the twelve months before, and that rain."""
    readings, completed = programme(seed, coefficient=0.0, gaps=0.0, pumping=0.0)
    rng = np.random.default_rng(seed)
    first = readings[0].day.year
    months = [(year, month) for year in range(first - 1, first + 8) for month in range(1, 13)]
    wet = {year: rng.uniform(0.6, 1.4) for year in range(first - 1, first + 8)}
    rain = Rain({month: 60.0 * wet[month[0]] for month in months})
    moved = []
    for one in readings:
        fallen = rain.sum_mm(months_to((one.day.year, one.day.month)))
        felt = one.role == "affected" or in_controls
        moved.append(replace(one, depth_m=one.depth_m - (M_PER_MM * fallen if felt else 0.0)))
    return moved, completed, rain


def test_rain_that_all_wells_feel_has_a_share_in_the_change_and_none_in_the_effect():
    """Oracle: 2 mm of level a mm of rain put into every well."""
    for seed in (1, 2, 3):
        readings, completed, rain = rained(seed, in_controls=True)
        found = measure_effect(readings, completed, rain=rain)
        pairs = found.pairs
        fallen = rain_before_mm(pairs, rain)
        step_mm = fallen[pairs.after].mean() - fallen[~pairs.after].mean()
        at_affected, in_effect = found.rivals.rain_at_affected, found.rivals.rain_in_effect
        assert at_affected.rain_share_m == pytest.approx(at_affected.m_per_mm * step_mm)
        assert at_affected.m_per_mm == pytest.approx(M_PER_MM, abs=0.0012)
        assert in_effect.m_per_mm == pytest.approx(0.0, abs=0.0006)


def test_rain_that_only_affected_wells_feel_is_taken_from_the_step():
    """Oracle: the effect of 0.50 m and 2 mm of level a mm of rain put in."""
    for seed in (1, 2, 3):
        readings, completed, rain = rained(seed, in_controls=False)
        found = measure_effect(readings, completed, rain=rain).rivals.rain_in_effect
        assert found.m_per_mm == pytest.approx(M_PER_MM, abs=0.0006)
        assert found.step_m == pytest.approx(0.5, abs=3.0 * found.step_error_m)


def test_rain_of_unlike_years_is_said():
    readings, completed, rain = rained(4, in_controls=True)
    wetter = Rain(
        {month: mm * (2.0 if month >= (2018, 6) else 1.0) for month, mm in rain.months.items()}
    )
    codes = [one.code for one in measure_effect(readings, completed, rain=wetter).cautions]
    assert "effect-rain-unlike" in codes


def test_rain_that_begins_late_is_not_judged():
    readings, completed, rain = rained(5, in_controls=True)
    late = Rain({month: mm for month, mm in rain.months.items() if month >= (2017, 9)})
    found = measure_effect(readings, completed, rain=late)
    assert found.rivals.rain_in_effect is None
    assert "effect-rain-too-short" in [one.code for one in found.cautions]
