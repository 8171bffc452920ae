"""Trend by ranks. Oracles: handbook 10.a and 10.b, scipy, hand counts."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import kendalltau, theilslopes

from structures.water.trend import mann_kendall, median_slope
from tests.structures.water.invented_wells import nile


def test_mann_kendall_of_the_nile():
    """Oracle: handbook 10.a."""
    found = mann_kendall(nile())
    assert found.signs == -1387
    assert found.variance == pytest.approx(112728.3333, abs=5e-5)
    assert found.score == pytest.approx(-4.128067, abs=5e-7)
    assert found.p_two_sided == pytest.approx(3.658e-05, abs=5e-9)


def test_the_median_slope_of_the_nile():
    """Oracle: handbook 10.b; scipy.stats.theilslopes."""
    found = median_slope(np.arange(100.0), nile())
    assert found == pytest.approx(-2.6, abs=5e-8)
    assert found == pytest.approx(theilslopes(nile())[0])


@given(st.lists(st.integers(0, 40), min_size=3, max_size=40, unique=True))
def test_the_signs_are_those_of_kendalls_tau(values):
    """Oracle: scipy.stats.kendalltau against time, tau = S over the number of pairs (no ties)."""
    tau = kendalltau(range(len(values)), values).statistic
    pairs = len(values) * (len(values) - 1) / 2
    assert mann_kendall(values).signs == pytest.approx(tau * pairs)


def test_dry_levels_are_tied_lowest():
    """Oracle: by hand, ranks 3 1 1 2 whatever bound the dry wells had."""
    found = mann_kendall([5.0, 4.9, 1.0, 4.0], [False, True, True, False])
    assert found.signs == -1  # -, -, -, 0, +, +
    assert found.variance == pytest.approx((4 * 3 * 13 - 2 * 1 * 9) / 18)


def test_a_flat_series_has_no_trend():
    assert mann_kendall([1.0, 1.0, 1.0]).p_two_sided == 1.0


def test_nonsense_is_refused():
    with pytest.raises(ValueError, match="three values"):
        mann_kendall([1.0, 2.0])
    with pytest.raises(ValueError, match="its mark"):
        mann_kendall([1.0, 2.0, 3.0], [True])
    with pytest.raises(ValueError, match="no slope"):
        median_slope([1.0], [2.0])
