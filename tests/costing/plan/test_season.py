"""What the records of a season refuse to be."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.plan.wording import asked, at_hand, names_of, weeks_text
from tests.costing.plan.seasons import one_season, one_site


@pytest.mark.parametrize(
    ("wrong", "words"),
    [
        ({"ready": 0}, "count from 1"),
        ({"gangs": 0}, "count from 1"),
        ({"benefit": float("nan")}, "cannot be summed"),
        ({"benefit": -1.0}, "cannot be summed"),
        ({"cost": "-0.01"}, "less than nothing"),
        ({"pumps": -1}, "less than nothing"),
    ],
)
def test_a_site_that_cannot_be(wrong, words):
    with pytest.raises(ValueError, match=words):
        one_site("A", **wrong)


@pytest.mark.parametrize(
    ("sites", "limits", "words"),
    [
        ((), {"weeks": 0}, "no room"),
        ((), {"gangs": -1}, "below zero"),
        (("A", "A"), {}, "twice"),
        (("A",), {"pumps": 1}, "does not say its pumps"),
        (("A",), {"clay_m3": Decimal(1)}, "does not say its clay_m3"),
    ],
)
def test_a_season_that_cannot_be(sites, limits, words):
    with pytest.raises(ValueError, match=words):
        one_season(*map(one_site, sites), **limits)


def test_openings_of_a_site():
    """By hand: 3 weeks of work, ready in week 2, closed by week 6: opens in 2, 3 or 4."""
    site = one_site("A", ready=2, latest=6, weeks=3)
    assert list(one_season(site).openings(site)) == [2, 3, 4]
    assert list(one_season(site, weeks=4).openings(site)) == [2]
    assert list(one_season(site, weeks=3).openings(site)) == []


@given(st.sets(st.integers(1, 60), min_size=1))
def test_weeks_in_words_name_every_week_once(weeks):
    """Oracle: the words read back."""
    words = weeks_text(sorted(weeks))
    head, runs = words.split(" ", 1)
    assert head == ("week" if len(weeks) == 1 else "weeks")
    read = []
    for run in runs.replace(" and ", ", ").split(", "):
        first, *last = map(int, run.split(" to "))
        read += range(first, (last or [first])[0] + 1)
    assert read == sorted(weeks)


def test_words_of_amounts_and_names():
    assert asked("gangs", 1) == "1 gang"
    assert asked("pumps", 3) == "3 pumps"
    assert asked("budget", Decimal(5)) == "5.00"
    assert at_hand("pumps", 0) == "there are 0 pumps"
    assert at_hand("clay_m3", Decimal("40.5")) == "there is 40.5 m3 of clay"
    assert names_of([]) == ""
    assert names_of(["A", "B", "C", "D"], most=3) == "A, B and 2 more"
