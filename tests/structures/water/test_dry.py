"""Bounded pairs. Oracles: no bound gives the plain interval; a grid of the exact posterior."""

import numpy as np
import pytest
from scipy.stats import norm

from structures.water.dry import Bounded, bounded_mixture
from structures.water.serial import SerialDesign

TIME = np.arange(40.0)
COLUMNS = np.column_stack([np.ones(40), TIME >= 20])
NONE = np.zeros(40, bool)


def drawn(seed, step_m=0.5):
    return np.random.default_rng(seed).normal(0, 0.3, 40) + step_m * COLUMNS[:, 1]


def test_without_a_bound_the_plain_interval_comes_back():
    """Oracle: the interval of `serial`, which meets handbook 10.k; 420 rounds leave 2 percent."""
    design = SerialDesign(TIME, COLUMNS)
    values = drawn(1)
    plain = design.mixture(values, 1).interval(0.9)
    found = bounded_mixture(design, Bounded(values, NONE, NONE), 1, np.random.default_rng(2))
    assert np.array(found.interval(0.9)) == pytest.approx(np.array(plain), abs=0.015)


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_bounded_values_against_the_exact_law(sign):
    """Oracle: the likelihood of independent normals with a cut tail, integrated on a grid.

    The flat prior on mean and step and 1/sigma is that of the t intervals; the series has no
    serial correlation, so the mean over the grid of coefficients comes close to it.
    """
    values = drawn(4)
    bound = np.quantile(values, 0.25)
    cut = values < bound
    kept = np.where(cut, bound, values)
    a, d, s = np.meshgrid(
        np.linspace(-0.7, 0.7, 71), np.linspace(-0.4, 1.4, 91), np.linspace(0.15, 0.8, 40)
    )
    log = -np.log(s)
    for value, after, below in zip(kept, COLUMNS[:, 1], cut, strict=True):
        law = norm(a + d * after, s)
        log = log + (law.logcdf(value) if below else law.logpdf(value))
    mass = np.exp(log - log.max())
    expected = float((mass * d).sum() / mass.sum())
    design = SerialDesign(TIME, COLUMNS)
    series = (
        Bounded(kept, cut, NONE) if sign > 0 else Bounded(-kept, NONE, cut)
    )  # a lower bound is the mirror
    found = bounded_mixture(design, series, 1, np.random.default_rng(6))
    assert sign * found.mean == pytest.approx(expected, abs=0.03)


def test_dropping_dry_pairs_hides_a_gain_that_bounds_keep():
    """Oracle: the known step of 1.0 m; the before side is dry in a third of its pairs."""
    found, dropped = [], []
    for seed in range(20):
        values = drawn(seed, 1.0)
        bound = -0.13
        cut = values < bound
        kept = np.where(cut, bound, values)
        design = SerialDesign(TIME, COLUMNS)
        rng = np.random.default_rng(seed)
        found.append(bounded_mixture(design, Bounded(kept, cut, NONE), 1, rng).mean)
        wet = ~cut
        dropped.append(kept[wet & (TIME >= 20)].mean() - kept[wet & (TIME < 20)].mean())
    assert np.mean(found) == pytest.approx(1.0, abs=0.05)
    assert np.mean(dropped) < 0.92


def test_the_same_seed_gives_the_same_digits():
    design = SerialDesign(TIME, COLUMNS)
    series = Bounded(drawn(1), TIME < 3, NONE)
    one, two = (bounded_mixture(design, series, 1, np.random.default_rng(9)) for _ in range(2))
    assert one.interval(0.9) == two.interval(0.9)


def test_a_bound_far_in_the_tail_stays_finite():
    values = drawn(1)
    values[5] = -30.0
    design = SerialDesign(TIME, COLUMNS)
    found = bounded_mixture(design, Bounded(values, TIME == 5, NONE), 1, np.random.default_rng(1))
    assert np.isfinite(found.interval(0.9)).all()


def test_nonsense_is_refused():
    with pytest.raises(ValueError, match="both sides"):
        Bounded(np.ones(2), np.ones(2, bool), np.ones(2, bool))
    with pytest.raises(ValueError, match="marks"):
        Bounded(np.ones(2), np.ones(1, bool), np.ones(2, bool))
    with pytest.raises(ValueError, match="times"):
        bounded_mixture(
            SerialDesign(TIME, COLUMNS),
            Bounded(np.ones(2), np.zeros(2, bool), np.zeros(2, bool)),
            1,
            np.random.default_rng(1),
        )
