"""Steady strips: recharge, a divide, a wall across."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.water.steady import SteadyStrip, WalledStrip
from tests.structures.water.oracle import WATER, printed

CASE, WALLED = WATER["9.r"], WATER["9.t"]
KEYS = ("conductivity_m_per_day", "length_m", "start_depth_m", "end_depth_m", "recharge_m_per_day")


def strip(**changed):
    return SteadyStrip(**({key: CASE[key] for key in KEYS} | changed))


def walled():
    return WalledStrip(
        WALLED["sand_k_m_per_day"],
        WALLED["clay_k_m_per_day"],
        WALLED["side_m"],
        WALLED["thickness_m"],
        WALLED["side_m"],
    )


def test_divide_of_a_strip():
    """Oracle: check value 9.r."""
    found = strip()
    assert found.divide_m == printed(CASE["divide_m"])
    assert found.depth_m(found.divide_m) == printed(CASE["crest_m"])
    assert found.flow_m2_per_day(0.0) == printed(CASE["flow_at_start"])
    assert found.flow_m2_per_day(400.0) == printed(CASE["flow_at_end"])
    assert found.flow_m2_per_day(found.divide_m) == pytest.approx(0.0, abs=1e-12)


def test_a_divide_outside_is_none():
    """Oracle: check value 9.s; without recharge there is none."""
    found = strip(recharge_m_per_day=WATER["9.s"]["recharge_m_per_day"])
    assert found.divide_m is None
    assert found.flow_m2_per_day(0.0) == printed(WATER["9.s"]["flow_at_start"])
    assert found.flow_m2_per_day(400.0) == printed(WATER["9.s"]["flow_at_end"])
    assert strip(recharge_m_per_day=0.0).divide_m is None


@given(st.floats(1.0, 399.0), st.floats(0.0, 0.01))
def test_flow_is_that_of_the_slope(distance, recharge):
    """Oracle: Dupuit's flow -K h dh/dx, half the difference of squared depths."""
    found = strip(recharge_m_per_day=recharge)
    before, after = found.depth_m([distance - 0.5, distance + 0.5])
    slope = -15.0 * (after**2 - before**2) / 2.0
    assert found.flow_m2_per_day(distance) == pytest.approx(slope, abs=1e-9)


def test_ends_keep_their_levels():
    """Oracle: the given depths."""
    assert strip().depth_m([0.0, 400.0]) == pytest.approx(np.array([6.0, 5.0]))


def test_flow_past_a_wall():
    """Oracle: check value 9.t."""
    assert walled().flow_m2_per_day(*WALLED["depths_m"]) == printed(WALLED["with_wall"])


def test_flow_without_the_wall():
    """Oracle: check value 9.t; 200 m of sand, also as a strip without recharge (9.16)."""
    sand = SteadyStrip(WALLED["sand_k_m_per_day"], 200.0, *WALLED["depths_m"])
    assert sand.flow_m2_per_day(100.0) == printed(WALLED["without_wall"])
    through = WalledStrip(20.0, 20.0, 100.0, 0.0, 100.0).flow_m2_per_day(6.0, 4.0)
    assert through == printed(WALLED["without_wall"])


@pytest.mark.parametrize(
    "call",
    [
        lambda: strip().depth_m(400.1),
        lambda: strip(length_m=0.0),
        lambda: strip(end_depth_m=-1.0),
        lambda: WalledStrip(20.0, 0.0, 1.0, 1.0, 1.0),
        lambda: WalledStrip(20.0, 1.0, 0.0, 0.0, 0.0),
        lambda: walled().flow_m2_per_day(-1.0, 0.0),
    ],
)
def test_wrong_calls_fail_at_once(call):
    with pytest.raises(ValueError, match=r"outside|zero"):
        call()
