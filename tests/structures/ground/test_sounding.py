"""What a sounding answers, and every reason it has to refuse."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from structures.ground.inversion import invert
from structures.ground.layer_prior import prior_for
from structures.ground.resistivity import apparent_resistivity, spread
from structures.ground.sounding import SEED, Interpretation, interpret
from structures.ground.sounding_curve import curve, whitened_residual
from structures.ground.sounding_refusals import Refusal
from structures.intake.practice import Practice

DEPTHS = ("rock_depth_m", "rock_depth_low_m", "rock_depth_high_m", "rock_depth_sd_m")


@pytest.fixture(scope="module")
def noisy(make_sounding):
    """One noisy copy of the model of table 2: rock at 8 m."""
    error = 0.03 * np.random.default_rng(1).standard_normal(20)
    return make_sounding((200, 40, 1000), (2, 6), log_error=error)


@pytest.fixture(scope="module")
def read(noisy):
    return interpret(noisy)


def test_the_truth_lies_in_the_range(read):
    """Oracle: the model the curve was made from; rock at 8 m under three layers."""
    assert read.refusal is None
    assert read.rock_depth_low_m < 8.0 < read.rock_depth_high_m
    assert read.rock_depth_low_m < read.rock_depth_m < read.rock_depth_high_m
    assert read.rock_share >= 0.90
    assert [layer.thickness_m is None for layer in read.layers] == [False, False, True]


def test_what_is_stated_with_the_result(read, noisy):
    """Oracle: the sounding handed in, the defaults of handbook 2.7."""
    assert (read.offset_m, read.label, read.seed) == (12.0, "made", SEED)
    assert read.noise == pytest.approx([0.03] * 20)
    assert read.prior == prior_for(100.0)
    assert "2 to 4 layers" in read.method
    assert read.covariance.shape == (5, 5)
    assert sum(weight for _, weight in read.layer_weight) == pytest.approx(1.0)


def test_misfit_is_that_of_the_printed_curve(read, noisy, field_spread):
    """Oracle: root mean square of the log ratio; the curve is the printed model's, by segment."""
    observed = np.array([reading.apparent_resistivity_ohm_m for reading in noisy.readings])
    ratio = np.log(observed / read.computed_ohm_m)
    assert read.misfit_percent == pytest.approx(100 * np.sqrt(np.mean(ratio**2)))
    rho = [layer.resistivity_ohm_m for layer in read.layers]
    h = [layer.thickness_m for layer in read.layers[:-1]]
    model = apparent_resistivity(spread(*field_spread), rho, h)
    by_segment = {factor.mn2_m: factor.factor for factor in read.segment_factors}
    expected = [by_segment[mn2] for mn2 in field_spread[1]]
    assert read.computed_ohm_m / model == pytest.approx(expected)


def test_equivalent_models_fit_and_spread_over_the_range(read, noisy, field_spread):
    """Oracle: chi-square of each worked out anew; the limit of handbook 2.7."""
    readings = curve(noisy)
    depths = []
    for layers in read.equivalent:
        rho = [layer.resistivity_ohm_m for layer in layers]
        h = [layer.thickness_m for layer in layers[:-1]]
        computed = apparent_resistivity(spread(*field_spread), rho, h)[None, :]
        degrees = 20 - (2 * len(layers) - 1)
        assert (whitened_residual(readings, computed) ** 2).sum() < 1.5 * degrees * 1.001
        depths.append(sum(h))
    assert len(depths) == 5
    assert depths == sorted(depths)
    assert depths[-1] - depths[0] > 0.5 * (read.rock_depth_high_m - read.rock_depth_low_m)


def test_one_seed_gives_the_same_digits(read, noisy):
    """Law: the same seed, the same result."""
    again = interpret(noisy)
    assert [getattr(again, name) for name in DEPTHS] == [getattr(read, name) for name in DEPTHS]
    assert (again.layers, again.equivalent) == (read.layers, read.equivalent)


