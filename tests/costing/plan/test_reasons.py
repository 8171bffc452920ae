"""Why a site is left out: each sentence is checked against the plan it was said of."""

import re
from decimal import Decimal

import pytest
from hypothesis import given, settings

from costing.plan.reasons import reasons
from costing.plan.rounds import plan_season
from costing.plan.stock import Stock
from tests.costing.plan.seasons import one_season, one_site, seasons

WINDOW = re.compile(
    r"ready week (\d+) \+ (\d+) weeks? passes week (\d+)(, the last of the season)?"
)
MONEY = re.compile(r"budget: ([\d.]+) left, ([\d.]+) needed")
CLAY = re.compile(r"clay: ([\d.]+) m3 left, ([\d.]+) m3 needed")
NEVER = re.compile(r"needs (\d+) (gang|pump)s? at once, there (?:is|are) (\d+) (?:gang|pump)s?")
ALL_TAKEN = re.compile(
    r"(?:no|fewer than (\d+)) (gang|pump)s? free between week (\d+) and (\d+): taken by .+"
)
NO_RUN = re.compile(r"no (?:week|\d+ weeks on end) with (.+) free between week (\d+) and (\d+): .+")
NOTHING = "benefit 0: it fits, and nothing is gained by it"


def reason(season, code):
    return {one.site: one.why for one in plan_season(season).left_out}[code]


def free_in(season, plan, use, week):
    uses = {site.site: getattr(site, use) for site in season.sites}
    taken = sum(uses[one.site] for one in plan.chosen if one.open_week <= week <= one.close_week)
    return getattr(season, use) - taken


def is_true(season, plan, site, sentence):
    """Judge one sentence by the plan alone."""
    chosen = [one for one in season.sites if one.site in {two.site for two in plan.chosen}]
    if found := WINDOW.fullmatch(sentence):
        ready, weeks, end = map(int, found.groups()[:3])
        given = (site.ready_week, site.duration_weeks, min(site.latest_close_week, season.weeks))
        last = bool(found[4]) == (season.weeks < site.latest_close_week)
        return (ready, weeks, end) == given and ready + weeks - 1 > end and last
    if found := MONEY.fullmatch(sentence):
        left = season.budget - sum(one.cost for one in chosen)
        return tuple(map(Decimal, found.groups())) == (left, site.cost) and left < site.cost
    if found := CLAY.fullmatch(sentence):
        left = season.clay_m3 - sum(one.clay_m3 for one in chosen)
        return tuple(map(Decimal, found.groups())) == (left, site.clay_m3) and left < site.clay_m3
    if found := NEVER.fullmatch(sentence):
        need, there = getattr(site, f"{found[2]}s"), getattr(season, f"{found[2]}s")
        return (int(found[1]), int(found[3])) == (need, there) and need > there
    if found := ALL_TAKEN.fullmatch(sentence):
        weeks = range(int(found[3]), int(found[4]) + 1)
        need = int(found[1] or 1)
        use = f"{found[2]}s"
        return need == getattr(site, use) and all(
            free_in(season, plan, use, week) < need for week in weeks
        )
    if found := NO_RUN.fullmatch(sentence):
        needs = {f"{kind}s": int(n) for n, kind in re.findall(r"(\d+) (gang|pump)", found[1])}
        starts = range(int(found[2]), int(found[3]) - site.duration_weeks + 2)
        return not any(
            all(
                free_in(season, plan, use, week) >= need
                for use, need in needs.items()
                for week in range(start, start + site.duration_weeks)
            )
            for start in starts
        )
    return sentence == NOTHING and site.benefit == 0


@settings(max_examples=200)
@given(seasons(most_sites=8, most_weeks=8, codes="ABCDEFGH"))
def test_every_reason_is_true(season):
    """Oracle: limits and dates read off the definition, sentence by sentence."""
    plan = plan_season(season)
    by_code = {site.site: site for site in season.sites}
    for one in plan.left_out:
        for sentence in re.split("; (?!too few)", one.why):
            assert is_true(season, plan, by_code[one.site], sentence), one


def test_a_window_that_is_too_short():
    season = one_season(one_site("A", ready=20, latest=24, weeks=6), weeks=30)
    assert reason(season, "A") == "ready week 20 + 6 weeks passes week 24"


def test_a_season_that_ends_before():
    season = one_season(one_site("A", ready=8, latest=12, weeks=3), weeks=9)
    assert reason(season, "A") == "ready week 8 + 3 weeks passes week 9, the last of the season"


def test_money_and_clay():
    season = one_season(
        one_site("A", cost="760000.00", benefit=9.0, clay_m3=Decimal("59.5")),
        one_site("B", cost="500000.00", benefit=2.0, clay_m3=Decimal("40.5")),
        budget="1000000.00",
        clay_m3=Decimal(100),
    )
    assert reason(season, "B") == "budget: 240000.00 left, 500000.00 needed"
    tight = one_season(*season.sites, budget=None, clay_m3=Decimal(80))
    assert reason(tight, "B") == "clay: 20.5 m3 left, 40.5 m3 needed"


def test_gangs_that_are_all_taken():
    season = one_season(
        one_site("KE-04", latest=9, weeks=9, benefit=9.0),
        one_site("KE-05", ready=3, latest=8, weeks=6, benefit=1.0),
        gangs=1,
    )
    assert reason(season, "KE-05") == "no gang free between week 3 and 8: taken by KE-04"


def test_gangs_that_are_free_in_too_short_runs():
    season = one_season(
        one_site("KE-04", ready=3, latest=4, weeks=2, benefit=9.0),
        one_site("KE-05", ready=1, latest=6, weeks=3, gangs=2, benefit=1.0),
        gangs=2,
    )
    assert reason(season, "KE-05") == (
        "no 3 weeks on end with 2 gangs free between week 1 and 6: too few gangs in weeks 3 to 4, "
        "taken by KE-04"
    )


def test_gangs_and_pumps_that_bar_only_together():
    """By hand: gangs bar D in week 3 only, pumps in weeks 1 and 5; each alone leaves two weeks."""
    season = one_season(
        one_site("A", ready=3, latest=3, weeks=1, gangs=2, benefit=9.0, pumps=0),
        one_site("B", ready=1, latest=1, weeks=1, benefit=9.0, pumps=1),
        one_site("C", ready=5, latest=5, weeks=1, benefit=9.0, pumps=1),
        one_site("D", ready=1, latest=5, weeks=2, gangs=2, benefit=1.0, pumps=1),
        weeks=5,
        gangs=3,
        pumps=1,
    )
    assert reason(season, "D") == (
        "no 2 weeks on end with 2 gangs and 1 pump free between week 1 and 5: too few gangs in "
        "week 3, taken by A; too few pumps in weeks 1 and 5, taken by B and C"
    )


def test_more_gangs_at_once_than_there_are():
    season = one_season(one_site("A", gangs=3), gangs=2)
    assert reason(season, "A") == "needs 3 gangs at once, there are 2 gangs"


def test_a_site_that_fits_is_no_site_to_leave_out():
    site = one_site("A")
    with pytest.raises(ValueError, match="A fits and is left out"):
        reasons(Stock(one_season(site)), site)


def test_a_site_that_brings_nothing():
    assert reason(one_season(one_site("A", benefit=0.0)), "A") == NOTHING
