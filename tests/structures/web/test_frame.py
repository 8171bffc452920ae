"""The head of every page: which places for whom, and pages for what went wrong."""

from __future__ import annotations

from datetime import UTC, date, datetime

import pytest
from django.template.loader import render_to_string
from django.test import Client
from django.utils import timezone

from structures.models import Role, Upload
from structures.runs.queue import start_run
from structures.templatetags.days import day
from tests.factories import (
    a_district,
    a_posting,
    a_site,
    a_survey,
    a_user,
    a_watershed,
    an_engineer,
)

pytestmark = pytest.mark.django_db


def words(answer):
    return " ".join(answer.content.decode().split())


@pytest.mark.parametrize("role", list(Role))
def test_each_role_sees_the_places_it_works_in(client, role):
    """Oracle: the roles as the office has them: field never prices, the administrator keeps people."""
    client.force_login(a_user(role, a_district()))
    page = client.get("/password/")
    head = page.content.decode().partition("<main")[0]
    shown = {place for place in ("/people/", "/settings/", "/rates/") if f'"{place}"' in head}
    assert shown == {
        Role.FIELD: set(),
        Role.ADMIN: {"/people/", "/settings/"},
    }.get(role, {"/rates/"})
    for place in ("/sites/", "/watersheds/", "/files/", "/runs/", "/help/"):
        assert f'"{place}"' in head


def test_the_place_one_is_at_is_marked(client):
    client.force_login(a_user(Role.ADMIN, a_district()))
    assert '<a href="/people/" aria-current="true">' in words(client.get("/people/new/"))


class TestDayOfTheSheet:
    """The title block prints the district's day, whatever day the server has."""

    def printed(self, client, place):
        return words(client.get(place)).partition("<dt>Date</dt>")[2].partition("</dd>")[0]

    @pytest.fixture
    def site(self):
        return a_site(a_watershed(a_district(invented=True, as_of=date(2026, 4, 10))))

    @pytest.mark.parametrize(
        "place",
        [
            *("/sites/", "/watersheds/", "/files/", "/entry/"),
            *("/sites/EX-A/", "/sites/EX-A/edit/", "/sites/EX-A/surveys/new/", "/watersheds/OD/"),
        ],
    )
    def test_of_a_district_that_stands_still(self, client, site, place):
        client.force_login(an_engineer(site.watershed.district))
        assert self.printed(client, place) == " <dd> 10 Apr 2026 "

    def test_of_a_wall_that_is_tried(self, client, site, tmp_path, settings):
        settings.MEDIA_ROOT = tmp_path
        engineer = an_engineer(site.watershed.district)
        a_survey(site, engineer)
        client.force_login(engineer)
        assert self.printed(client, "/sites/EX-A/try/") == " <dd> 10 Apr 2026 "

    def test_of_two_districts_with_two_days_is_the_servers(self, client, site):
        engineer = an_engineer(site.watershed.district)
        a_posting(engineer, Role.ENGINEER, a_district("ZZ", zone="UTC"))
        client.force_login(engineer)
        today = timezone.localdate()
        assert self.printed(client, "/sites/") == f" <dd> {today.day} {today:%b %Y} "


def test_hours_are_those_of_the_district_s_clocks(client):
    """Oracle: UTC+5:30 all the year in Asia/Kolkata: 20:10 UTC is 01:40 on the next day."""
    district = a_district()
    engineer = an_engineer(district)
    upload = Upload.objects.create(
        district=district, kind="sites", name="s.csv", size=1, sha256="0" * 64, by=engineer
    )
    Upload.objects.update(at=datetime(2026, 4, 9, 20, 10, tzinfo=UTC))
    client.force_login(engineer)
    page = words(client.get(f"/files/{upload.pk}/"))
    assert f"{engineer.username}, 10 Apr 2026 01:40, Asia/Kolkata" in page
    start_run(kind="survey.read", params={"number": 1}, subject="site X", asked_by=engineer)
    assert "Hours are those of Asia/Kolkata." in words(client.get("/runs/"))


def test_a_day_kept_as_text_is_written_as_pages_write_days():
    assert day("2027-03-14") == "14 Mar 2027"


def test_who_serves_nowhere_is_led_on(client):
    client.force_login(a_user(Role.ADMIN))
    page = words(client.get("/sites/"))
    assert "You serve in no watershed today, so there is no site to show." in page
    assert 'href="/people/"' in page.partition("<main")[2]
    assert "<h2" not in page.partition("<main")[2]


def test_a_page_that_is_not_there_says_so_without_a_name(client):
    answer = client.get("/sites-of-nowhere/")
    assert answer.status_code == 404
    assert "There is no such page, or it lies where you are not posted." in words(answer)


def test_a_form_from_elsewhere_is_answered_in_words():
    answer = Client(enforce_csrf_checks=True).post("/sign-in/", {})
    assert answer.status_code == 403
    assert "Why was this not taken?" in words(answer)


def test_a_defect_is_answered_without_the_page_that_broke():
    page = render_to_string("500.html")
    assert "A defect of this program, not of what you sent." in " ".join(page.split())
