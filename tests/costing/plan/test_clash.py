"""Fixed openings that cannot stand together: true, smallest, and said in words."""

from dataclasses import replace
from decimal import Decimal
from itertools import combinations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from costing.plan.clash import clash_refusal, clashes
from costing.plan.deletion import irreducible, smallest_excess
from tests.costing.plan.seasons import keeps_limits, one_season, one_site, seasons


def only(season, codes):
    """The season with no other fixed openings."""
    sites = tuple(
        site if site.site in codes else replace(site, open_week=None) for site in season.sites
    )
    return replace(season, sites=sites)


def can_stand(season, codes):
    """Oracle: limits read off the definition, for these fixed openings alone."""
    return keeps_limits(
        season, {site.site: site.open_week for site in season.sites if site.site in codes}
    )


@settings(max_examples=200)
@given(seasons(fixed=True))
def test_clashing_sets_are_true_and_none_can_be_spared(season):
    for clash in clashes(season):
        assert not can_stand(season, clash.sites)
        for spared in clash.sites:
            freed = only(season, set(clash.sites) - {spared})
            assert clash.limit not in {other.limit for other in clashes(freed)} or (
                clash.limit == "window"
            )


@settings(max_examples=200)
@given(seasons(fixed=True))
def test_no_smaller_set_exceeds_the_limit(season):
    """Oracle: every smaller set tried."""
    fixed = [site.site for site in season.sites if site.open_week and season.openings(site)]
    for clash in clashes(season):
        if clash.limit in season.weekly:
            for smaller in combinations(fixed, len(clash.sites) - 1):
                others = {other.limit for other in clashes(only(season, smaller))}
                assert clash.limit not in others


@given(st.dictionaries(st.sampled_from("ABCDEFGH"), st.integers(0, 20), min_size=1), st.data())
def test_the_deletion_filter_finds_the_fewest(uses, data):
    """Oracle: every set tried."""
    limit = data.draw(st.integers(-1, sum(uses.values()) - 1)) if sum(uses.values()) else -1
    found = smallest_excess(uses, limit)
    assert sum(uses[name] for name in found) > limit
    fewest = min(
        size
        for size in range(len(uses) + 1)
        for names in combinations(uses, size)
        if sum(uses[name] for name in names) > limit
    )
    assert len(found) == fewest


def test_what_does_not_clash_has_no_core():
    with pytest.raises(ValueError, match="nothing clashes"):
        irreducible([1, 2], lambda _: False)


def sentence(*sites, **limits):
    (clash,) = clashes(one_season(*sites, **limits))
    return clash.what


def test_gangs_in_words():
    words = sentence(
        one_site("KE-04", open_week=3, weeks=4),
        one_site("KE-07", open_week=5, weeks=3),
        one_site("KE-09", open_week=1, weeks=2),
        gangs=1,
    )
    assert words == (
        "KE-04 (opens in week 3) and KE-07 (opens in week 5) need 2 gangs in weeks 5 to 6; "
        "there is 1 gang."
    )


def test_money_and_clay_in_words():
    sites = [
        one_site(code, cost=cost, open_week=1, clay_m3=Decimal(clay))
        for code, cost, clay in (("A", "60.00", 5), ("B", "50.00", 70), ("C", "10.00", 0))
    ]
    season = one_season(*sites, gangs=9, budget="100.00", clay_m3=Decimal(60))
    assert [clash.what for clash in clashes(season)] == [
        "A and B need 110.00 together; the budget is 100.00.",
        "B needs 70 m3 of clay; there is 60 m3 of clay.",
    ]


@pytest.mark.parametrize(
    ("site", "words"),
    [
        (
            one_site("A", ready=5, open_week=3),
            "A cannot open in week 3: it is ready in week 5.",
        ),
        (
            one_site("A", latest=6, weeks=4, open_week=4),
            (
                "A cannot open in week 4: with 4 weeks of work it closes in week 7, after week 6; "
                "the last week to open is 3."
            ),
        ),
        (
            one_site("A", ready=4, latest=6, weeks=4, open_week=4),
            "A cannot open in week 4: no week can be kept: ready week 4 + 4 weeks passes week 6.",
        ),
    ],
)
def test_windows_in_words(site, words):
    assert sentence(site) == words


def test_a_refusal_tells_every_clash_and_what_to_do():
    season = one_season(
        one_site("A", ready=5, open_week=3),
        one_site("B", open_week=1, cost="70.00"),
        one_site("C", open_week=1, cost="70.00"),
        gangs=1,
        budget="100.00",
    )
    refused = clash_refusal("season.json", clashes(season))
    assert [finding.remedy for finding in refused.findings] == [
        "Move its open_week, or leave it out to let the plan choose.",
        "Move or free one of them (leave open_week out), or raise the limit.",
        "Free one of them (leave open_week out), or raise the limit.",
    ]
    assert refused.where == "season.json"
