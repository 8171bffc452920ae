"""The prior of layers: what is drawn is what is printed, and the density fits the draws."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.stats import binom, kstest, uniform

from structures.ground.layer_prior import (
    Prior,
    RockRule,
    SaturatedSand,
    base_rock_share,
    deepest_boundary_m,
    draw_models,
    log_density,
    prior_for,
    shows_rock,
)

DRAWS = 20_000


@pytest.mark.parametrize("layers", [2, 3, 4])
def test_draws_keep_the_printed_ranges(layers):
    """Oracle: handbook 2.7, the ranges and the 85 % (binomial, 1 in 1000 either side)."""
    prior = prior_for(100.0)
    drawn = draw_models(prior, layers, DRAWS, np.random.default_rng(4))
    rho, h = np.exp(drawn[:, :layers]), np.exp(drawn[:, layers:])
    assert drawn.shape == (DRAWS, 2 * layers - 1)
    assert 20 <= rho[:, :-1].min() <= rho[:, :-1].max() <= 1500
    assert 50 <= rho[:, -1].min() <= rho[:, -1].max() <= 6000
    assert 0.5 <= h[:, 0].min() <= h[:, 0].max() <= (35 if layers == 2 else 6)
    if layers > 2:
        assert 1 <= h[:, 1:].min() <= h[:, 1:].max() <= 25
    assert 1 <= h.sum(axis=1).min() <= h.sum(axis=1).max() <= 100 / 3
    rock = (rho[:, -1] >= 300) & (rho[:, -1] >= 3 * rho[:, -2])
    np.testing.assert_array_equal(rock, shows_rock(prior, drawn, layers))
    low, high = binom.ppf([0.001, 0.999], DRAWS, 0.85)
    assert low <= rock.sum() <= high


def test_the_thickness_of_two_layers_is_log_uniform():
    """Oracle: Kolmogorov-Smirnov against the uniform law of ln thickness between its limits."""
    drawn = draw_models(prior_for(100.0), 2, DRAWS, np.random.default_rng(5))
    low, high = np.log(1.0), np.log(100 / 3)
    assert kstest(drawn[:, 2], uniform(low, high - low).cdf).pvalue > 0.001


def test_base_share_of_rock():
    """Oracle: adaptive quadrature over the layer above."""

    def share(above):
        limit = max(np.log(300), above + np.log(3))
        return (np.log(6000) - limit) / (np.log(6000) - np.log(50))

    low, high = np.log(20), np.log(1500)
    expected = quad(share, low, high, points=[np.log(100)])[0] / (high - low)
    assert base_rock_share(prior_for(100.0)) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("layers", [2, 3, 4])
def test_density_averages_to_one_over_plain_draws(layers):
    """Law: over plain log-uniform draws with allowed depths, mean density 1, rock share 0.85."""
    prior = prior_for(100.0)
    rng = np.random.default_rng(6)
    low = np.log([20] * (layers - 1) + [50])
    high = np.log([1500] * (layers - 1) + [6000])
    ends = np.log(prior.thickness_ranges_m(layers))
    plain = np.concatenate(
        [
            rng.uniform(low, high, size=(DRAWS, layers)),
            rng.uniform(ends[:, 0], ends[:, 1], size=(DRAWS, layers - 1)),
        ],
        axis=1,
    )
    depth = deepest_boundary_m(plain, layers)
    plain = plain[(depth >= 1) & (depth <= 100 / 3)]
    density = np.exp(log_density(prior, layers, plain))
    error = 4 * density.std() / np.sqrt(density.size)
    assert density.mean() == pytest.approx(1.0, abs=error)
    rock = density * shows_rock(prior, plain, layers)
    assert rock.mean() == pytest.approx(0.85, abs=4 * rock.std() / np.sqrt(rock.size))


@given(place=st.integers(0, 4), way=st.sampled_from([-1.0, 1.0]), past=st.floats(0.001, 3.0))
def test_density_ends_at_the_ranges(place, way, past):
    """Law: just past any range the density is nil."""
    prior = prior_for(300.0)
    low = np.log([20, 20, 50, 0.5, 1])
    high = np.log([1500, 1500, 6000, 6, 25])
    model = np.log([200, 40, 1000, 2, 6])[None, :]
    assert np.isfinite(log_density(prior, 3, model)).all()
    model[0, place] = (high if way > 0 else low)[place] + way * past
    assert log_density(prior, 3, model)[0] == -np.inf


def test_density_ends_at_the_deepest_boundary():
    """Oracle: 6 + 25 m is under 33.3 m, but over a third of 90 m."""
    model = np.log([[200, 40, 1000, 6, 25]])
    assert np.isfinite(log_density(prior_for(100.0), 3, model)).all()
    assert log_density(prior_for(90.0), 3, model)[0] == -np.inf


def test_greatest_depth_is_the_lesser_of_spread_and_thicknesses():
    """Oracle: hand sum, 6 + 25 + 25 m for four layers; a third of 100 m."""
    assert prior_for(400.0).greatest_depth_m == pytest.approx(56.0)
    assert prior_for(100.0).greatest_depth_m == pytest.approx(100 / 3)


def test_the_prior_says_itself_in_words():
    """Oracle: handbook 2.7 read beside the words."""
    prior = prior_for(100.0, saturated_sand=SaturatedSand(42.0))
    assert prior.sentences() == (
        "Number of layers: 2 layers 0.25, 3 layers 0.60, 4 layers 0.15.",
        "Resistivity, uniform in the logarithm: soil 20 to 1500, deepest layer 50 to 6000 ohm m.",
        "Thickness, uniform in the logarithm: first layer 0.5 to 6 m, others 1 to 25 m.",
        "Where there are only two layers the first has 0.5 to 35 m.",
        "Depth of the deepest boundary: 1 to 33.33 m.",
        "Rock (300 ohm m, 3 times the layer above) in 85 % of the prior.",
        "Least resistive soil: 42 ohm m within 10 %, measured.",
    )


def test_a_prior_without_room_for_its_layers_is_a_wrong_call():
    with pytest.raises(ValueError, match="leaves no room"):
        Prior((1.0, 2.0))


def test_a_prior_without_a_choice_is_a_wrong_call():
    """Oracle: no layer of the prior reaches 10000 ohm m."""
    prior = prior_for(100.0, rock=RockRule(least_ohm_m=10_000))
    with pytest.raises(ValueError, match="no choice"):
        draw_models(prior, 2, 10, np.random.default_rng(1))
