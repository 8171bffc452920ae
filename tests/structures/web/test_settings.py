"""Settings: what counts, who may change which, with whose word; and the districts."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from django.utils import timezone

from structures.models import District, Role, Setting
from tests.factories import a_district, a_user

pytestmark = pytest.mark.django_db
ENGINEER = {"decided_by": "A. Rao", "licence_number": "L-1", "decided_on": "2026-03-01"}
# One default of each owner, as the handbook's table 12 has them.
OF_ENGINEER, OF_DISTRICT, OF_PROGRAMME = "key_m", "film_lap_m", "risk_draws"


def words(answer):
    return " ".join(answer.content.decode().split())


@pytest.fixture
def near():
    return a_district("QU")


@pytest.fixture
def as_role(client, near):
    def signed_in(role, district=near):
        client.force_login(a_user(role, district))
        return client

    return signed_in


def change(client, key, value, *, district="QU", **said):
    said = {"value": value, "reason": "as measured here", **said}
    return client.post(f"/settings/{key}/?district={district}", said)


def test_the_sheet_shows_value_unit_range_source_and_owner(as_role):
    """Oracle: handbook 12, rows of the rock key and the film lap."""
    text = words(as_role(Role.AUDITOR).get("/settings/"))
    assert "rock key</a>" in text
    for said in ("0.15", "0.1 \u2013 0.6", "decided for this program", "licensed engineer"):
        assert said in text
    assert "common practice, no source" in text
    assert "You may change here" not in text


@pytest.mark.parametrize(
    ("role", "key", "value"),
    [
        (Role.DISTRICT, OF_DISTRICT, "0,25"),
        (Role.PROGRAMME, OF_PROGRAMME, "4000"),
    ],
)
def test_an_owner_changes_their_own_figure(as_role, near, role, key, value):
    client = as_role(role)
    answer = change(client, key, value)
    assert answer.status_code == 302
    kept = Setting.objects.get(key=key, district=near)
    assert kept.value == float(value.replace(",", "."))
    assert kept.reason == "as measured here"
    page = words(client.get(answer.url))
    assert "holds now" in page
    assert kept.changed_by.username in page


@pytest.mark.parametrize(
    ("role", "key", "value"),
    [
        (Role.FIELD, OF_DISTRICT, "0.25"),
        (Role.AUDITOR, OF_DISTRICT, "0.25"),
        (Role.PROGRAMME, OF_DISTRICT, "0.25"),
        (Role.DISTRICT, OF_PROGRAMME, "4000"),
        (Role.DISTRICT, OF_ENGINEER, "0.3"),
        (Role.PROGRAMME, OF_ENGINEER, "0.3"),
    ],
)
def test_nobody_changes_what_another_answers_for(as_role, role, key, value):
    client = as_role(role)
    assert "You may read this figure, not change it." in words(
        client.get(f"/settings/{key}/?district=QU")
    )
    assert change(client, key, value, **ENGINEER).status_code == 422
    assert not Setting.objects.exists()


def test_a_figure_of_the_engineer_needs_name_licence_day_and_reason(as_role):
    client = as_role(Role.ADMIN)
    for left_out in (*ENGINEER, "reason"):
        said = {**ENGINEER, left_out: ""}
        answer = change(client, OF_ENGINEER, "0.3", **said)
        assert answer.status_code == 422
        assert 'value="0.3"' in words(answer)
    assert not Setting.objects.exists()
    assert change(client, OF_ENGINEER, "0.3", **ENGINEER).status_code == 302
    kept = Setting.objects.get()
    assert (kept.decided_by, kept.licence_number, kept.decided_on) == (
        *("A. Rao", "L-1"),
        date(2026, 3, 1),
    )


def test_an_administrator_enters_another_owners_figure_as_decided_by_a_person(as_role):
    client = as_role(Role.ADMIN)
    assert change(client, OF_DISTRICT, "0.25").status_code == 422
    said = {"decided_by": "D. Officer", "decided_on": "2026-03-01"}
    assert change(client, OF_DISTRICT, "0.25", **said).status_code == 302
    assert Setting.objects.get().decided_by == "D. Officer"


@pytest.mark.parametrize(
    ("value", "sentence"),
    [("9", "outside 0.1 to 0.5"), ("1,500", "no thousands mark"), ("x", "is not a number")],
)
def test_a_value_that_cannot_be_is_told_at_its_field(as_role, value, sentence):
    answer = change(as_role(Role.DISTRICT), OF_DISTRICT, value)
    assert answer.status_code == 422
    text = words(answer)
    assert sentence in text
    assert 'href="#id_value"' in text
    assert f'value="{value}"' in text


def test_the_office_counts_where_a_district_says_nothing(as_role, near):
    a_district("ZZ")
    client = as_role(Role.ADMIN, None)
    said = {"decided_by": "D. Officer", "decided_on": "2026-03-01"}
    assert change(client, OF_DISTRICT, "0.25", district="", **said).status_code == 302
    change(client, OF_DISTRICT, "0.4", **said)
    assert [setting.value for setting in Setting.objects.order_by("value")] == [0.25, 0.4]
    assert ">0.4<" in words(client.get("/settings/?district=QU"))
    assert ">0.25<" in words(client.get("/settings/?district=ZZ"))


def test_what_it_was_stays_readable(as_role):
    client = as_role(Role.DISTRICT)
    change(client, OF_DISTRICT, "0.25", reason="first trial")
    change(client, OF_DISTRICT, "0.35", reason="second trial")
    text = words(client.get(f"/settings/{OF_DISTRICT}/?district=QU"))
    assert text.index("second trial") < text.index("first trial")


def test_a_limit_that_nobody_has_entered_is_entered_and_taken_back(as_role, near):
    """Oracle: handbook 12 has no value for the limit of a sanction; an office says its own."""
    client = as_role(Role.PROGRAMME)
    key = "technical_sanction_limit"
    assert "none entered" in words(client.get("/settings/?district=QU"))
    assert change(client, key, "").status_code == 422  # nothing stands there yet
    page = client.get(change(client, key, "2500000,50").url)
    assert "limit of technical sanction by the district: 2500000.5 holds now" in words(page)
    assert "2,500,000.5" in words(page)
    assert Setting.objects.get(district=near).value == 2500000.5
    page = words(client.get(change(client, key, "", reason="ordered anew").url))
    assert "none entered holds now" in page
    assert "taken back" in page
    assert page.index("ordered anew") < page.index("as measured here")
    assert not Setting.objects.exists()
    assert change(as_role(Role.DISTRICT), OF_DISTRICT, "").status_code == 422


def test_settings_of_another_district_are_not_there(as_role):
    a_district("ZZ", name="Zedland")
    client = as_role(Role.DISTRICT)
    for url in ("/settings/?district=ZZ", f"/settings/{OF_DISTRICT}/?district=ZZ"):
        assert client.get(url).status_code == 404
    assert change(client, OF_DISTRICT, "0.25", district="ZZ").status_code == 404
    assert client.get("/settings/none_such/?district=QU").status_code == 404
    assert "Zedland" not in words(client.get("/settings/"))


def test_only_the_office_sets_for_everywhere(as_role):
    assert as_role(Role.DISTRICT).get(f"/settings/{OF_DISTRICT}/").status_code == 404


def test_the_first_district_is_opened_in_the_browser(as_role):
    District.objects.all().delete()
    client = as_role(Role.ADMIN, None)
    assert "No district is open yet" in words(client.get("/settings/"))
    said = {"code": "NE", "name": "Nerlava", "zone": "Asia/Kolkata", "currency": "INR"}
    whole = {**said, "water_year_month": "6", "water_year_day": "1"}
    wrong = client.post("/districts/new/", {**whole, "zone": "Mars/Base"})
    assert wrong.status_code == 422
    assert "is no time zone" in words(wrong)
    assert client.post("/districts/new/", whole).url == "/settings/?district=NE"
    client.post("/districts/NE/", {**whole, "name": "Nerlava East"})
    assert District.objects.get().name == "Nerlava East"


def test_districts_are_opened_by_the_office_only(as_role):
    a_district("ZZ")
    client = as_role(Role.ADMIN)
    assert client.get("/districts/new/").status_code == 404
    assert client.get("/districts/ZZ/").status_code == 404
    assert client.get("/districts/QU/").status_code == 200


def test_an_invented_district_says_so_over_every_page_with_its_day(client):
    invented = a_district(
        "IN", name="Quenharra", invented=True, as_of=timezone.localdate() - timedelta(days=30)
    )
    District.objects.filter(pk=invented.pk).update(as_of=date(2026, 4, 10))
    client.force_login(a_user(Role.AUDITOR, invented))
    text = words(client.get("/help/"))
    assert "Quenharra is invented." in text
    assert "Its today is 10 Apr 2026" in text


def test_a_real_district_has_no_such_line(as_role):
    assert "is invented" not in words(as_role(Role.AUDITOR).get("/help/"))


def test_help_prints_every_caution_that_always_holds(as_role):
    """Oracle: handbook 11, the sentence that closes each caution of the works."""
    text = words(as_role(Role.FIELD).get("/help/"))
    for said in ("Sand stands only while damp", "raw water", "1.50 m or more from the edge"):
        assert said in text
    assert "settle a rock line" in text
    assert "From 1.2 m on nobody enters" in text


def test_help_prints_the_depth_that_nobody_enters_in_their_districts(as_role, near):
    """Oracle: handbook 11 and 12, 1.2 m or what a local code has in its place."""
    change(as_role(Role.ADMIN), "depth_without_entry_m", "0.9", **ENGINEER)
    text = words(as_role(Role.FIELD).get("/help/"))
    assert "From 0.9 m on nobody enters" in text
    assert "1.2 m" not in text
