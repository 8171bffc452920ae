"""Seasons from JSON: what is read exactly, and what is refused in words."""

import json
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.plan.reading import read_season
from costing.plan.season import Season, SeasonSite
from structures.errors import Refused
from structures.intake.archive import FILE_MOST_BYTES
from tests.costing.plan.seasons import seasons

SITE = {
    "site": "KE-04",
    "ready_week": 2,
    "latest_close_week": 24,
    "duration_weeks": 5,
    "gangs": 1,
    "cost": "310000.00",
    "benefit": 12.5,
}
WHOLE = {"weeks": 30, "gangs": 6, "budget": "2400000.00", "sites": [SITE]}


def read(document):
    return read_season("season.json", json.dumps(document).encode())


def with_site(**changes):
    site = {key: value for key, value in (SITE | changes).items() if value is not ...}
    return WHOLE | {"sites": [site]}


def findings(document):
    with pytest.raises(Refused) as refused:
        read(document)
    return [(one.where, one.field, one.what) for one in refused.value.findings]


def test_a_season_as_the_interface_writes_it():
    assert read(WHOLE) == Season(
        30,
        6,
        Decimal("2400000.00"),
        (SeasonSite("KE-04", 2, 24, 5, 1, Decimal("310000.00"), 12.5),),
    )


def test_further_limits_and_fixed_openings():
    season = read(with_site(pumps=2, clay_m3=120.5, open_week=3) | {"pumps": 4, "clay_m3": "900"})
    assert (season.pumps, season.clay_m3) == (4, Decimal(900))
    (site,) = season.sites
    assert (site.pumps, site.clay_m3, site.open_week) == (2, Decimal("120.5"), 3)


def test_a_budget_of_null_sets_no_limit():
    assert read(WHOLE | {"budget": None}).budget is None


def test_money_may_be_a_number_and_is_read_as_written():
    """0.1 + 0.2 of binary numbers is not 0.3; here it is."""
    first, second = (
        {**SITE, "site": code, "cost": cost} for code, cost in (("A", 0.1), ("B", 0.2))
    )
    season = read(WHOLE | {"budget": 0.3, "sites": [first, second]})
    assert sum(site.cost for site in season.sites) == season.budget


@given(seasons(fixed=True))
def test_what_is_written_is_read_again(season):
    def text(value):
        return str(value) if isinstance(value, Decimal) else value

    names = ("weeks", "gangs", "budget", "pumps", "clay_m3")
    document = {name: text(getattr(season, name)) for name in names}
    document["sites"] = [
        {name: text(getattr(site, name)) for name in SeasonSite.__dataclass_fields__}
        for site in season.sites
    ]
    assert read(document) == season


PLACE = "season.json $.sites[0] (KE-04)"


@pytest.mark.parametrize(
    ("document", "where", "field", "what"),
    [
        (with_site(ready_week=...), PLACE, "ready_week", "This is missing."),
        (with_site(cost=...), PLACE, "cost", "This is missing."),
        (with_site(cost=None), PLACE, "cost", "This is missing."),
        (with_site(site=...), "season.json $.sites[0]", "site", "This is missing."),
        (with_site(benifit=3), PLACE, "benifit", "There is no such setting."),
        (
            with_site(ready_week=0),
            PLACE,
            "ready_week",
            "Week 0 is not one: weeks count from 1.",
        ),
        (with_site(duration_weeks=2.5), PLACE, "duration_weeks", "2.5 is not a whole number."),
        (with_site(duration_weeks="5"), PLACE, "duration_weeks", '"5" stands in quotes.'),
        (with_site(gangs=0), PLACE, "gangs", "A site with 0 gangs is not worked on."),
        (with_site(cost="3,10,000"), PLACE, "cost", '"3,10,000" has a comma.'),
        (with_site(cost="12.345"), PLACE, "cost", '"12.345" has more than two decimals.'),
        (with_site(cost="-1"), PLACE, "cost", "-1 is outside what is accepted, 0 to 1e+12."),
        (with_site(benefit=True), PLACE, "benefit", "A number is wanted, not true."),
        (
            with_site(pumps=1),
            PLACE,
            "pumps",
            "The site takes pumps, and the season does not say how much there is.",
        ),
        (
            WHOLE | {"clay_m3": 100},
            PLACE,
            "clay_m3",
            "The season has a limit of clay_m3, and this site does not say what it takes.",
        ),
        (WHOLE | {"weeks": 0}, "season.json $", "weeks", "A season of 0 weeks has no room."),
        (WHOLE | {"week": 3}, "season.json $", "week", "There is no such setting."),
        (
            {key: WHOLE[key] for key in ("weeks", "gangs", "sites")},
            "season.json $",
            "budget",
            "This is missing.",
        ),
        (
            {key: WHOLE[key] for key in ("weeks", "gangs", "budget")},
            "season.json $",
            "sites",
            "The sites are missing.",
        ),
        (
            WHOLE | {"sites": {}},
            "season.json $.sites",
            "sites",
            "A list of sites is wanted, not an object.",
        ),
        (
            WHOLE | {"sites": [3]},
            "season.json $.sites[0]",
            "",
            "Fields were expected here, not 3.",
        ),
        (
            WHOLE | {"sites": [SITE, SITE]},
            "season.json $.sites[1] (KE-04)",
            "site",
            "This site stands at season.json $.sites[0] (KE-04) already.",
        ),
        ([1], "season.json $", "", "Fields were expected here, not a list."),
    ],
)
def test_what_is_wrong_is_told_with_its_place(document, where, field, what):
    assert findings(document) == [(where, field, what)]


def test_every_finding_is_told_at_once():
    document = {
        "weeks": "x",
        "gangs": 2,
        "budget": "1",
        "sites": [SITE | {"gangs": -1}, SITE | {"site": "B", "cost": "?"}],
    }
    assert [field for _, field, _ in findings(document)] == ["weeks", "gangs", "cost"]


def test_too_many_sites_are_not_read_one_by_one():
    document = WHOLE | {"sites": [0] * 2001}
    assert findings(document) == [
        ("season.json $.sites", "sites", "2001 sites are more than 2000.")
    ]


def test_what_is_not_json_is_told_with_its_line():
    with pytest.raises(Refused, match=r"season.json line 2 column 1.*not JSON"):
        read_season("season.json", b"{\n")


def test_a_file_that_is_too_large_is_not_read():
    with pytest.raises(Refused, match="MB, limit"):
        read_season("season.json", bytes(FILE_MOST_BYTES + 1))


VALUES = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=3),
    max_leaves=4,
)


@given(
    st.dictionaries(st.sampled_from(["weeks", "gangs", "budget", "pumps", "clay_m3"]), VALUES),
    st.lists(st.dictionaries(st.sampled_from([*SITE, "pumps", "open_week", "x"]), VALUES)),
)
def test_whatever_comes_is_read_or_refused_in_sentences(limits, changes):
    document = WHOLE | limits | {"sites": [SITE | one for one in changes]}
    try:
        found = read(document)
    except Refused as refused:
        found = refused
    sentences = found.findings if isinstance(found, Refused) else ()
    assert isinstance(found, Season) or sentences
    assert all(one.what and one.remedy and one.where for one in sentences)
