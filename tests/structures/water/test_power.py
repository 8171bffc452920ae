"""What could have been seen. Oracles: handbook 10.10, simulation, the law of means."""

import numpy as np
import pytest

from structures.water.power import smallest_seen_m, widening
from structures.water.serial import SerialDesign, in_median_gaps


@pytest.mark.parametrize(
    ("degrees", "quantile", "factor"), [(9, 1.8331, 2.72), (1e6, 1.6449, 2.49)]
)
def test_standard_errors_that_can_be_seen(degrees, quantile, factor):
    """Oracle: handbook 10.10, 2.49 standard errors, 2.72 at 9 degrees (t of 0.95 from tables)."""
    assert smallest_seen_m(quantile, degrees, 0.90) == pytest.approx(factor, abs=0.005)


def test_an_effect_of_that_size_is_found_four_times_in_five():
    """Oracle: simulation, 4000 pairs of samples of 15 and 15; three errors of the share."""
    rng = np.random.default_rng(7)
    error_m = (2 / 15) ** 0.5
    size_m = smallest_seen_m(1.7011 * error_m, 28, 0.90)  # t of 0.95 at 28, printed tables
    before, after = rng.normal(0, 1, (4000, 15)), rng.normal(size_m, 1, (4000, 15))
    pooled = ((before.var(1, ddof=1) + after.var(1, ddof=1)) / 15) ** 0.5
    found = after.mean(1) - before.mean(1) - 1.7011 * pooled > 0
    assert found.mean() == pytest.approx(0.80, abs=0.03)


def test_more_years_narrow_the_error_of_independent_pairs_as_means_do():
    """Oracle: the law of means, sqrt((1/n1 + 1/(n2 + more)) / (1/n1 + 1/n2)), where a series shows
    no correlation; weights of small coefficients leave a few percent.
    """
    rng = np.random.default_rng(3)
    days = 30.4375 * np.arange(120.0)
    columns = np.column_stack([np.ones(120), days >= 60 * 30.4375])
    values = rng.normal(size=120) - 0.3 * np.roll(rng.normal(size=120), 1)
    factor = widening(SerialDesign(in_median_gaps(days), columns), days, values, years=2)
    assert factor == pytest.approx(((1 / 60 + 1 / 83) / (1 / 60 + 1 / 60)) ** 0.5, rel=0.03)
    assert factor < 1.0