def test_a_wenner_sounding_is_read_with_its_own_spread(make_sounding):
    """Oracle: the model the curve was made from; one segment, though MN grows with AB.

    Rock at 20 m lies below a fifth of the widest AB/2 of 90 m (handbook 2.9), which is said.
    """
    spacing = np.array([1, 1.5, 2, 3, 4, 6, 8, 10, 15, 20, 30, 40, 60])
    made = make_sounding(
        (200, 40, 1000), (2, 18), array="wenner", spacing=(1.5 * spacing, 0.5 * spacing)
    )
    read = interpret(made)
    assert [factor.factor for factor in read.segment_factors] == [1.0]
    assert read.rock_depth_low_m < 20.0 < read.rock_depth_high_m
    assert read.notes == ("AB/2 stopped at 90 m. It says little about rock below 18 m.",)


def refused(sounding, **options):
    """Interpret, insist that no depth is given, and hand back the refusal."""
    read = interpret(sounding, **options)
    assert [getattr(read, name) for name in DEPTHS] == [None] * 4
    return read, read.refusal


def test_repeats_of_a_field_sounding_disagree(field_soundings):
    """Oracle: 407.28 / 102.23 in the field book at AB/2 40 m, a factor of 4."""
    read, refusal = refused(field_soundings["mawlamyine_1"])
    assert refusal.code == "segments-disagree"
    assert "at AB/2 40 m the readings with MN/2 1 and 5 m differ by 298 %" in refusal.sentence
    assert read.layers == ()


def test_a_field_curve_that_no_model_fits(field_soundings):
    """Oracle: neighbours of this curve scatter by 5 %, against 3 % stated."""
    read, refusal = refused(field_soundings["aung_san_feb07"])
    assert refusal.code == "not-interpretable"
    assert "no model of 2 to 4 layers passes" in refusal.sentence
    assert read.layers == ()


def test_soil_to_the_end_of_the_spread(make_sounding):
    """Oracle: handbook 2.10; 60 ohm m is no rock. Layers are still given."""
    read, refusal = refused(make_sounding((200, 60), (4,)))
    assert refusal.code == "no-rock"
    assert "in 0 % of the models that fit, 90 % is asked" in refusal.sentence
    assert "weathered rock" in refusal.sentence
    assert read.rock_share < 0.01
    assert [layer.resistivity_ohm_m for layer in read.layers] == pytest.approx([200, 60], rel=0.01)


def test_ground_that_the_prior_holds_impossible(make_sounding):
    """Oracle: 10 ohm m lies under the 20 to 1500 of soil."""
    assert refused(make_sounding((100, 10), (5,)))[1].code == "outside-prior"


def test_rock_deeper_than_the_prior_reaches(make_sounding):
    """Oracle: 60 m, over a third of 100 m; the range would be the prior's, not the curve's."""
    refusal = refused(make_sounding((200, 40, 1000), (2, 58)))[1]
    assert refusal.code == "deeper-than-prior"
    assert "60 m, deeper than the 33 m" in refusal.sentence


def test_layers_that_are_not_resolved(make_sounding):
    """Oracle: 1400, 600 and 5400 ohm m under 27 rise so alike that two layers fit within noise.

    Their boundary lies at 3.4 m, that of the model at 22.2 m.
    """
    read, refusal = refused(make_sounding((27, 1400, 600, 5400), (3.4, 9.7, 9.1)))
    assert refusal.code == "not-resolved"
    assert "rock may lie anywhere from" in refusal.sentence
    assert len(read.layers) == 2


def test_seven_readings_are_too_few(noisy):
    """Oracle: field rule, eight readings or more."""
    short = replace(noisy, readings=noisy.readings[:7])
    assert refused(short)[1] == Refusal(
        "too-few-readings",
        "only 7 readings, 8 are needed to read layers. Keep it as a note, or take the sounding again.",
    )


def test_a_short_spread_tells_nothing_of_rock(noisy):
    short = replace(noisy, readings=noisy.readings[:9])
    refusal = refused(short)[1]
    assert refusal.code == "spread-too-short"
    assert "AB/2 stopped at 10 m, 15 m is the least" in refusal.sentence


def test_a_noise_that_is_not_accepted_names_its_reading(noisy):
    """Oracle: handbook 2.7, 1 to 10 %."""
    loud = replace(noisy.readings[4], sd_percent=25.0)
    readings = (*noisy.readings[:4], loud, *noisy.readings[5:])
    refusal = refused(replace(noisy, readings=readings))[1]
    assert refusal.code == "noise-not-accepted"
    assert "reading 5 states a noise of 25 %, 1 to 10 % is accepted" in refusal.sentence


