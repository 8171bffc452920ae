"""The integer programme: its bound, the weeks it leaves out, the step of its sums."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from costing.plan.programme import Programme, benefit_step, left_packed_weeks
from costing.plan.solver import relax, search
from tests.costing.plan.seasons import (
    benefit_of,
    best_benefit,
    drawn_season,
    every_plan,
    one_season,
    one_site,
    seasons,
)

WHOLE = {"nodes": 10**6, "seconds": 20.0}


@settings(max_examples=100)
@given(seasons())
def test_the_first_bound_lies_above_the_best_plan(season):
    """Oracle: every plan tried."""
    assert Programme(season).first_bound() >= float(best_benefit(season)) - 1e-9


def test_the_first_bound_by_hand():
    """By hand: 10 of money hold A (5 for 4) and six tenths of B (4 for 10); C costs too much."""
    sites = [
        one_site("A", cost="4.00", benefit=5.0),
        one_site("B", cost="10.00", benefit=4.0),
        one_site("C", cost="11.00", benefit=9.0),
    ]
    assert Programme(one_season(*sites, budget="10.00")).first_bound() == pytest.approx(7.4)


def relaxed_bound(season):
    """Bound of the programme over weeks alone without whole numbers, by scipy's linprog."""
    pairs = [
        (n, week)
        for n, site in enumerate(season.sites)
        for week in range(site.ready_week, season.weeks + 1)
        if week + site.duration_weeks - 1 <= min(site.latest_close_week, season.weeks)
    ]
    if not pairs:
        return 0.0
    rows = [[float(k == n) for k, _ in pairs] for n in range(len(season.sites))]
    limits = [1.0] * len(season.sites)
    for week in range(1, season.weeks + 1):
        on = [first <= week < first + season.sites[n].duration_weeks for n, first in pairs]
        for limit, use in ((season.gangs, "gangs"), (season.pumps, "pumps")):
            if limit is not None:
                rows.append(
                    [
                        here * getattr(season.sites[n], use)
                        for here, (n, _) in zip(on, pairs, strict=True)
                    ]
                )
                limits.append(limit)
    for limit, use in ((season.budget, "cost"), (season.clay_m3, "clay_m3")):
        if limit is not None:
            rows.append([float(getattr(season.sites[n], use)) for n, _ in pairs])
            limits.append(float(limit))
    gains = [-season.sites[n].benefit for n, _ in pairs]
    return -linprog(gains, np.array(rows), limits, bounds=(0, 1)).fun


@settings(max_examples=60)
@given(seasons())
def test_bound_lies_between_the_best_plan_and_the_relaxation(season):
    """Oracles: every plan tried; the relaxed programme by another call of scipy."""
    programme = Programme(season)
    assume(programme.sites)
    best = float(best_benefit(season))
    answer = search(programme, {}, **WHOLE)
    relaxed = relax(programme, seconds=20.0)
    assert answer.ended
    assert best - 1e-9 <= answer.bound <= relaxed.bound + 1e-9
    assert relaxed.bound <= relaxed.optimum + 1e-6
    assert relaxed.optimum <= relaxed_bound(season) + 1e-6


@settings(max_examples=100)
@given(seasons(), st.floats(0.0, 1.0))
def test_every_better_plan_settles_as_the_prices_say(season, part):
    """Oracle: every plan tried."""
    programme = Programme(season)
    assume(programme.sites)
    relaxed = relax(programme, seconds=20.0)
    above = part * relaxed.optimum
    settled = relaxed.settled(above=above)
    for opened in every_plan(season):
        if benefit_of(season, opened) > above:
            assert all((code in opened) == inside for code, inside in settled.items())


@settings(max_examples=60)
@given(seasons())
def test_a_best_plan_opens_in_left_packed_weeks_only(season):
    """Oracle: every plan tried."""
    plans = every_plan(season)
    best = max(benefit_of(season, opened) for opened in plans)
    useful = left_packed_weeks(season, season.sites)
    assert any(
        set(opened.values()) <= useful and benefit_of(season, opened) == best for opened in plans
    )


def test_dominated_weeks_have_no_variable():
    """By hand: ready in week 1, works of 4 and 6 weeks: openings in 1, 5, 7, 9, 11 and later."""
    sites = [one_site("A", latest=20, weeks=4), one_site("B", latest=20, weeks=6)]
    season = one_season(*sites, weeks=20)
    assert left_packed_weeks(season, sites) >= {1, 5, 7, 9, 11, 13}
    assert not left_packed_weeks(season, sites) & {2, 3, 4, 6, 8, 10, 12}
    assert {week for _, week in Programme(season).starts} == {1, 5, 7, 9, 11, 13, 15, 17}


def test_a_forbidden_set_is_not_chosen_again():
    season = one_season(*(one_site(code) for code in "ABC"), gangs=3)
    programme = Programme(season)
    assert set(search(programme, {}, **WHOLE).opened) == set("ABC")
    programme.forbid("AB")
    answer = search(programme, {}, **WHOLE)
    assert (answer.bound, len(answer.opened)) == (2.0, 2)
    assert not {"A", "B"} <= set(answer.opened)


def test_what_is_settled_is_kept_or_leaves_no_plan():
    season = one_season(*(one_site(code, latest=2) for code in "ABC"), gangs=2)
    programme = Programme(season)
    assert set(search(programme, {"A": False}, **WHOLE).opened) == set("BC")
    answer = search(programme, dict.fromkeys("ABC", True), **WHOLE)
    assert (answer.opened, answer.bound, answer.ended) == (None, 0.0, True)


def test_a_programme_without_a_plan_is_a_defect_of_the_caller():
    fixed = [one_site(code, open_week=1, gangs=2) for code in "AB"]
    with pytest.raises(RuntimeError, match="no plan"):
        search(Programme(one_season(*fixed)), {}, **WHOLE)


@given(st.lists(st.integers(0, 60), min_size=1), st.sampled_from([1, 2, 4, 10, 1000]))
def test_every_sum_is_a_multiple_of_the_step(numbers, parts):
    """Law: each number is a multiple of it, and of no greater one."""
    gains = [Fraction(number, parts) for number in numbers]
    step = benefit_step(gains)
    if not any(numbers):
        assert step is None
        return
    ratios = [gain / step for gain in gains]
    assert all(ratio.denominator == 1 for ratio in ratios)
    assert np.gcd.reduce([int(ratio) for ratio in ratios]) == 1


def test_a_search_that_has_no_time_knows_the_first_bound_only():
    season = drawn_season(np.random.default_rng(1), gangs=20, money_share="0.5")
    programme = Programme(season)
    assert relax(programme, seconds=1e-6) is None
    answer = search(programme, {}, nodes=1, seconds=1e-6)
    assert (answer.opened, answer.ended, answer.timed) == (None, False, True)
    assert answer.bound == programme.first_bound()


def test_numbers_of_many_decimals_have_no_step():
    assert benefit_step([Fraction(1, 3)]) is None
