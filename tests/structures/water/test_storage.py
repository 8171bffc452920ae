"""Storage that a wall keeps upstream."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import trapezoid

from structures.water.storage import storage_m3
from tests.structures.water.oracle import WATER, bands, printed, vee

CASE = WATER["9.u"]


def test_storage_of_a_vee():
    """Oracle: check value 9.u."""
    held = storage_m3(
        vee(CASE["side_slope"], CASE["depth_m"]),
        from_m=0.0,
        to_m=CASE["depth_m"],
        bed_slope=CASE["bed_slope"],
        specific_yield=CASE["specific_yield"],
    )
    assert held == printed(CASE["storage_m3"])


def test_what_was_wet_before_is_not_gained():
    """Oracle: handbook 9.9 for the valley of 9.u with water at 2 m: 20 (2.5 (64 - 8)/3 - 2 x 10)."""
    held = storage_m3(vee(2.5, 4.0), from_m=2.0, to_m=4.0, bed_slope=0.01, specific_yield=0.2)
    assert held == pytest.approx(20.0 * (2.5 * 56.0 / 3.0 - 20.0))


@settings(max_examples=30, deadline=None)
@given(bands(), st.integers(0, 800), st.integers(1, 400))
def test_storage_is_summed_along_the_valley(band, start, gain):
    """Oracle: the trapezium rule up the valley, where the new level sinks by the bed's slope."""
    before, crest, slope = start / 100.0, (start + gain) / 100.0, 0.01
    levels = np.linspace(before, crest, 401)
    areas = [band.area_below_m2(level) - band.area_below_m2(before) for level in levels]
    gained = trapezoid(areas, levels) / slope
    held = storage_m3(band, from_m=before, to_m=crest, bed_slope=slope, specific_yield=0.15)
    assert held == pytest.approx(0.15 * gained, rel=1e-3, abs=1e-2)


def test_water_at_the_crest_already_gains_nothing():
    """Oracle: an empty interval."""
    high = storage_m3(vee(2.5, 4.0), from_m=4.0, to_m=3.0, bed_slope=0.01, specific_yield=0.2)
    assert high == 0.0


def test_a_level_bed_has_no_end():
    with pytest.raises(ValueError, match="bed_slope is not above zero"):
        storage_m3(vee(2.5, 4.0), from_m=0.0, to_m=4.0, bed_slope=0.0, specific_yield=0.2)
