"""Two people at the same moment: PostgreSQL with real transactions in threads.

SQLite takes one writer at a time and so would hide what these ask.
"""

from __future__ import annotations

from datetime import date

import pytest

from costing.actions.estimate import PRICE, request_estimate
from costing.actions.schedule import import_schedule
from costing.models import Estimate, RateSchedule
from structures.actions.people import invite, redeem_invite
from structures.actions.rock import settle_rock_line
from structures.actions.sites import bulk_enter_sites, edit_site
from structures.actions.surveys import accept_survey
from structures.errors import Refused
from structures.models import Design, Run, Site, Upload, User
from structures.runs.queue import execute
from tests.at_once import at_once, refusals
from tests.factories import (
    PASSWORD,
    a_district,
    a_schedule,
    a_site,
    a_survey,
    a_watershed,
    an_engineer,
    pack_bytes,
    rates_bytes,
)

pytestmark = [pytest.mark.postgres, pytest.mark.django_db(transaction=True)]
HANDS = 6


@pytest.fixture
def district():
    return a_district(invented=True, as_of=date(2026, 4, 10))


@pytest.fixture
def engineer(district):
    return an_engineer(district)


@pytest.fixture
def site(district):
    return a_site(a_watershed(district))


def test_surveys_handed_in_at_once_take_one_number_each(site, engineer):
    packs = [pack_bytes(works={"pump_hours": hours}) for hours in range(HANDS)]
    answers = at_once(
        *(
            lambda data=data: accept_survey(site_id=site.pk, name="s.json", data=data, by=engineer)
            for data in packs
        )
    )
    assert refusals(answers) == []
    assert sorted(one.version for one in answers) == list(range(1, HANDS + 1))


def test_one_file_handed_in_by_many_is_kept_once(site, engineer):
    act = lambda: accept_survey(  # noqa: E731 -- the same act for every hand
        site_id=site.pk, name="s.json", data=pack_bytes(), by=engineer
    )
    answers = at_once(*[act] * HANDS)
    assert len(refusals(answers)) == HANDS - 1
    assert all("This very file came on" in what for what in refusals(answers))
    assert site.surveys.count() == 1
    assert Upload.objects.filter(outcome="kept").count() == 1
    assert not Upload.objects.filter(outcome="received").exists()


def test_of_many_editors_of_one_revision_one_comes_first(site, engineer):
    answers = at_once(
        *(
            lambda name=name: edit_site(
                site_id=site.pk, seen_revision=1, changes={"name": name}, by=engineer
            )
            for name in "abcdef"
        )
    )
    assert len(refusals(answers)) == HANDS - 1
    assert Site.objects.get().revision == 2


def test_the_same_list_of_sites_comes_in_once(site, engineer):
    data = b"code,watershed,lat,lon\nOD-01,OD,15.71,77.41\n"
    act = lambda: bulk_enter_sites(  # noqa: E731 -- the same act for every hand
        district_id=site.watershed.district_id, name="s.csv", data=data, by=engineer
    )
    answers = at_once(*[act] * HANDS)
    assert len(refusals(answers)) == HANDS - 1
    assert Site.objects.filter(code="OD-01").count() == 1


def test_one_code_in_two_districts_is_given_once(site, engineer):
    other = a_watershed(a_district("ZZ"), "ZA")
    stranger = an_engineer(other.district)
    answers = at_once(
        *(
            lambda code=code, place=place, by=by: bulk_enter_sites(
                district_id=place.pk,
                name="s.csv",
                data=f"code,watershed,lat,lon\nNEW-1,{code},15.71,77.41\n".encode(),
                by=by,
            )
            for code, place, by in (
                ("OD", site.watershed.district, engineer),
                ("ZA", other.district, stranger),
            )
        )
    )
    assert len(refusals(answers)) == 1
    assert Site.objects.filter(code="NEW-1").count() == 1


def test_lines_settled_at_once_take_one_number_each(site, engineer):
    survey = a_survey(site, engineer)
    act = lambda: settle_rock_line(  # noqa: E731 -- the same act for every hand
        survey_id=survey.pk,
        points=survey.pack["rock_line"],
        reason="as drawn",
        rests_on=[],
        by=engineer,
    )
    answers = at_once(*[act] * HANDS)
    assert sorted(one.version for one in answers) == list(range(1, HANDS + 1))


def test_a_line_and_a_newer_survey_at_once_never_cross(site, engineer):
    """Either the line was settled on survey 1 before survey 2 came, or it is refused."""
    survey = a_survey(site, engineer)
    settled, newer = at_once(
        lambda: settle_rock_line(
            survey_id=survey.pk,
            points=survey.pack["rock_line"],
            reason="as drawn",
            rests_on=[],
            by=engineer,
        ),
        lambda: a_survey(site, engineer, works={"pump_hours": 480}),
    )
    assert newer.version == 2
    if not isinstance(settled, Refused):
        assert settled.at < newer.at


def test_the_same_rates_by_many_are_one_version(district, engineer):
    files = [rates_bytes() + b"\n" * extra for extra in range(HANDS)]
    answers = at_once(
        *(
            lambda data=data: import_schedule(
                district_id=district.pk, name="RS-1.csv", data=data, by=engineer
            )
            for data in files
        )
    )
    assert len(refusals(answers)) == HANDS - 1
    assert RateSchedule.objects.get().version == 1


def test_an_estimate_asked_for_by_many_is_one_run_and_one_design(site, engineer, district):
    a_schedule(district, engineer)
    a_survey(site, engineer)
    act = lambda: request_estimate(site_id=site.pk, by=engineer)  # noqa: E731 -- the same for all
    answers = at_once(*[act] * HANDS)
    assert len({run.pk for run in answers}) == 1
    assert Design.objects.count() == 1
    at_once(*[lambda: execute(str(answers[0].pk))] * 2)
    assert Estimate.objects.count() == 1
    assert Run.objects.get(kind=PRICE).state == "done"


def test_estimates_frozen_at_once_take_one_number_each(site, engineer, district):
    a_schedule(district, engineer)
    a_survey(site, engineer)
    runs = [
        request_estimate(site_id=site.pk, by=engineer, wall={"thickness_m": thickness})
        for thickness in (0.8, 1.0, 1.2)
    ]
    at_once(*(lambda run=run: execute(str(run.pk)) for run in runs))
    assert sorted(Estimate.objects.values_list("version", flat=True)) == [1, 2, 3]


def test_a_word_used_by_two_at_once_opens_once(district):
    word = invite(login="field-1", role="field", district=district)
    words = ("puddle-clay-first", "puddle-clay-second")
    answers = at_once(
        *(
            lambda password=password: redeem_invite(login="field-1", word=word, password=password)
            for password in words
        )
    )
    assert len(refusals(answers)) == 1
    (won,) = [one for one in words if User.objects.get(username="field-1").check_password(one)]
    assert won in words


def test_invites_at_once_make_one_account(district):
    act = lambda: invite(login="field-1", role="field", district=district)  # noqa: E731 -- the same
    answers = at_once(*[act] * 2)
    assert User.objects.filter(username="field-1").count() == 1
    words = [one for one in answers if isinstance(one, str)]
    assert len(words) + len(refusals(answers)) == 2
    opened = 0
    for word in words:
        try:
            redeem_invite(login="field-1", word=word, password=PASSWORD)
        except Refused:
            continue
        opened += 1
    assert opened == 1
