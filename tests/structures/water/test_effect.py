"""The effect of a wall on its wells. Oracles: known effects of invented programmes, hand sums.

Binomial limits: of 200 programmes a method that holds the truth 9 times in 10 holds it in 168 to
192 of 200 with all but 1 run in 170 (84 to 96 %); of 60, in 47 to 60 with all but 1 in 260.
"""

from dataclasses import replace
from datetime import date

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.stats import binom

from structures.life.verdict import from_readings
from structures.water.effect import measure_effect
from structures.water.rules import EffectRules
from tests.structures.water.programmes import EFFECT_M, programme

FAST = 60
ALL = 200


def found_of(seed, **options):
    readings, completed = programme(seed, **options)
    return measure_effect(readings, completed)


def inside(count, first_seed, **options):
    """How many intervals hold the known effect, and the mean error."""
    found = [found_of(first_seed + place, **options).estimate for place in range(count)]
    hits = sum(one.low_m <= EFFECT_M <= one.high_m for one in found)
    return hits, float(np.mean([one.effect_m - EFFECT_M for one in found]))


def test_the_limits_of_the_fast_trial():
    """Oracle: the binomial law (scipy) with the nominal 90 %."""
    assert binom.cdf(46, FAST, 0.90) < 1 / 260
    assert binom.cdf(167, ALL, 0.90) + binom.sf(192, ALL, 0.90) < 1 / 100


def test_sixty_intervals_hold_the_known_effect():
    """Oracle: the effect put in; 47 of 60 at least, no bias beyond three errors of the mean."""
    hits, bias_m = inside(FAST, 3000, coefficient=0.3)
    assert hits >= 47
    assert abs(bias_m) < 0.04


@pytest.mark.slow
@pytest.mark.parametrize(
    ("coefficient", "least", "most"),
    [(0.0, 0.84, 0.96), (0.3, 0.84, 0.96), (0.6, 0.84, 0.96), (0.8, 0.78, 0.96)],
)
def test_two_hundred_intervals_hold_the_known_effect(coefficient, least, most):
    """Oracle: the effect put in, with gaps and pumping; a little narrow at 0.8, as measured."""
    hits, bias_m = inside(ALL, 1000, coefficient=coefficient)
    assert least <= hits / ALL <= most
    assert abs(bias_m) < 0.03


@pytest.mark.slow
@pytest.mark.parametrize("more_swing_m", [0.0, 0.5])
def test_two_hundred_intervals_hold_it_where_wells_go_dry(more_swing_m):
    """Oracle: the effect put in; affected wells dry in a fifth or more of the months before."""
    options = {"coefficient": 0.6, "dry": 0.3, "more_swing_m": more_swing_m}
    hits, bias_m = inside(ALL, 5000, **options)
    assert 0.84 <= hits / ALL <= 0.96
    assert abs(bias_m) < 0.04


def test_dry_wells_are_fitted_and_said():
    found = found_of(11, coefficient=0.3, dry=0.35)
    assert found.pairs.dry_share > 1 / 20
    assert "effect-dry-fitted" in [one.code for one in found.cautions]
    assert found.estimate.pooled is None  # plain means would hide a gain and are not shown
    assert found.rivals.change_affected_m is None
    assert found.estimate.low_m < EFFECT_M < found.estimate.high_m


def test_a_few_dry_pairs_are_left_out_and_said():
    found = found_of(12, coefficient=0.3, dry=0.05)
    assert 0 < found.pairs.dry_share <= 1 / 20
    assert "effect-dry-left-out" in [one.code for one in found.cautions]
    assert dict(found.left_out)["dry, in 1 of 20 pairs or fewer"] > 0


def test_the_seed_gives_the_same_digits():
    readings, completed = programme(11, coefficient=0.3, dry=0.35)
    one, two, other = (
        measure_effect(readings, completed, seed=seed).estimate for seed in (5, 5, 6)
    )
    assert (one.effect_m, one.low_m) == (two.effect_m, two.low_m)
    assert one.low_m != other.low_m
    assert one.low_m == pytest.approx(other.low_m, abs=0.05)


