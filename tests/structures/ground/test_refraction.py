"""Depth of rock from first arrivals: noise-free lines, noise, what hides, what is refused."""

from __future__ import annotations

from math import cos, radians, sin

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.ground.refraction import interpret_refraction
from structures.ground.travel_times import first_arrivals_s, slowness
from structures.intake.pack import RefractionLine, RefractionPick
from structures.intake.practice import Practice

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


def dipping_line(velocities, *, dip_degrees, depth_m, ends=(0.0, 62.5)):
    """Arrivals along a plane that dips from the first shot on; law as in check values 3.e to 3.h."""
    dip = radians(dip_degrees)
    perpendicular = {
        at: depth_m * cos(dip) + at * sin(dip) for at in (*ends, *(float(x) for x in STATIONS))
    }
    picks = []
    for shot in ends:
        for station in map(float, STATIONS):
            x = abs(station - shot)
            through = (perpendicular[shot] + perpendicular[station]) * slowness(*velocities)
            time_s = min(x / velocities[0], x * cos(dip) / velocities[1] + through)
            picks.append(RefractionPick(shot, station, 1e3 * time_s))
    return RefractionLine(20.0, tuple(picks), "R1"), perpendicular


@pytest.mark.parametrize("dip_degrees", [2.0, 4.0, 6.0])
def test_a_dipping_plane_shot_both_ways_keeps_its_velocity_and_depth(dip_degrees):
    """Oracle: the plane itself, its depth halfway between the shots; handbook 3.3."""
    made, perpendicular = dipping_line((500.0, 2500.0), dip_degrees=dip_degrees, depth_m=6.0)
    read = interpret_refraction(made)
    assert read.velocities_m_per_s == pytest.approx((500.0, 2500.0), rel=1e-6)
    halfway = (perpendicular[0.0] + perpendicular[62.5]) / 2 / cos(radians(dip_degrees))
    assert read.rock_depth_low_m <= halfway * (1 + 1e-9)
    assert halfway <= read.rock_depth_high_m
    # Half of what the two ends differ is doubt: where along the spread the wall crosses is not told.
    ends = (perpendicular[62.5] - perpendicular[0.0]) / 2 / cos(radians(dip_degrees))
    assert read.rock_depth_sd_m >= ends * (1 - 1e-9)


def test_up_a_steep_dip_rock_comes_out_too_fast():
    """Oracle: handbook 3.3; up the dip Vu = 350/sin(5.739 - 4 degrees) = 11 500 m/s."""
    made, _ = dipping_line((350.0, 3500.0), dip_degrees=4.0, depth_m=4.0)
    up_dip = tuple(pick for pick in made.picks if pick.shot_m == 62.5)
    read = interpret_refraction(RefractionLine(20.0, up_dip, "R1"))
    assert (read.refusal.code, read.rock_depth_m) == ("too-fast", None)


def test_shots_that_contradict_each_other_are_refused():
    """Rock of one shot (500 m/s) is slower than the mean first layer of both (521 m/s)."""
    slow = line((300.0, 500.0), (1.0,), shots=(0.0,)).picks
    fast = line((2000.0, 2500.0), (1.0,), shots=(62.5,)).picks
    read = interpret_refraction(RefractionLine(20.0, (*slow, *fast), "R1"))
    assert (read.refusal.code, read.rock_depth_m) == ("picks-differ", None)


def test_arrivals_that_ask_for_a_layer_under_nothing_are_refused():
    """Oracle: handbook 3.2; with 30 ms for the second branch h2 is 0 where the third has 30.7 ms."""
    branches = ((350.0, 0.0), (1500.0, 0.030), (3500.0, 0.0302))
    made = [
        RefractionPick(0.0, float(x), 1e3 * (x / v + ti))
        for (v, ti), stations in zip(branches, np.split(STATIONS, [6, 14]), strict=True)
        for x in stations
    ]
    read = interpret_refraction(RefractionLine(20.0, tuple(made), "R1"))
    assert read.velocities_m_per_s == pytest.approx((350.0, 1500.0, 3500.0))
    assert (read.refusal.code, read.rock_depth_m) == ("picks-differ", None)


def test_a_pick_booked_twice_changes_nothing():
    once = line((350.0, 3500.0), (3.0,))
    twice = RefractionLine(20.0, (*once.picks, *once.picks[4:9]), "R1")
    assert interpret_refraction(twice) == interpret_refraction(once)


picks = st.builds(
    RefractionPick,
    st.sampled_from([0.0, 30.0]),
    st.integers(0, 24).map(lambda number: 2.5 * number),
    st.floats(0.0, 80.0),
)


@settings(max_examples=60)
@given(st.lists(picks, min_size=1, max_size=24))
def test_any_picks_give_a_range_that_holds_the_depth_or_a_reason(some):
    """Law: a depth lies in its own range, and where there is none a sentence says why."""
    read = interpret_refraction(RefractionLine(20.0, tuple(some), "R1"))
    if read.rock_depth_m is None:
        assert read.refusal.sentence.endswith((".", "too."))
    else:
        assert 0.0 <= read.rock_depth_low_m <= read.rock_depth_m <= read.rock_depth_high_m


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
    assert "one direction only" in one_way.notes[0]
    both = line((350.0, 3500.0), (3.0,))
    late = (RefractionPick(2.5, 60.0, 40.0), RefractionPick(60.0, 2.5, 43.0))
    read = interpret_refraction(RefractionLine(20.0, (*both.picks, *late), "R1"))
    assert "differ by 3.0 ms" in read.notes[-1]
    patient = interpret_refraction(
        RefractionLine(20.0, (*both.picks, *late), "R1"), practice=Practice(reciprocity_ms=3.5)
    )
    assert not any("differ by" in note for note in patient.notes)


def test_a_set_error_is_the_least_that_is_stated():
    """Oracle: handbook 4.3, max(least, share of depth)."""
    both = line((350.0, 3500.0), (3.0,))
    least = interpret_refraction(both, practice=Practice(se_refraction_m=4.0))
    assert least.rock_depth_sd_m == 4.0
    share = interpret_refraction(
        both, practice=Practice(se_refraction_m=0.5, se_refraction_share=0.5)
    )
    assert share.rock_depth_sd_m >= 0.5 * share.rock_depth_m
