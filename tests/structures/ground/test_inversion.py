"""Layers from curves: exact ones, noisy ones, and what the covariance says of the depth."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import least_squares
from scipy.stats import binom

from structures.ground.inversion import Fit, fewest_layers, invert
from structures.ground.resistivity import apparent_resistivity, spread
from structures.ground.sounding_curve import curve, whitened_residual

NO_FACTORS = 1e-6  # log sd of a segment factor that is held at 1


def depth_sd_m(fit, *, known=()):
    """Standard deviation of the deepest boundary from the covariance of the logarithms."""
    free = [k for k in range(len(fit.covariance)) if k not in known]
    covariance = fit.covariance
    if known:
        covariance = np.linalg.inv(np.linalg.inv(covariance)[np.ix_(free, free)])
    slope = np.concatenate([np.zeros(fit.resistivity_ohm_m.size), fit.thickness_m])[free]
    return float(np.sqrt(slope @ covariance @ slope))


@pytest.mark.parametrize(
    ("rho", "h"),
    [
        ((100, 10), (5,)),
        ((60, 900), (4,)),
        ((200, 40, 1000), (2, 6)),
        ((200, 40, 1000), (2, 13)),
        ((200, 40, 1000), (2, 2)),
        ((50, 300, 20, 2000), (1, 4, 8)),
        ((200, 40, 150, 1000), (2, 6, 3)),
    ],
)
def test_a_curve_without_noise_gives_its_model_back(make_sounding, rho, h):
    """Oracle: the model the curve was made from, parameters to 1e-3 (handbook 2)."""
    fit = invert(curve(make_sounding(rho, h)), len(rho), rng=np.random.default_rng(1))
    np.testing.assert_allclose(fit.resistivity_ohm_m, rho, rtol=1e-3)
    np.testing.assert_allclose(fit.thickness_m, h, rtol=1e-3)


@pytest.mark.parametrize(("h", "depth_m"), [((2, 6, 3), 8.88), ((2, 3, 3), 6.26)])
def test_weathered_rock_is_left_out_by_three_layers(make_sounding, h, depth_m):
    """Oracle: handbook 2.11; three layers fit 200/40/150/1000 and call rock too shallow."""
    fit = invert(curve(make_sounding((200, 40, 150, 1000), h)), 3, rng=np.random.default_rng(1))
    assert fit.chi_square_per_degree < 0.05
    assert fit.thickness_m.sum() == pytest.approx(depth_m, abs=0.006)


def test_covariance_gives_the_attainable_accuracy(make_sounding, sounding_oracle):
    """Oracle: handbook 2, table of attainable accuracy at 3 %, half a unit of its last digit."""
    for row in sounding_oracle["depth_sd_m"]["rows"]:
        made = make_sounding((200, 40, 1000), (2, row["depth_m"] - 2))
        fit = invert(curve(made, segment_sd=NO_FACTORS), 3, rng=np.random.default_rng(1))
        assert depth_sd_m(fit) == pytest.approx(row["sd_m"], abs=0.005)
        # The second unknown is ln of the resistivity of the saturated layer.
        known = depth_sd_m(fit, known=(1,))
        assert known == pytest.approx(row["sd_with_saturated_layer_known_m"], abs=0.005)


def test_a_noisy_curve_is_fitted_as_a_general_solver_does(make_sounding, field_spread):
    """Oracle: scipy.optimize.least_squares from the true model, its optimum and J'J."""
    rng = np.random.default_rng(11)
    readings = curve(
        make_sounding((200, 40, 1000), (2, 6), log_error=0.03 * rng.standard_normal(20))
    )
    prepared = spread(*field_spread)

    def residual(unknowns):
        computed = apparent_resistivity(prepared, *np.split(np.exp(unknowns[None, :]), [3], axis=1))
        return whitened_residual(readings, computed)[0]

    solved = least_squares(residual, np.log([200, 40, 1000, 2, 6]), x_scale="jac", xtol=1e-12)
    fit = invert(readings, 3, rng=np.random.default_rng(1))
    assert fit.chi_square == pytest.approx(2 * solved.cost, rel=1e-6)
    found = np.log([*fit.resistivity_ohm_m, *fit.thickness_m])
    np.testing.assert_allclose(found, solved.x, atol=1e-3)
    np.testing.assert_allclose(
        fit.covariance, np.linalg.inv(solved.jac.T @ solved.jac), rtol=0.02, atol=1e-5
    )
    np.testing.assert_allclose(
        fit.computed_ohm_m,
        apparent_resistivity(prepared, fit.resistivity_ohm_m, fit.thickness_m),
        rtol=1e-12,
    )


