"""Greedy plans: in the order of what a site brings for what it takes."""

from fractions import Fraction

from hypothesis import given

from costing.plan.greedy import gang_weeks, greedy_plan, greedy_plans, share_of_limits
from tests.costing.plan.seasons import keeps_limits, one_season, one_site, seasons


@given(seasons())
def test_greedy_plans_keep_all_limits(season):
    """Oracle: limits read off the definition."""
    plans = list(greedy_plans(season))
    assert len(plans) == 3
    assert all(keeps_limits(season, stock.opened) for stock in plans)


def test_first_by_benefit_for_a_gang_week():
    """By hand: 6/2, 9/4 and 4/1 for a gang-week: C, then A; B finds no gang."""
    season = one_season(
        one_site("A", latest=3, weeks=2, benefit=6.0),
        one_site("B", latest=3, weeks=2, gangs=2, benefit=9.0),
        one_site("C", latest=3, weeks=1, benefit=4.0),
        weeks=3,
        gangs=1,
    )
    assert greedy_plan(season, gang_weeks).opened == {"C": 1, "A": 2}


def test_equal_sites_come_by_code():
    season = one_season(*(one_site(code, latest=2) for code in "CAB"), gangs=1)
    assert greedy_plan(season, gang_weeks).opened == {"A": 1}


def test_fixed_openings_come_first():
    season = one_season(
        one_site("A", benefit=9.0), one_site("B", benefit=0.0, open_week=2), gangs=1
    )
    assert greedy_plan(season, gang_weeks).opened == {"B": 2, "A": 4}


def test_share_of_all_limits():
    """By hand: 30/100 of money, 2 gangs in 3 of 10 weeks of 4, a pump in 3 of 10 weeks of 2."""
    site = one_site("A", weeks=3, gangs=2, cost="30.00", pumps=1)
    season = one_season(site, weeks=10, gangs=4, budget="100.00", pumps=2)
    expected = Fraction(30, 100) + Fraction(6, 40) + Fraction(3, 20)
    assert share_of_limits(season, site) == expected
