"""A step at a day nobody named. Oracle: steps put into drawn series."""

import numpy as np
import pytest

from structures.water.steps import find_step

TIME = np.arange(60.0)
ONES = np.ones((60, 1))


def drawn(seed, coefficient=0.5):
    rng = np.random.default_rng(seed)
    series = np.empty(60)
    series[0] = rng.normal(0, 0.1)
    for place in range(1, 60):
        series[place] = coefficient * series[place - 1] + rng.normal(0, 0.087)
    return series


@pytest.mark.parametrize("seed", range(5))
def test_a_parapet_raised_is_found_where_and_as_large_as_it_was(seed):
    """Oracle: -0.60 m from the 38th reading on, ten times the scatter of the readings' steps."""
    series = drawn(seed) - 0.6 * (TIME >= 38)
    found = find_step(TIME, ONES, series)
    assert abs(found.first - 38) <= 1
    low, high = found.law.interval(0.99)
    assert low < -0.6 < high


def test_series_without_a_step_show_none():
    """Oracle: the share of false alarms asked for, 1 in 100; of 100 series 5 at most (binomial,
    all but 1 run in 1,800 at 1 %).
    """
    alarms = sum(find_step(TIME, ONES, drawn(seed)) is not None for seed in range(100, 200))
    assert alarms <= 5


def test_barred_days_are_not_looked_at():
    series = drawn(1) - 0.6 * (TIME >= 38)
    found = find_step(TIME, ONES, series, barred=np.abs(TIME - 38) < 3)
    assert found is None or abs(found.first - 38) >= 3


def test_a_step_small_as_a_reading_error_is_none():
    series = 0.001 * drawn(1) + 0.05 * (TIME >= 30)
    assert find_step(TIME, ONES, series) is None


def test_too_few_pairs_show_no_step():
    assert find_step(TIME[:6], ONES[:6], drawn(1)[:6]) is None
    assert find_step(TIME, ONES, drawn(1), barred=TIME >= 0) is None
