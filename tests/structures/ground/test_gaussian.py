"""The Gaussian process of the rock line: handbook section 4, a general library, and laws."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import norm
from sklearn.gaussian_process import GaussianProcessRegressor
from sklearn.gaussian_process.kernels import ConstantKernel, Matern

from structures.ground.gaussian import (
    Covariance,
    Observations,
    draw_bounded,
    draw_lines,
    fit_covariance,
    predict,
)

# Data of check values 4 (invented there).
SEEN = Observations(
    [0.0, 10.0, 22.0, 35.0, 50.0], [98.2, 95.1, 93.4, 94.6, 97.9], [0.05, 0.6, 0.6, 0.05, 0.3]
)
FIELD = Covariance(9.0, 20.0)
AT = np.array([5.0, 28.0, 25.0])
STEADY_M2 = 9e-9


def test_unknown_mean():
    """Oracle: check values 4.a, 4.b, 4.c and the covariance of 4.i."""
    found = predict(SEEN, FIELD, AT)
    assert found.trend_m == pytest.approx(96.542458, abs=5e-7)
    assert found.mean_m == pytest.approx([96.684225, 94.144102, 93.862125], rel=1e-6)
    assert found.sd_m == pytest.approx([1.512755, 1.706408, 1.491036], rel=1e-6)
    assert found.covariance_m2[1, 2] == pytest.approx(1.528768, rel=1e-6)


def test_known_mean():
    """Oracle: check values 4.d, 4.e."""
    found = predict(SEEN, FIELD, AT, trend_m=96.0)
    assert found.mean_m == pytest.approx([96.664957, 94.113576, 93.837876], rel=1e-6)
    assert found.sd_m == pytest.approx([1.511046, 1.702604, 1.488289], rel=1e-6)


def test_known_mean_against_a_general_library():
    """Oracle: scikit-learn's Gaussian process with a Matern kernel of order 1/2."""
    kernel = ConstantKernel(9.0, "fixed") * Matern(20.0, "fixed", nu=0.5)
    library = GaussianProcessRegressor(kernel, alpha=SEEN.sd_m**2, optimizer=None)
    library.fit(SEEN.offset_m[:, None], SEEN.level_m - 96.0)
    at = np.linspace(-10.0, 60.0, 41)
    mean, covariance = library.predict(at[:, None], return_cov=True)
    found = predict(SEEN, FIELD, at, trend_m=96.0)
    assert found.mean_m - 96.0 == pytest.approx(mean, abs=1e-6)
    assert found.covariance_m2 == pytest.approx(covariance, abs=1e-6)


def conditioned(mean, cov, most):
    """Closed form of handbook 4.5 for one bound on the first place: means and sds."""
    s = np.sqrt(cov[0, 0])
    a = (most - mean[0]) / s
    r = norm.pdf(a) / norm.cdf(a)
    mean_0, var_0 = mean[0] - s * r, cov[0, 0] * (1 - a * r - r * r)
    share = cov[:, 0] / cov[0, 0]
    return mean + share * (mean_0 - mean[0]), np.sqrt(np.diag(cov) - share**2 * (cov[0, 0] - var_0))


@pytest.mark.parametrize(
    ("trend", "at_28", "at_25"),
    [
        (96.0, (91.58790, 0.77149), (92.51489, 1.25814)),  # check values 4.f and 4.g
        (None, (91.591366, 0.769627), (92.521888, 1.258501)),  # check value 4.i
    ],
)
def test_one_bound(trend, at_28, at_25):
    """Oracle: check values 4.f, 4.g, 4.i; sampling within the 0.02 that the handbook grants."""
    found = predict(SEEN, FIELD, [28.0, 25.0], trend_m=trend)
    mean, sd = conditioned(found.mean_m, found.covariance_m2, 92.5)
    assert (mean[0], sd[0]) == pytest.approx(at_28, rel=1e-5)
    assert (mean[1], sd[1]) == pytest.approx(at_25, rel=1e-5)
    drawn = draw_lines(
        found,
        np.array([92.5]),
        draws=40_000,
        steady_m2=STEADY_M2,
        rng=np.random.default_rng(1),
    )
    assert drawn.mean(axis=0) == pytest.approx(mean, abs=0.02)
    assert drawn.std(axis=0) == pytest.approx(sd, abs=0.02)
    assert (drawn[:, 0] <= 92.5).all()


def test_a_bound_far_above_changes_nothing():
    """Oracle: check value 4.h."""
    found = predict(SEEN, FIELD, [28.0, 25.0])
    mean, sd = conditioned(found.mean_m, found.covariance_m2, 110.0)
    assert mean == pytest.approx(found.mean_m, abs=1e-6)
    assert sd == pytest.approx(found.sd_m, abs=1e-6)
    drawn = [
        draw_bounded(
            found.mean_m, found.covariance_m2, most, draws=500, rng=np.random.default_rng(2)
        )
        for most in (np.array([110.0, 110.0]), np.array([1e6, 1e6]))
    ]
    assert drawn[0] == pytest.approx(drawn[1])


