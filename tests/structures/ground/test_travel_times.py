"""Check values of handbook section 3."""

from __future__ import annotations

from math import cos, radians, sin, tan

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.ground.travel_times import (
    crossover_m,
    dipping_plane,
    first_arrivals_s,
    hidden_thickness_m,
    intercepts_s,
    plus_depth_m,
    plus_time_s,
    slowness,
    thicknesses_m,
)

MS = 1e3
TWO, THREE = (500.0, 2000.0), (350.0, 1500.0, 3500.0)


def test_two_layers():
    """Oracle: check values 3.a and 3.b."""
    (ti,) = intercepts_s(TWO, (6.0,))
    assert ti * MS == pytest.approx(23.237900, abs=5e-7)
    assert crossover_m(*TWO, 6.0) == pytest.approx(15.491933, abs=5e-7)
    times = first_arrivals_s([10.0, 40.0, 80.0], TWO, (6.0,)) * MS
    assert times == pytest.approx([20.0, 43.237900, 63.237900], abs=5e-7)


def test_three_layers():
    """Oracle: check values 3.c and 3.d."""
    second, third = intercepts_s(THREE, (2.0, 6.0))
    assert second * MS == pytest.approx(11.113106, abs=5e-7)
    assert third * MS == pytest.approx(18.599348, abs=5e-7)
    times = first_arrivals_s([40.0, 80.0], THREE, (2.0, 6.0)) * MS
    assert times == pytest.approx([30.027920, 41.456491], abs=5e-7)


V1, V2 = TWO
DIP = radians(6.0)
DEPTH_A, SPREAD = 5.0 * cos(DIP), 60.0  # 5 m vertical below shot A
DEPTH_B = DEPTH_A + SPREAD * sin(DIP)


def dipping_ms(depth_m: float, other_m: float, x_m: float) -> float:
    """Law of refraction along a plane: x cos(delta)/V2 + (sum of depths) cos(theta)/V1."""
    return MS * (x_m * cos(DIP) / V2 + (depth_m + other_m) * slowness(V1, V2))


def test_a_dipping_plane_gives_its_printed_times_velocities_and_depths():
    """Oracle: check values 3.e, 3.f, 3.g."""
    whole = dipping_ms(DEPTH_A, DEPTH_B, SPREAD)
    assert whole == pytest.approx(61.239600, abs=5e-7)
    down, up = 1429.2259, 3391.6419
    plane = dipping_plane(V1, down, up)
    assert plane.delta == pytest.approx(DIP, rel=1e-6)
    assert plane.velocity(V1) == pytest.approx(V2, rel=1e-6)
    for depth, printed, apparent in ((DEPTH_A, 4.972609, down), (DEPTH_B, 11.244317, up)):
        intercept_s = whole / MS - SPREAD / apparent
        assert depth == pytest.approx(printed, abs=5e-7)
        assert plane.perpendicular_m(V1, intercept_s) == pytest.approx(printed, rel=2e-6)
    assert plane.vertical_m(V1, whole / MS - SPREAD / down) == pytest.approx(5.0, rel=2e-6)


def test_plus_time_between_two_shots():
    """Oracle: check value 3.h."""
    middle = DEPTH_A + 30.0 * sin(DIP)
    to_a, to_b = dipping_ms(DEPTH_A, middle, 30.0), dipping_ms(DEPTH_B, middle, 30.0)
    plus = plus_time_s(to_a, to_b, dipping_ms(DEPTH_A, DEPTH_B, SPREAD))
    assert plus == pytest.approx(31.403944, abs=5e-7)
    theta = dipping_plane(V1, 1429.2259, 3391.6419).theta
    assert plus_depth_m(plus / MS, V1, theta) == pytest.approx(8.108463, rel=1e-6)


def test_what_hides_under_dry_sand():
    """Oracle: handbook 3.6, 1.39 m under 2 m and 2.78 m under 4 m."""
    assert hidden_thickness_m(*THREE, 2.0) == pytest.approx(1.39, abs=5e-3)
    assert hidden_thickness_m(*THREE, 4.0) == pytest.approx(2.78, abs=5e-3)


def test_a_slower_layer_below_is_named_blind():
    with pytest.raises(ValueError, match="blind layer"):
        slowness(1500.0, 700.0)


@given(st.floats(0.3, 8.0), st.floats(0.3, 12.0))
def test_intercepts_and_thicknesses_are_each_other_s_inverse(first_m, second_m):
    """Law: handbook 3.2 solved for the thicknesses, relative 1e-6 on noise-free times."""
    h = (first_m, second_m)
    assert thicknesses_m(THREE, intercepts_s(THREE, h)) == pytest.approx(h, rel=1e-6)


def test_a_level_plane_dips_nowhere():
    """Oracle: geometry; equal apparent velocities are the true one."""
    plane = dipping_plane(500.0, 2000.0, 2000.0)
    assert (plane.delta, plane.velocity(500.0)) == pytest.approx((0.0, 2000.0))
    assert tan(plane.delta) == 0.0


def test_a_plane_slower_than_its_cover_is_refused():
    with pytest.raises(ValueError, match="not above"):
        dipping_plane(500.0, 450.0, 2000.0)
