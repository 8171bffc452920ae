"""Regression with plain and Bartlett errors. Oracles: handbook 10.c, 10.d, 10.h, 10.i; statsmodels."""

import numpy as np
import pytest
import statsmodels.api as sm

from structures.water.regression import default_lag, regress
from tests.structures.water import invented_wells as wells

YEARS = np.arange(100.0)
ONES = np.ones(100)


def test_the_straight_line_of_the_nile():
    """Oracle: handbook 10.c."""
    found = regress(np.column_stack([ONES, YEARS]), wells.nile(), lag=4)
    assert found.coefficient[1] == pytest.approx(-2.7143054, abs=5e-8)
    assert found.plain_error[1] == pytest.approx(0.5215541, abs=5e-8)
    assert found.bartlett_error[1] == pytest.approx(0.6956199, abs=5e-8)


def test_the_step_of_the_nile():
    """Oracle: handbook 10.d; its mean, 10.a."""
    found = regress(np.column_stack([ONES, YEARS >= 28]), wells.nile(), lag=4)
    assert wells.nile().mean() == pytest.approx(919.35)
    assert found.coefficient[1] == pytest.approx(-247.77778, abs=5e-6)
    assert found.plain_error[1] == pytest.approx(28.43520, abs=5e-6)
    assert found.bartlett_error[1] == pytest.approx(31.33945, abs=5e-6)


@pytest.mark.parametrize(
    ("level_m", "expected"),
    [
        (
            np.r_[wells.BEFORE_AFFECTED, wells.AFTER_AFFECTED],
            (0.0027376, 0.718679, 0.009655, 0.006043),  # handbook 10.h
        ),
        (
            np.r_[wells.BEFORE, wells.AFTER],
            (-0.0002761, 0.704025, 0.019113, 0.013377),  # handbook 10.i
        ),
    ],
)
def test_the_rain_adjusted_change_of_the_invented_wells(level_m, expected):
    """Oracle: handbook 10.h and 10.i."""
    columns = np.column_stack([np.ones(11), wells.RAIN, wells.AFTERWARDS])
    found = regress(columns, level_m, lag=1)
    assert found.coefficient[1] == pytest.approx(expected[0], abs=5e-8)
    assert found.coefficient[2] == pytest.approx(expected[1], abs=5e-7)
    assert found.plain_error[2] == pytest.approx(expected[2], abs=5e-7)
    assert found.bartlett_error[2] == pytest.approx(expected[3], abs=5e-7)


def test_the_lag_of_eleven_years():
    """Oracle: handbook 10.h, "the default rule gives 2"; 100 dates give 4 (10.c)."""
    assert (default_lag(11), default_lag(100)) == (2, 4)


def test_both_errors_against_statsmodels():
    """Oracle: statsmodels OLS, plain and with HAC covariance of Bartlett weights."""
    rng = np.random.default_rng(8)
    columns = np.column_stack([np.ones(60), rng.normal(size=60), np.arange(60) >= 30])
    values = columns @ [1.0, 0.3, -0.4] + np.cumsum(rng.normal(0, 0.1, 60))
    found = regress(columns, values)
    plain = sm.OLS(values, columns).fit()
    serial = sm.OLS(values, columns).fit(cov_type="HAC", cov_kwds={"maxlags": default_lag(60)})
    assert found.coefficient == pytest.approx(plain.params, rel=1e-10)
    assert found.plain_error == pytest.approx(plain.bse, rel=1e-10)
    assert found.bartlett_error == pytest.approx(serial.bse, rel=1e-10)


def test_nonsense_is_refused():
    with pytest.raises(ValueError, match="columns"):
        regress(np.ones((2, 2)), [1.0, 2.0])
    with pytest.raises(ValueError, match="repeats"):
        regress(np.ones((5, 2)), np.arange(5.0))
