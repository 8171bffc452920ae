"""Segments, their factors folded into the covariance, and repeats that disagree."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.ground.sounding_curve import (
    curve,
    overlap_gaps,
    segment_factors,
    whitened_residual,
)
from structures.intake.pack import Sounding, SoundingReading

AB2 = (2.0, 5.0, 10.0, 10.0, 20.0, 30.0, 30.0, 60.0)
MN2 = (0.5, 0.5, 0.5, 2.0, 2.0, 2.0, 8.0, 8.0)
SEGMENT = np.array([0, 0, 0, 1, 1, 1, 2, 2])


def sounding(values, *, array="schlumberger", sd_percent=3.0):
    rows = zip(AB2, MN2, values, strict=True)
    return Sounding(0.0, array, tuple(SoundingReading(*row, sd_percent) for row in rows), "made")


def explicit_factors(residual, noise, segment_sd):
    """Least squares with the factors as unknowns and their prior as two more readings.

    Oracle: numpy's lstsq on the augmented system; gives the factors and the least sum of squares.
    """
    columns = np.stack([SEGMENT == 1, SEGMENT == 2], axis=1) / noise
    system = np.concatenate([columns, np.eye(2) / segment_sd])
    right = np.concatenate([residual / noise, [0.0, 0.0]])
    factors, *_ = np.linalg.lstsq(system, right)
    return factors, float(((right - system @ factors) ** 2).sum())


@given(
    residual=st.lists(st.floats(-0.5, 0.5), min_size=8, max_size=8), segment_sd=st.floats(0.02, 0.2)
)
def test_folded_factors_equal_explicit_ones(residual, segment_sd):
    """Oracle: least squares with the factors as unknowns (general library)."""
    residual = np.array(residual)
    computed = np.full(8, 100.0)
    readings = curve(sounding(computed * np.exp(residual)), segment_sd=segment_sd)
    factors, chi_square = explicit_factors(residual, 0.03, segment_sd)
    whitened = whitened_residual(readings, computed[None, :])
    assert (whitened**2).sum() == pytest.approx(chi_square, rel=1e-9, abs=1e-12)
    given_back = segment_factors(readings, computed)
    assert [np.log(factor.factor) for factor in given_back] == pytest.approx(
        [0.0, *factors], rel=1e-9, abs=1e-12
    )


def test_sd_of_a_segment_factor():
    """Oracle: hand sum, three readings of 3 % and a prior of 5 %: 1/sqrt(3/0.03^2 + 1/0.05^2)."""
    first, second, third = segment_factors(curve(sounding([100.0] * 8)), np.full(8, 100.0))
    assert (first.mn2_m, first.factor, first.log_sd) == (0.5, 1.0, 0.0)
    assert second.log_sd == pytest.approx((3 / 0.03**2 + 1 / 0.05**2) ** -0.5)
    assert third.log_sd == pytest.approx((2 / 0.03**2 + 1 / 0.05**2) ** -0.5)


def test_segments_are_runs_of_equal_mn():
    """Oracle: read off the list; a Wenner spread is one segment though MN grows."""
    assert curve(sounding([100.0] * 8)).segment == tuple(SEGMENT)
    wenner = curve(sounding([100.0] * 8, array="wenner"))
    assert wenner.segment == (0,) * 8
    np.testing.assert_allclose(wenner.whitening, np.eye(8) / 0.03)


def test_stated_noise_and_one_noise_for_all():
    """Oracle: the readings state 5 %; an argument goes before it."""
    stated = sounding([100.0] * 8, sd_percent=5.0)
    assert curve(stated).noise == pytest.approx([0.05] * 8)
    assert curve(stated, noise=0.02).noise == pytest.approx([0.02] * 8)


def test_the_widest_gap_comes_first_with_its_limit():
    """Oracle: hand sum, 3 sd of two noises of 3 % and one or two factors of 5 %."""
    wide, narrow = overlap_gaps(curve(sounding([100, 100, 100, 110, 100, 100, 150, 100])))
    assert (wide.ab2_m, wide.mn2_m, wide.share) == (30.0, (2.0, 8.0), pytest.approx(0.5))
    assert wide.limit_share == pytest.approx(np.expm1(3 * (2 * 0.03**2 + 2 * 0.05**2) ** 0.5))
    assert narrow.limit_share == pytest.approx(np.expm1(3 * (2 * 0.03**2 + 0.05**2) ** 0.5))
    assert (wide.too_wide, narrow.too_wide) == (True, False)


@pytest.mark.parametrize(
    ("values", "options", "message"),
    [
        ([100.0] * 7 + [0.0], {}, "must be positive"),
        ([100.0] * 8, {"noise": 0.0}, "must be positive"),
        ([100.0] * 8, {"segment_sd": 0.0}, "must be positive"),
    ],
)
def test_impossible_readings_are_a_wrong_call(values, options, message):
    with pytest.raises(ValueError, match=message):
        curve(sounding(values), **options)


def test_no_reading_is_a_wrong_call():
    with pytest.raises(ValueError, match="needs readings"):
        curve(Sounding(0.0, "wenner", (), "empty"))