def test_a_clear_effect_may_be_called_one_and_no_effect_may_not():
    clear = found_of(1, coefficient=0.3, effect_m=1.0)
    assert clear.is_effect
    assert from_readings(clear.measured, clear.limits).verdict == "holds"
    none = found_of(2, coefficient=0.0, effect_m=0.0)
    assert not none.is_effect
    assert from_readings(none.measured, none.limits).verdict == "does not hold"


def test_what_is_missing_is_named_and_nothing_is_measured():
    readings, completed = programme(1, coefficient=0.3)
    lone = [one for one in readings if one.role == "affected"]
    assert_unknown(
        measure_effect(lone, completed),
        {"effect-no-control", "effect-too-short", "effect-few-pairs"},
    )
    controls = [one for one in readings if one.role == "control"]
    assert_unknown(
        measure_effect(controls, completed),
        {"effect-no-affected", "effect-too-short", "effect-few-pairs"},
    )
    assert_unknown(
        measure_effect(readings, completed, rules=EffectRules(least_full_years=4)),
        {"effect-too-short"},
    )
    assert_unknown(
        measure_effect([], completed),
        {"effect-no-affected", "effect-no-control", "effect-too-short", "effect-few-pairs"},
    )


def assert_unknown(found, codes):
    assert {one.code for one in found.cautions} == codes
    assert found.estimate is None
    assert not found.is_effect
    assert from_readings(found.measured, found.limits).verdict == "not known"


def test_few_pairs_give_the_pooled_interval_and_say_so():
    """Oracle: Student's t by hand on the pairs that are left, 2 and 1 readings a month apart."""
    readings, completed = programme(4, coefficient=0.0, years=(1, 1), gaps=0.0, pumping=0.0)
    readings = [one for one in readings if one.read_at.month not in {2, 4}]  # 10 of 12 months
    found = measure_effect(readings, completed, rules=EffectRules(least_full_years=1))
    assert "effect-serial-not-judged" in [one.code for one in found.cautions]
    assert found.counts == (10, 10)
    pairs = found.pairs
    before, after = (pairs.difference_m[pairs.after == side] for side in (False, True))
    spread = ((before.var(ddof=1) * 9 + after.var(ddof=1) * 9) / 18 * 0.2) ** 0.5
    assert found.estimate.effect_m == pytest.approx(after.mean() - before.mean())
    half = found.estimate.high_m - found.estimate.effect_m
    assert half == pytest.approx(1.7341 * spread, rel=1e-4)  # t of 0.95 at 18, printed tables
    assert found.estimate.smallest_seen_m == pytest.approx((1.7341 + 0.8620) * spread, rel=1e-3)


def test_every_reading_is_taken_or_has_a_reason():
    """A law: taken and left out make all readings."""
    for seed, options in ((1, {}), (2, {"dry": 0.05}), (3, {"dry": 0.4}), (4, {"gaps": 0.5})):
        readings, completed = programme(seed, coefficient=0.3, **options)
        found = measure_effect(readings, completed)
        assert found.taken + sum(count for _, count in found.left_out) == len(readings)


@settings(max_examples=20)  # each measures a whole programme
@given(st.floats(-3, 3), st.integers(-30, 30), st.floats(-30, 30))
def test_what_all_wells_share_is_no_effect(rise_m, months, height_m):
    """A law: a rise of all wells from any month on, and any datum of a well, change no digit."""
    readings, completed = PLAIN
    years, rest = divmod(completed.month - 1 + months, 12)
    day = date(completed.year + years, rest + 1, 1)
    moved = [
        replace(
            one,
            depth_m=one.depth_m - (rise_m if one.day >= day else 0.0),
            height_m=one.height_m + (height_m if one.well == "A1" else 0.0),
        )
        for one in readings
    ]
    assert measure_effect(moved, completed).estimate.effect_m == pytest.approx(
        PLAIN_EFFECT_M, abs=1e-6
    )


PLAIN = programme(21, coefficient=0.3, gaps=0.0, pumping=0.0)
PLAIN_EFFECT_M = measure_effect(*PLAIN).estimate.effect_m


