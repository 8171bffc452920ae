"""Sites, searched and listed over all that one may see and no further."""

from __future__ import annotations

from datetime import date, datetime

import pytest
from django.utils import timezone

from structures.models import Role, Run, Site, Stream, Structure
from structures.queries.districts import visible_watersheds
from structures.queries.runs import day_asked, site_subject, visible_runs
from structures.queries.sites import (
    search_sites,
    search_watersheds,
    site_sheet,
    visible_sites,
)
from tests.factories import a_district, a_site, a_survey, a_user, a_watershed, an_engineer

pytestmark = pytest.mark.django_db


@pytest.fixture
def watershed():
    return a_watershed()


@pytest.fixture
def engineer(watershed):
    return an_engineer(watershed.district)


@pytest.fixture
def sites(watershed):
    odre = Stream.objects.create(watershed=watershed, name="Odre")
    other = a_watershed(watershed.district, "TA", name="Tannavel")
    hidden = a_watershed(a_district("ZZ"), "ZA", name="Zamirra")
    return [
        a_site(watershed, "OD-01", stream=odre, village_upstream="Nolkurava", name="bend"),
        a_site(watershed, "OD-02", village_downstream="Hesgodi", name="ford", lat=15.76),
        a_site(other, "TA-01", name="Tanna ford", lat=15.77),
        a_site(hidden, "ZA-01", name="bend ford", village_upstream="Nolkurava"),
    ]


@pytest.mark.parametrize(
    ("text", "codes"),
    [
        ("od-0", ["OD-01", "OD-02"]),
        ("nolkurava", ["OD-01"]),
        ("HESGODI", ["OD-02"]),
        ("odre", ["OD-01", "OD-02"]),
        ("ford", ["OD-02", "TA-01"]),
        ("ford tanna", ["TA-01"]),
        ("Tannavel", ["TA-01"]),
        ("Zamirra", []),
        ("ZA-01", []),
        ("", ["OD-01", "OD-02", "TA-01"]),
    ],
)
@pytest.mark.usefixtures("sites")
def test_a_search_finds_code_name_village_stream_and_watershed(engineer, text, codes):
    """The watershed OD is called Odremma, so that "odre" finds all of its sites."""
    assert [site.code for site in search_sites(engineer, text)] == codes


@pytest.mark.parametrize(("text", "codes"), [("tan", ["TA"]), ("odre", ["OD"]), ("zam", [])])
@pytest.mark.usefixtures("sites")
def test_a_search_finds_watersheds(engineer, text, codes):
    assert [one.code for one in search_watersheds(engineer, text)] == codes


@pytest.mark.usefixtures("sites")
def test_a_list_of_sites_costs_one_query(engineer, django_assert_num_queries):
    with django_assert_num_queries(1):
        shown = [
            (
                site.watershed.district.code,
                site.watershed.name,
                site.stream and site.stream.name,
                site.structure.stage,
                site.newest_survey_version,
            )
            for site in visible_sites(engineer)
        ]
    assert len(shown) == 3


def test_a_list_says_what_was_handed_in_last(sites, engineer):
    site = a_site(sites[0].watershed, "EX-A", lat=15.71)
    a_survey(site, engineer)
    newest = a_survey(site, engineer, works={"pump_hours": 480})
    shown = visible_sites(engineer).get(code="EX-A")
    assert (shown.newest_survey_id, shown.newest_survey_version) == (newest.pk, 2)
    assert shown.newest_survey_at == newest.at


def test_watersheds_count_the_sites_that_are_going_on(sites, engineer, django_assert_num_queries):
    Structure.objects.filter(site=sites[0]).update(stage="closed-off")
    with django_assert_num_queries(3):
        counted = {one.code: one.site_count for one in visible_watersheds(engineer)}
    assert counted == {"OD": 1, "TA": 1}


def test_a_sheet_out_of_sight_is_not_there(sites, engineer):
    assert site_sheet(engineer, "OD-01").site == sites[0]
    for code in ("ZA-01", "NONE"):
        with pytest.raises(Site.DoesNotExist):
            site_sheet(engineer, code)


def test_runs_on_a_site_are_seen_by_who_sees_the_site(sites, engineer):
    stranger = a_user(Role.ENGINEER, sites[3].watershed.district)
    for place, site in enumerate(sites):
        Run.objects.create(
            kind="x",
            subject=site_subject(site.code),
            digest=str(place),
            version="1",
            asked_by=stranger,
        )
    assert [run.subject for run in visible_runs(engineer).order_by("subject")] == [
        "site OD-01",
        "site OD-02",
        "site TA-01",
    ]
    assert visible_runs(stranger).count() == 4


def test_the_day_of_a_request_is_that_of_its_district():
    """Oracle: 23:00 UTC is 04:30 of the next day in India (+05:30)."""
    run = Run.objects.create(kind="x", digest="x", version="1")
    late = datetime(2026, 4, 9, 23, 0, tzinfo=timezone.get_fixed_timezone(0))
    Run.objects.update(created_at=late)
    assert day_asked(run.pk, a_district("A")) == date(2026, 4, 10)
    assert day_asked(run.pk, a_district("B", zone="UTC")) == date(2026, 4, 9)
    stands = a_district("C", invented=True, as_of=date(2025, 1, 1))
    assert day_asked(run.pk, stands) == date(2025, 1, 1)
