"""Differences of means. Oracles: handbook 10.e to 10.g, statsmodels."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from statsmodels.stats.weightstats import CompareMeans, DescrStatsW

from structures.water.contrast import Contrast, pooled_contrast, unequal_contrast
from tests.structures.water.invented_wells import AFTER, BEFORE

SIDES = st.lists(st.floats(-50, 50), min_size=3, max_size=30)


def test_the_pooled_difference_of_the_invented_wells():
    """Oracle: handbook 10.e."""
    found = pooled_contrast(BEFORE, AFTER)
    assert found.change_m == pytest.approx(0.693, abs=5e-7)
    assert found.standard_error_m == pytest.approx(0.024414, abs=5e-7)
    assert found.degrees == 9
    assert found.change_m / found.standard_error_m == pytest.approx(28.3855, abs=5e-5)


@pytest.mark.parametrize(
    ("confidence", "ends"), [(0.95, (0.63777, 0.74823)), (0.90, (0.64825, 0.73775))]
)
def test_the_interval_of_the_invented_wells(confidence, ends):
    """Oracle: handbook 10.f."""
    found = pooled_contrast(BEFORE, AFTER).interval_m(confidence)
    assert found == pytest.approx(ends, abs=5e-6)


def test_the_unequal_variance_version_of_the_invented_wells():
    """Oracle: handbook 10.g."""
    found = unequal_contrast(BEFORE, AFTER)
    assert found.standard_error_m == pytest.approx(0.024947, abs=5e-7)
    assert found.degrees == pytest.approx(7.6940, abs=5e-5)


def test_both_versions_against_statsmodels():
    """Oracle: statsmodels CompareMeans, intervals of the difference."""
    rng = np.random.default_rng(5)
    for _ in range(20):
        before, after = rng.normal(0, 1, 9), rng.normal(0.4, 3, 14)
        judge = CompareMeans(DescrStatsW(after), DescrStatsW(before))
        for ours, kind in ((pooled_contrast, "pooled"), (unequal_contrast, "unequal")):
            expected = judge.tconfint_diff(alpha=0.10, usevar=kind)
            assert ours(before, after).interval_m(0.90) == pytest.approx(expected, rel=1e-10)


@given(SIDES, SIDES, st.floats(-10, 10))
def test_a_shift_of_the_after_side_shifts_the_difference_alone(before, after, shift_m):
    one = pooled_contrast(before, after)
    two = pooled_contrast(before, [value + shift_m for value in after])
    assert two.change_m - one.change_m == pytest.approx(shift_m, abs=1e-9)
    assert two.standard_error_m == pytest.approx(one.standard_error_m, abs=1e-6)


def test_too_little_is_said():
    with pytest.raises(ValueError, match="three values"):
        pooled_contrast([1.0], [2.0])
    with pytest.raises(ValueError, match="two values"):
        unequal_contrast([1.0], [2.0, 3.0])
    with pytest.raises(ValueError, match="scatters"):
        unequal_contrast([1.0, 1.0], [2.0, 2.0])


def test_an_interval_is_symmetric():
    assert Contrast(1.0, 0.0, 5.0).interval_m(0.9) == (1.0, 1.0)