def test_a_model_outside_the_range_is_noted(make_sounding):
    """Oracle: the shown model compared with the range; a layer of 0.7 m is too thin to be seen."""
    error = 0.03 * np.random.default_rng(1).standard_normal(20)
    read = interpret(make_sounding((200, 40, 1000), (2, 0.7), log_error=error))
    shown = sum(layer.thickness_m for layer in read.layers[:-1])
    assert not read.rock_depth_low_m <= shown <= read.rock_depth_high_m
    (note,) = read.notes
    assert note.startswith("The model with the fewest layers has its deepest boundary at")


def test_a_noise_out_of_range_is_a_wrong_call(noisy):
    """Oracle: handbook 12, accepted range."""
    words = "noise of a sounding reading: 0.2, accepted 0.01 to 0.1"
    with pytest.raises(ValueError, match=words):
        interpret(noisy, noise=0.2)


def test_the_set_noise_counts_where_the_sheet_states_none(noisy):
    """Law: a reading that states 5 % is a reading that states none under a setting of 0.05."""
    stated = replace(noisy, readings=tuple(replace(one, sd_percent=5.0) for one in noisy.readings))
    loud = Practice(sounding_noise=0.05)
    by_sheet, by_setting = interpret(stated), interpret(noisy, practice=loud)
    assert by_setting.noise.tolist() == [0.05] * 20
    assert by_setting.rock_depth_m == by_sheet.rock_depth_m
    assert interpret(stated, practice=Practice(sounding_noise=0.10)).noise.tolist() == [0.05] * 20


def test_a_harder_rule_of_rock_is_the_one_that_is_asked(read, noisy):
    """Oracle: handbook 2.10; the model's deepest layer has 1000 ohm m, 25 times the layer above."""
    hard, steep = (
        Practice(rock_least_ohm_m=3000.0),
        Practice(rock_least_ratio=20.0, rock_share=0.99),
    )
    for practice in (hard, steep):
        rule = interpret(noisy, practice=practice).prior.rock
        assert (rule.least_ohm_m, rule.least_ratio, rule.share) == (
            practice.rock_least_ohm_m,
            practice.rock_least_ratio,
            practice.rock_share,
        )
    _, refusal = refused(noisy, practice=hard)
    assert refusal.code == "no-rock"
    assert "the deepest layer has 3000 ohm m" in refusal.sentence


def test_limit_segment_factor_and_starts_are_those_that_are_set(noisy, make_sounding):
    """Oracle: chi-square per degree, the prior of handbook 2.6 and the draws of the starts."""
    # Three layers with a weathered one between: two layers do not pass, three do at some limit.
    free = interpret(noisy, practice=Practice(sounding_segment_sd=0.2)).segment_factors
    held = interpret(noisy, practice=Practice(sounding_segment_sd=0.02)).segment_factors
    assert all(loose.log_sd > tight.log_sd for loose, tight in zip(free[1:], held[1:], strict=True))
    error = np.where(np.arange(20) % 2, 0.0345, -0.0345)
    uneven = make_sounding((200, 40, 1000), (2, 6), log_error=error)
    wide = interpret(uneven, practice=Practice(sounding_chi_square=2.0))
    strict = interpret(uneven, practice=Practice(sounding_chi_square=1.2))
    assert 1.2 < wide.chi_square_per_degree < 2.0
    assert "under 1.2 is asked" in strict.refusal.sentence
    rng = np.random.default_rng(SEED)
    many = invert(curve(noisy), 3, rng=rng, starts=16)
    assert many.chi_square <= invert(
        curve(noisy), 3, rng=np.random.default_rng(SEED)
    ).chi_square * (1 + 1e-6)


def test_a_result_has_a_depth_or_a_refusal():
    for contradiction in (
        {},
        {"rock_depth_m": 5.0, "refusal": Refusal("no-rock", "the curve does not show rock.")},
    ):
        with pytest.raises(ValueError, match="not both and not neither"):
            Interpretation(0.0, "made", 1, np.array([0.03]), **contradiction)