def test_a_moved_mark_that_is_followed_changes_nothing_and_is_said():
    """Oracle: a parapet raised by 0.60 m on one of three wells, heights given anew."""
    readings, completed = PLAIN
    raised = [
        replace(one, depth_m=one.depth_m + 0.6, height_m=one.height_m + 0.6)
        if one.well == "A1" and one.day >= date(2019, 1, 1)
        else one
        for one in readings
    ]
    found = measure_effect(raised, completed)
    assert found.estimate.effect_m == pytest.approx(PLAIN_EFFECT_M, abs=1e-6)
    (mark,) = found.rivals.marks
    assert (mark.well, mark.day.strftime("%Y-%m")) == ("A1", "2019-01")
    assert mark.change_m == pytest.approx(0.6)
    assert found.rivals.mark_share_m < 0.0  # unfollowed, the water would seem to have fallen
    assert "effect-mark-moved" in [one.code for one in found.cautions]


def test_a_mark_of_all_affected_wells_shows_its_whole_share():
    """Oracle: unfollowed, 0.60 m on every affected well over the last half of the time after."""
    readings, completed = PLAIN
    since = date(2020, 1, 1)  # completed 2018-06-01, read to 2021-05
    raised = [
        replace(one, depth_m=one.depth_m + 0.6, height_m=one.height_m + 0.6)
        if one.role == "affected" and one.day >= since
        else one
        for one in readings
    ]
    found = measure_effect(raised, completed)
    later = np.array([day >= since for day in found.pairs.days])[found.pairs.after]
    assert found.rivals.mark_share_m == pytest.approx(-0.6 * later.mean(), abs=1e-6)
    assert found.rivals.mark_in_effect_m == pytest.approx(-0.6 * later.mean(), abs=1e-6)


def test_a_step_that_is_not_the_walls_is_held():
    """Oracle: a tape cut by 0.80 m that all affected wells are read with, two years on."""
    readings, completed = programme(31, coefficient=0.0, gaps=0.0, pumping=0.0)
    cut = [
        replace(one, depth_m=one.depth_m - 0.8)
        if one.role == "affected" and one.day >= date(2020, 6, 1)
        else one
        for one in readings
    ]
    found = measure_effect(cut, completed)
    assert found.rivals.jump.day == date(2020, 6, 1)
    assert found.rivals.jump.size_m == pytest.approx(0.8, abs=0.15)
    assert "effect-jump" in [one.code for one in found.cautions]


def test_a_gain_that_comes_with_the_first_rains_is_that_of_the_filled_ground():
    """Oracle: the effect put in, which comes only with the rains four months after completion."""
    readings, completed = programme(41, coefficient=0.0, effect_m=1.0)
    slow = [
        replace(one, depth_m=one.depth_m + 1.0)
        if one.role == "affected" and completed <= one.day < date(2018, 10, 1)
        else one
        for one in readings
    ]
    found = measure_effect(slow, completed)
    assert "effect-first-filling" in [one.code for one in found.cautions]
    estimate, filling = found.estimate, found.estimate.filling
    assert estimate.low_m < 1.0 < estimate.high_m
    assert (filling.until, filling.pairs) == (date(2018, 10, 1), 4)
    width_m = filling.one_step_high_m - filling.one_step_low_m
    assert estimate.high_m - estimate.low_m < width_m
    assert filling.one_step_m < estimate.effect_m


def test_a_wall_that_fills_at_once_shows_no_filling():
    """Oracle: the level of surety, 1 in 100 on one side; of 40 programmes 3 at most."""
    found = [found_of(7000 + seed, coefficient=0.3).estimate.filling for seed in range(40)]
    assert sum(one is not None for one in found) <= 3


def test_a_trend_before_is_said():
    """Oracle: affected wells that drift by 0.2 m a year all along, no wall at all."""
    readings, completed = programme(51, coefficient=0.0, effect_m=0.0, gaps=0.0)
    start = date(2015, 6, 1)
    drifting = [
        replace(one, depth_m=one.depth_m - 0.2 * (one.day - start).days / 365.25)
        if one.role == "affected"
        else one
        for one in readings
    ]
    found = measure_effect(drifting, completed)
    assert found.rivals.trend.m_per_year == pytest.approx(0.2, abs=0.06)
    assert "effect-trend-before" in [one.code for one in found.cautions]
