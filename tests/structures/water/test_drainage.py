"""Strips that empty into channels and fill under recharge."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from structures.water.drainage import (
    EMPTYING_FLOW,
    EMPTYING_RATE,
    EmptyingStrip,
    drain_time,
    drained_mid_share,
    drained_volume_share,
    recharged_mid_m,
)
from structures.water.response import Aquifer
from tests.structures.water.oracle import WATER, printed

RECHARGE = WATER["9.p"]
STRIP = EmptyingStrip(6.0, 250.0, 12.0, 0.18)
TAUS = st.floats(1e-6, 0.5)


@pytest.mark.parametrize(("tau", "share"), WATER["9.n"])
def test_height_left_midway(tau, share):
    """Oracle: check value 9.n."""
    assert drained_mid_share(tau) == printed(share)


@pytest.mark.parametrize(("tau", "share"), WATER["9.o"])
def test_volume_left(tau, share):
    """Oracle: check value 9.o."""
    assert drained_volume_share(tau) == printed(share)


@settings(max_examples=40, deadline=None)
@given(TAUS)
def test_height_left_midway_by_images(tau):
    """Oracle: the same strip by images, 1 - 2 sum (-1)^j erfc((2 j + 1)/(4 sqrt tau)), mpmath."""
    terms = (
        (-1) ** j * mpmath.erfc((2 * j + 1) / (4 * mpmath.sqrt(mpmath.mpf(tau)))) for j in range(30)
    )
    assert drained_mid_share(tau) == pytest.approx(float(1 - 2 * sum(terms)), abs=1e-12)


@settings(max_examples=40, deadline=None)
@given(TAUS)
def test_volume_left_by_images(tau):
    """Oracle: by images, 1 - 4 sqrt(tau/pi) (1 + 2 sqrt(pi) sum (-1)^n ierfc(n/(2 sqrt tau)))."""
    with mpmath.workdps(30):
        root = mpmath.sqrt(mpmath.mpf(tau))

        def ierfc(u):
            return mpmath.exp(-(u**2)) / mpmath.sqrt(mpmath.pi) - u * mpmath.erfc(u)

        images = sum((-1) ** n * ierfc(n / (2 * root)) for n in range(1, 30))
        drained = 4 * root / mpmath.sqrt(mpmath.pi) * (1 + 2 * mpmath.sqrt(mpmath.pi) * images)
        wanted = float(1 - drained)
    assert drained_volume_share(tau) == pytest.approx(wanted, abs=1e-12)


def test_nothing_has_drained_at_once():
    """Oracle: the strip before it begins."""
    assert drained_mid_share([0.0, 1e-9]).tolist() == [1.0, 1.0]
    assert drained_volume_share(0.0) == 1.0


@pytest.mark.parametrize(("days", "height"), RECHARGE["height_m"])
def test_height_under_recharge(days, height):
    """Oracle: check value 9.p."""
    ground = Aquifer(RECHARGE["transmissivity_m2_per_day"], RECHARGE["storage"])
    found = recharged_mid_m(ground, RECHARGE["recharge_m_per_day"], RECHARGE["spacing_m"], days)
    assert found == printed(height)


@settings(max_examples=20, deadline=None)
@given(st.floats(0.01, 60.0))
def test_recharge_is_summed_from_what_each_day_leaves(days):
    """Oracle: numerical integral; a day's recharge drains like a first height of w/S."""
    ground, spacing, recharge = Aquifer(100.0, 0.15), 200.0, 0.005
    left, _ = quad(
        lambda day: float(drained_mid_share(drain_time(ground, spacing, day))), 0.0, days, limit=200
    )
    found = recharged_mid_m(ground, recharge, spacing, days)
    assert found == pytest.approx(recharge / 0.15 * left, rel=1e-6)


def test_coefficients_of_an_emptying_strip():
    """Oracle: check value 9.q."""
    assert printed(WATER["9.q"]["flow"]) == EMPTYING_FLOW
    assert printed(WATER["9.q"]["rate"]) == EMPTYING_RATE


@settings(max_examples=15, deadline=None)
@given(st.floats(0.0, 3000.0))
def test_an_emptying_strip_loses_what_flows_out(days):
    """Oracle: mass balance, numerical integrals of depth along the strip and of flow in time."""

    def stored(day):
        return 0.18 * quad(lambda x: float(STRIP.depth_at_m(x, day)), 0.0, 250.0, limit=200)[0]

    out, _ = quad(lambda day: float(STRIP.outflow_m2_per_day(day)), 0.0, days)
    assert stored(0.0) - stored(days) == pytest.approx(out, rel=1e-5, abs=1e-4)


def test_an_emptying_strip_flows_down_its_own_slope():
    """Oracle: Dupuit's flow -K h dh/dx by differences; at 60 m it drains what lies behind it."""
    h = STRIP.depth_at_m([59.9, 60.0, 60.1], 100.0)
    flow = -12.0 * h[1] * (h[2] - h[0]) / 0.2
    depth_then = quad(lambda x: float(STRIP.depth_at_m(x, 100.0)), 0.0, 60.0)[0]
    depth_after = quad(lambda x: float(STRIP.depth_at_m(x, 100.1)), 0.0, 60.0)[0]
    depth_before = quad(lambda x: float(STRIP.depth_at_m(x, 99.9)), 0.0, 60.0)[0]
    assert depth_then < depth_before
    assert flow == pytest.approx(0.18 * (depth_before - depth_after) / 0.2, rel=1e-5)


def test_ends_of_an_emptying_strip():
    """Oracle: handbook 9.15, the first depth at the divide, none at the channel."""
    assert STRIP.depth_at_m([0.0, 250.0], 0.0) == pytest.approx(np.array([6.0, 0.0]))


@pytest.mark.parametrize(
    "call",
    [
        lambda: STRIP.depth_at_m(250.1, 0.0),
        lambda: STRIP.outflow_m2_per_day(-1.0),
        lambda: EmptyingStrip(0.0, 1.0, 1.0, 0.1),
        lambda: drain_time(Aquifer(1.0, 0.1), 0.0, 1.0),
    ],
)
def test_wrong_calls_fail_at_once(call):
    with pytest.raises(ValueError, match=r"outside|zero"):
        call()
