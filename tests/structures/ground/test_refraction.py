"""Depth of rock from first arrivals: noise-free lines, noise, what hides, what is refused."""

from __future__ import annotations

import numpy as np
import pytest

from structures.ground.refraction import interpret_refraction
from structures.ground.travel_times import first_arrivals_s
from structures.intake.pack import RefractionLine, RefractionPick

STATIONS = np.arange(2.5, 60.1, 2.5)  # handbook section 3, attainable: 24 geophones at 2.5 m


def line(velocities, thicknesses, *, shots=(0.0, 62.5), noise_ms=0.0, seed=1):
    rng = np.random.default_rng(seed)
    picks = []
    for shot in shots:
        x = np.abs(STATIONS - shot)
        times = 1e3 * first_arrivals_s(x, velocities, thicknesses)
        times += rng.normal(0.0, noise_ms, times.size) if noise_ms else 0.0
        picks += [
            RefractionPick(shot, float(station), float(time))
            for station, time in zip(STATIONS, times, strict=True)
        ]
    return RefractionLine(20.0, tuple(picks), "R1")


def test_three_layers_without_noise_come_back():
    """Oracle: the model itself; handbook section 3 asks for relative 1e-6 on noise-free data."""
    read = interpret_refraction(line((350.0, 1500.0, 3500.0), (4.0, 8.0)))
    assert read.velocities_m_per_s == pytest.approx((350.0, 1500.0, 3500.0), rel=1e-6)
    assert read.rock_depth_m == pytest.approx(12.0, rel=1e-6)


@pytest.mark.parametrize("wet_m", [0.0, 0.7, 1.3])
def test_the_range_holds_rock_under_sand_that_hides(wet_m):
    """Oracle: the model; 1.39 m of wet sand under 2 m of dry never comes first (handbook 3.6)."""
    read = interpret_refraction(line((350.0, 1500.0, 3500.0), (2.0, wet_m)))
    assert len(read.velocities_m_per_s) == 2
    assert read.rock_depth_low_m <= 2.0 + wet_m <= read.rock_depth_high_m


def test_noisy_depths_stay_within_two_sd_of_what_is_attainable():
    """Oracle: handbook section 3, attainable: sd 0.42 m at 8 m with picks of 0.5 ms."""
    read = [
        interpret_refraction(line((350.0, 1500.0, 3500.0), (2.0, 6.0), noise_ms=0.5, seed=seed))
        for seed in range(20)
    ]
    depths = np.array([one.rock_depth_m for one in read])
    assert abs(depths.mean() - 8.0) < 2 * 0.42
    # Never under a tenth of the depth, handbook 4.3.
    assert all(one.rock_depth_sd_m >= 0.1 * one.rock_depth_m for one in read)


def test_wet_sand_alone_is_not_taken_for_rock():
    read = interpret_refraction(line((350.0, 1500.0), (3.0,)))
    assert read.rock_depth_m is None
    assert read.refusal.code == "no-fast-layer"
    assert "water-filled sand" in read.refusal.sentence


def test_too_few_picks_are_refused():
    short = RefractionLine(20.0, line((350.0, 3500.0), (3.0,)).picks[:5], "R1")
    assert interpret_refraction(short).refusal.code == "no-branches"


def test_one_direction_and_a_late_trigger_are_told():
    one_way = interpret_refraction(line((350.0, 3500.0), (3.0,), shots=(0.0,)))
    assert "Only one direction shot" in one_way.notes[0]
    both = line((350.0, 3500.0), (3.0,))
    late = (RefractionPick(2.5, 60.0, 40.0), RefractionPick(60.0, 2.5, 43.0))
    read = interpret_refraction(RefractionLine(20.0, (*both.picks, *late), "R1"))
    assert "differ by 3.0 ms" in read.notes[-1]
