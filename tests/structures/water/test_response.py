"""How the water table answers in time."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from structures.water.response import (
    Aquifer,
    Well,
    drawdown_m,
    step_flow_m2_per_day,
    step_rise_m,
    stream_depletion_share,
    wall_rise_m,
    well_function,
)
from tests.structures.water.oracle import WATER, printed

STEP, WALL, WELL = WATER["9.j"], WATER["9.l"], WATER["9.i"]


def aquifer(case):
    return Aquifer(case["transmissivity_m2_per_day"], case["storage"])


@pytest.mark.parametrize(("distance", "days", "rise"), STEP["rise_m"])
def test_step_of_level(distance, days, rise):
    """Oracle: check value 9.j."""
    assert step_rise_m(aquifer(STEP), STEP["step_m"], distance, days) == printed(rise)


@pytest.mark.parametrize(("days", "flow"), WATER["9.k"])
def test_flow_after_a_step(days, flow):
    """Oracle: check value 9.k."""
    assert step_flow_m2_per_day(aquifer(STEP), STEP["step_m"], days) == printed(flow)


@pytest.mark.parametrize(("distance", "rise"), WALL["rise_m"])
def test_rise_behind_a_wall(distance, rise):
    """Oracle: check value 9.l."""
    found = wall_rise_m(aquifer(WALL), WALL["flow_m2_per_day"], distance, WALL["days"])
    assert found == printed(rise)


@settings(max_examples=25, deadline=None)
@given(st.floats(0.0, 300.0), st.floats(0.5, 400.0))
def test_rise_behind_a_wall_is_summed_from_sources(distance, days):
    """Oracle: numerical integral of the half-space source q/sqrt(pi T S s) exp(-x^2 S/(4 T s))."""
    ground = Aquifer(150.0, 0.12)
    product = np.pi * 150.0 * 0.12

    def source(root):  # s = root^2 takes the singular start away
        return 2.0 / np.sqrt(product) * np.exp(-(distance**2) * 0.12 / (600.0 * root**2))

    # Near the wall the source jumps up within a very short time: that piece apart.
    early = min(10.0 * distance * np.sqrt(0.12 / 600.0), np.sqrt(days))
    wanted = sum(
        quad(source, start, stop, epsabs=1e-12)[0]
        for start, stop in ((1e-12, early), (early, np.sqrt(days)))
        if stop > start
    )
    assert wall_rise_m(ground, 1.0, distance, days) == pytest.approx(wanted, abs=1e-9)


def test_rise_keeps_what_the_wall_stops():
    """Oracle: mass balance, S times the area under the rise is flow times time."""
    ground = aquifer(WALL)
    risen, _ = quad(lambda x: float(wall_rise_m(ground, 0.5, x, 30.0)), 0.0, 3000.0, limit=200)
    assert ground.storage * risen == pytest.approx(0.5 * 30.0, rel=1e-8)


def test_far_off_nothing_falls():
    """Oracle: a rise is not below zero, whatever the last bits."""
    assert (wall_rise_m(aquifer(WALL), 0.5, np.linspace(0.0, 1e5, 1000), 1.0) >= 0.0).all()


def test_responses_broadcast():
    """Oracle: numpy's broadcasting of distances and times."""
    shape = (4, 3)
    distance, days = np.full((4, 1), 10.0), np.array([1.0, 2.0, 3.0])
    assert step_rise_m(aquifer(STEP), 2.0, distance, days).shape == shape
    assert wall_rise_m(aquifer(STEP), 2.0, distance, days).shape == shape


@pytest.mark.parametrize(("u", "w"), WATER["9.h"])
def test_well_function(u, w):
    """Oracle: check value 9.h."""
    assert well_function(u) == printed(w)


@given(st.floats(1e-9, 50.0))
def test_well_function_in_many_digits(u):
    """Oracle: exponential integral of mpmath."""
    assert well_function(u) == pytest.approx(float(mpmath.e1(u)), rel=1e-10)


def test_drawdown_of_a_well():
    """Oracle: check value 9.i."""
    wells = [Well(WELL["flow_m3_per_day"], WELL["distance_m"])]
    assert drawdown_m(aquifer(WELL), wells, WELL["days"]) == printed(WELL["drawdown_m"])


def test_a_well_switched_off_recovers():
    """Oracle: superposition by hand from W of mpmath: on at day 0, off at day 3, read on day 5."""
    ground = Aquifer(250.0, 0.1)
    wells = [Well(500.0, 30.0), Well(-500.0, 30.0, since_day=3.0)]
    scale = 500.0 / (4.0 * np.pi * 250.0)
    wanted = scale * float(mpmath.e1(0.09 / 5.0) - mpmath.e1(0.09 / 2.0))
    assert drawdown_m(ground, wells, 5.0) == pytest.approx(wanted, rel=1e-10)
    assert drawdown_m(ground, wells, 3.0) == drawdown_m(ground, wells[:1], 3.0)
    assert drawdown_m(ground, wells, 0.0) == 0.0


def test_images_hold_their_edges():
    """Oracle: symmetry; on a stream nothing falls, at a wall twice as much does."""
    ground, well = Aquifer(250.0, 0.1), Well(500.0, 30.0)
    alone = drawdown_m(ground, [well], 2.0)
    stream = [well, well.image(30.0, "fixed level")]
    wall = [well, well.image(30.0, "closed")]
    assert drawdown_m(ground, stream, 2.0) == 0.0
    assert drawdown_m(ground, wall, 2.0) == pytest.approx(2.0 * alone)


@pytest.mark.parametrize(("argument", "share"), WATER["9.m"])
def test_depletion_of_a_stream(argument, share):
    """Oracle: check value 9.m; the argument is sqrt(a^2 S/(4 T t))."""
    distance = argument * float(aquifer(STEP).reach_m(10.0))
    assert stream_depletion_share(aquifer(STEP), distance, 10.0) == printed(share)


@pytest.mark.parametrize(
    "call",
    [
        lambda ground: ground.reach_m(0.0),
        lambda ground: wall_rise_m(ground, 1.0, -1.0, 1.0),
        lambda ground: step_flow_m2_per_day(ground, 1.0, [1.0, 0.0]),
        lambda _: Aquifer(0.0, 0.1),
        lambda _: Well(1.0, 0.0),
        lambda _: well_function(float("nan")),
    ],
)
def test_wrong_calls_fail_at_once(call):
    with pytest.raises(ValueError, match=r"not above zero|below zero"):
        call(Aquifer(100.0, 0.1))
