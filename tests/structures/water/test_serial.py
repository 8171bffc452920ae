"""The reported interval. Oracles: handbook 10.k; the same formulae with whole matrices."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import t as student

from structures.water.serial import COEFFICIENTS, Mixture, SerialDesign, in_median_gaps
from tests.structures.water import invented_wells as wells


def step(time, first_after):
    return np.column_stack([np.ones(len(time)), np.asarray(time) >= first_after])


def test_the_step_of_the_nile():
    """Oracle: handbook 10.k."""
    years = np.arange(100.0)
    found = SerialDesign(years, step(years, 28)).mixture(wells.nile(), 1)
    ends = [found.quantile(share) for share in (0.05, 0.50, 0.95)]
    assert ends == pytest.approx([-308.25382, -249.50216, -191.52812], abs=5e-6)


def test_the_step_of_the_invented_wells():
    """Oracle: handbook 10.k."""
    years = np.arange(11.0)
    found = SerialDesign(years, step(years, 6)).mixture(np.r_[wells.BEFORE, wells.AFTER], 1)
    ends = [found.quantile(share) for share in (0.05, 0.50, 0.95)]
    assert ends == pytest.approx([0.62328, 0.69086, 0.75427], abs=5e-6)


def test_weights_and_errors_against_whole_matrices():
    """Oracle: handbook 10.5 written out with R, R^-1 and Q as matrices, uneven gaps."""
    rng = np.random.default_rng(3)
    time = np.cumsum(rng.choice([0.5, 1.0, 1.0, 2.0, 5.0], 40))
    columns = np.column_stack([np.ones(40), time > time[20], np.cos(time), np.sin(time)])
    values = rng.normal(size=40)
    design = SerialDesign(time, columns)
    seen = design.weigh(values)
    log_weight = []
    for place, coefficient in enumerate(COEFFICIENTS):
        inverse = np.linalg.inv(coefficient ** np.abs(time[:, None] - time[None, :]))
        gram = columns.T @ inverse @ columns
        q = inverse - inverse @ columns @ np.linalg.inv(gram) @ columns.T @ inverse
        squares = values @ q @ values
        log_weight.append(
            np.linalg.slogdet(inverse)[1] / 2
            - np.linalg.slogdet(gram)[1] / 2
            - (40 - 4) / 2 * np.log(squares)
        )
        fitted = np.linalg.solve(gram, columns.T @ inverse @ values)
        assert seen.coefficient[place] == pytest.approx(fitted, abs=1e-8)
        assert seen.variance[place] == pytest.approx(squares / 36, rel=1e-8)
        assert design.inverse[place] == pytest.approx(np.linalg.inv(gram), rel=1e-6, abs=1e-9)
    weight = np.exp(np.array(log_weight) - max(log_weight))
    assert seen.weight == pytest.approx(weight / weight.sum(), rel=1e-6)


def test_a_lone_component_is_students_t():
    """Oracle: scipy.stats.t."""
    found = Mixture(np.array([1.0]), np.array([2.0]), np.array([0.5]), 7)
    for share in (0.05, 0.5, 0.8, 0.95):
        assert found.quantile(share) == pytest.approx(student.ppf(share, 7, 2.0, 0.5), abs=1e-9)
    assert found.interval(0.90) == pytest.approx(student.interval(0.90, 7, 2.0, 0.5))


@given(
    st.floats(-5, 5),
    st.floats(0.1, 10),
    st.lists(st.floats(-1, 1), min_size=12, max_size=30, unique=True),
)
def test_the_interval_moves_and_stretches_with_the_series(shift, factor, values):
    """A law: a + b y gives the step b times as large, wherever the series stands."""
    time = np.arange(float(len(values)))
    design = SerialDesign(time, step(time, len(values) // 2))
    one = design.mixture(values, 1).interval(0.9)
    two = design.mixture(shift + factor * np.array(values), 1).interval(0.9)
    assert np.array(two) == pytest.approx(factor * np.array(one), rel=1e-4, abs=1e-5)


def test_times_are_counted_in_median_gaps():
    """Oracle: by hand, gaps 15, 15, 30 have the median 15."""
    assert in_median_gaps([100, 115, 130, 160]) == pytest.approx([0, 1, 2, 4])


def test_nonsense_is_refused():
    with pytest.raises(ValueError, match="rise"):
        SerialDesign([0, 0, 1], np.ones((3, 1)))
    with pytest.raises(ValueError, match="columns"):
        SerialDesign([0, 1], np.ones((2, 2)))
    with pytest.raises(ValueError, match="repeats"):
        SerialDesign([0, 1, 2, 3], np.ones((4, 2)))
    with pytest.raises(ValueError, match="values"):
        SerialDesign([0, 1, 2], np.ones((3, 1))).mixture([1.0], 0)
    with pytest.raises(ValueError, match="share"):
        Mixture(np.ones(1), np.ones(1), np.ones(1), 3).quantile(1.0)
    with pytest.raises(ValueError, match="degree"):
        Mixture(np.ones(1), np.ones(1), np.zeros(1), 3)
    with pytest.raises(ValueError, match="two days"):
        in_median_gaps([1.0])
