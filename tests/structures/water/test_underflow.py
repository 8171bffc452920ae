"""Flow through the section before the wall."""

import pytest

from structures.water.underflow import layered_underflow_m3_per_day, underflow_m3_per_day
from tests.structures.water.oracle import WATER, printed

CASE = WATER["9.a"]


def test_underflow():
    """Oracle: check value 9.a."""
    flow = underflow_m3_per_day(CASE["k_m_per_day"], CASE["area_m2"], CASE["gradient"])
    assert flow == printed(CASE["flow_m3_per_day"])


def test_layers_add_up():
    """Oracle: hand sum 0.004 (30 x 100 + 5 x 80) = 13.6; layers of one sand are one section."""
    assert layered_underflow_m3_per_day(0.004, [(30, 100), (5, 80)]) == pytest.approx(13.6)
    assert layered_underflow_m3_per_day(0.004, [(30, 100), (30, 80)]) == printed(
        CASE["flow_m3_per_day"]
    )


@pytest.mark.parametrize("wrong", [(-1, 1, 1), (1, -1, 1), (1, 1, -1)])
def test_negative_flow_is_a_wrong_call(wrong):
    with pytest.raises(ValueError, match="below zero"):
        underflow_m3_per_day(*wrong)