def test_every_seed_finds_the_same_optimum(make_sounding):
    """Law: the best of eight starts does not hang on the seed."""
    rng = np.random.default_rng(5)
    readings = curve(
        make_sounding((200, 40, 1000), (2, 6), log_error=0.03 * rng.standard_normal(20))
    )
    found = [invert(readings, 3, rng=np.random.default_rng(seed)).chi_square for seed in range(8)]
    assert found == pytest.approx([found[0]] * 8, rel=1e-6)


def test_a_direction_the_curve_does_not_see_has_a_huge_variance(make_sounding):
    """Law: two layers fitted with three leave one boundary free, and nothing overflows."""
    fit = invert(curve(make_sounding((100, 10), (5,))), 3, rng=np.random.default_rng(1))
    assert fit.chi_square < 1e-6
    assert np.linalg.eigvalsh(fit.covariance)[-1] > 1e3


def made_fit(layers, chi_square_per_degree):
    ones = np.ones(layers)
    unknowns = 2 * layers - 1
    return Fit(ones, ones[1:], np.ones(20), 10 * chi_square_per_degree, 10, np.eye(unknowns))


def test_the_fewest_layers_that_pass_are_chosen():
    """Oracle: handbook 2.7, read off the list; the limit itself does not pass."""
    two, three, four = made_fit(2, 1.5), made_fit(3, 1.4), made_fit(4, 0.9)
    assert fewest_layers([two, three, four]) is three
    assert fewest_layers([two, three, four], limit=1.2) is four
    assert fewest_layers([two]) is None


def test_more_unknowns_than_readings_are_a_wrong_call(make_sounding):
    short = (np.array([2.0, 5.0, 10.0]), np.array([0.5, 0.5, 0.5]))
    readings = curve(make_sounding((100, 10), (5,), spacing=short))
    with pytest.raises(ValueError, match="3 readings do not carry 2 layers"):
        invert(readings, 2, rng=np.random.default_rng(1))


@pytest.mark.benchmark
@pytest.mark.parametrize("segment_sd", [NO_FACTORS, 0.05])
@pytest.mark.parametrize(("depth_m", "sd_m"), [(8, 0.76), (15, 0.73)])
def test_a_hundred_noisy_copies(make_sounding, field_spread, depth_m, sd_m, segment_sd):
    """Oracle: handbook 2, acceptance limits; "95 of 100" within what chance allows (1 in 1000).

    Segment factors are drawn where the fit allows for them.
    """
    rng = np.random.default_rng(2024)
    segment = np.unique(field_spread[1], return_inverse=True)[1]
    depths, chi_squares = [], []
    for _ in range(100):
        factors = np.concatenate([[0.0], segment_sd * rng.standard_normal(2)])
        error = 0.03 * rng.standard_normal(20) + factors[segment]
        made = make_sounding((200, 40, 1000), (2, depth_m - 2), log_error=error)
        fit = invert(curve(made, segment_sd=segment_sd), 3, rng=rng)
        assert fit.degrees == 15
        depths.append(fit.thickness_m.sum())
        chi_squares.append(fit.chi_square_per_degree)
    close = np.abs(np.array(depths) - depth_m) <= 2.5 * sd_m
    assert close.sum() >= 95
    assert 0.85 <= np.mean(chi_squares) <= 1.15
    usual = (np.array(chi_squares) > 0.42) & (np.array(chi_squares) < 1.83)
    assert usual.sum() >= binom.ppf(0.001, 100, 0.95)