def test_gibbs_agrees_with_brute_rejection():
    """Oracle: plain rejection on the same law, until enough survive."""
    at = np.array([6.0, 16.0, 28.0])
    found = predict(SEEN, FIELD, at)
    most = found.mean_m - 1.0 * found.sd_m
    rng = np.random.default_rng(3)
    drawn = draw_bounded(found.mean_m, found.covariance_m2, most, draws=8000, rng=rng)
    tried = rng.multivariate_normal(found.mean_m, found.covariance_m2, 3_000_000)
    kept = tried[(tried <= most).all(axis=1)]
    assert len(kept) > 2000
    error = kept.std(axis=0) / np.sqrt(len(kept)) + drawn.std(axis=0) / np.sqrt(8000)
    assert (np.abs(drawn.mean(axis=0) - kept.mean(axis=0)) < 4 * error).all()
    assert drawn.std(axis=0) == pytest.approx(kept.std(axis=0), rel=0.06)


def test_a_bound_far_out_in_the_tail_still_gives_numbers():
    """Law: every draw keeps its bound, however little the rest of the data likes it."""
    found = predict(SEEN, FIELD, [28.0, 30.0])
    most = found.mean_m - 30.0 * found.sd_m
    drawn = draw_bounded(
        found.mean_m, found.covariance_m2, most, draws=500, rng=np.random.default_rng(4)
    )
    assert np.isfinite(drawn).all()
    assert (drawn <= most).all()


@pytest.mark.parametrize("bound", [-2.0, -8.0, -29.0, -35.0])
def test_far_tails_keep_their_mean(bound):
    """Oracle: mean of a cut normal law, -phi(a)/Phi(a), on both sides of the change of formula."""
    drawn = draw_bounded(
        np.zeros(1), np.eye(1), np.array([bound]), draws=20_000, rng=np.random.default_rng(5)
    )
    closed = -np.exp(norm.logpdf(bound) - norm.logcdf(bound))
    assert drawn.mean() == pytest.approx(closed, abs=5 * drawn.std() / 20_000**0.5)


def test_wrong_calls_fail_at_once():
    with pytest.raises(ValueError, match="positive"):
        Covariance(0.0, 20.0)
    with pytest.raises(ValueError, match="one length"):
        Observations([0.0, 1.0], [5.0], [0.1])


@given(st.lists(st.integers(0, 59), min_size=2, max_size=6, unique=True), st.integers(0, 59))
def test_one_more_observation_never_widens_the_doubt(offsets, more):
    """Law: with a known mean, variance given more data is never larger."""
    at = np.linspace(0.0, 60.0, 21)
    few = Observations(offsets, [0.0] * len(offsets), [0.1] * len(offsets))
    many = Observations(
        [*offsets, more + 0.5], [0.0] * (len(offsets) + 1), [0.1] * (len(offsets) + 1)
    )
    before = predict(few, Covariance(1.0, 20.0), at, trend_m=0.0)
    after = predict(many, Covariance(1.0, 20.0), at, trend_m=0.0)
    assert (after.sd_m <= before.sd_m + 1e-9).all()


def test_mirrored_observations_give_the_mirrored_line():
    """Law: the field looks the same from both banks."""
    at = np.linspace(0.0, 50.0, 26)
    mirrored = Observations(50.0 - SEEN.offset_m[::-1], SEEN.level_m[::-1], SEEN.sd_m[::-1])
    there, back = predict(SEEN, FIELD, at), predict(mirrored, FIELD, at)
    assert back.mean_m[::-1] == pytest.approx(there.mean_m)
    assert back.sd_m[::-1] == pytest.approx(there.sd_m)


@pytest.mark.parametrize(
    ("spacing", "sd", "printed"),
    [
        (s, e, v)
        for s, row in {
            5.0: {0.05: 0.35, 0.3: 0.40, 0.75: 0.53},
            10.0: {0.05: 0.50, 0.3: 0.53, 0.75: 0.65},
            20.0: {0.05: 0.68, 0.3: 0.71, 0.75: 0.82},
        }.items()
        for e, v in row.items()
    ],
)
def test_doubt_between_tests_is_the_printed_one(spacing, sd, printed):
    """Oracle: handbook section 4, attainable accuracy, sill 1 m2 and range 20 m on 60 m."""
    x = np.arange(0.0, 60.1, spacing)
    seen = Observations(x, np.zeros(x.size), np.full(x.size, sd))
    # Midway between two tests; of an even number of gaps the one beside the middle.
    middle = x[x.size // 2] - spacing / 2
    found = predict(seen, Covariance(1.0, 20.0), [middle])
    assert found.sd_m[0] == pytest.approx(printed, abs=0.005)


def test_fitted_covariance_is_the_most_likely_on_a_fine_grid():
    """Oracle: brute search of the restricted likelihood over a grid of sill and range."""
    rng = np.random.default_rng(5)
    x = np.sort(rng.uniform(0.0, 200.0, 40))
    truth = Covariance(4.0, 15.0)
    level = rng.multivariate_normal(np.zeros(40), truth.between(x, x))
    seen = Observations(x, level, np.full(40, 0.1))
    fit = fit_covariance(seen, sill_m2=(0.1, 25.0), range_m=(5.0, 100.0))

    def minus_log_likelihood(sill, reach):
        full = Covariance(sill, reach).between(x, x) + 0.01 * np.eye(40)
        one, inverse = np.ones(40), np.linalg.inv(full)
        rest = level - (one @ inverse @ level) / (one @ inverse @ one)
        return np.linalg.slogdet(full)[1] + np.log(one @ inverse @ one) + rest @ inverse @ rest

    grid = [
        minus_log_likelihood(sill, reach)
        for sill in np.geomspace(0.1, 25.0, 40)
        for reach in np.geomspace(5.0, 100.0, 40)
    ]
    assert minus_log_likelihood(fit.sill_m2, fit.range_m) <= min(grid) + 1e-6
