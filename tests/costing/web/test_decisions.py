"""The decision sheet on the page: its figures, its four acts, and who is offered none."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client

from costing.actions.money_lines import LineTerms, enter_money_line
from costing.models import MoneyLine, Sanction
from structures.actions.devices import give_token
from structures.models import Entry, Role
from tests.factories import a_district, a_schedule, a_site, a_user, a_watershed
from tests.papers import DAY, People, heard
from tests.pictures import jpeg

pytestmark = pytest.mark.django_db
SHEET = "/decisions/EX-A/"
TERMS = {"number": "TS-1", "valid_to": "2027-03-31", "conditions": "Open in January."}


@pytest.fixture(autouse=True)
def _hashed_quickly(settings):
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]


@pytest.fixture
def site():
    district = a_district(invented=True, as_of=DAY)
    return a_site(a_watershed(district), benchmark="BM 1", village_downstream="Pirrumad")


@pytest.fixture
def people(site):
    return People(site.watershed.district)


@pytest.fixture
def estimate(site, people):
    return heard(site, people, a_schedule(site.watershed.district, people.engineer))


def desk(user):
    client = Client()
    client.force_login(user)
    return client


def act(client, name, seen, **said):
    form = {f"{name}-{key}": value for key, value in said.items()}
    return client.post(f"{SHEET}acts/{name}/", {"seen": seen, **form}, follow=True)


def page(answer):
    return " ".join(answer.content.decode().split())


def test_the_sheet_shows_exactly_what_is_decided(people, estimate):
    text = page(desk(people.programme).get(SHEET))
    assert "Is it sound at this cost?" in text
    for words in (
        f"{estimate.sanction:,}",
        estimate.input_digest[:12],
        estimate.design.digest[:12],
        "Pirrumad was heard on 2026-02-10, 31 present.",
        "gauge read weekly",
        "<svg",
    ):
        assert words in text, words


def test_sanctioned_and_approved_by_the_page(site, people, estimate):
    manager = desk(people.programme)
    answer = act(manager, "sanction", estimate.pk, **TERMS)
    assert "Technical sanction TS-1 is given." in page(answer)
    given = Sanction.objects.get()
    assert given.amount == estimate.sanction
    assert given.entry.content["signed_in_at"].startswith(
        people.programme.__class__.objects.get(pk=people.programme.pk).last_login.isoformat()[:16]
    )
    line = enter_money_line(
        district_id=site.watershed.district_id,
        terms=LineTerms("ML-1", "F-7", "INR", Decimal("900000.00"), date(2026, 1, 1)),
        by=people.programme,
    )
    text = page(manager.get(SHEET))
    assert "Is it wanted, and who pays?" in text
    assert "900,000.00" in text
    answer = act(
        manager,
        "approve",
        given.pk,
        number="AA-1",
        valid_to="2027-03-31",
        money_line=line.pk,
        amount=f"{given.amount}",
        photo=SimpleUploadedFile("signed.jpg", jpeg(), "image/jpeg"),
    )
    assert "Administrative approval AA-1 is given." in page(answer)
    site.structure.refresh_from_db()
    assert site.structure.stage == "approved"
    paid = Sanction.objects.get(kind="administrative")
    order = page(manager.get(f"/sanctions/{paid.pk}/"))
    for words in ("AA-1", paid.entry.code, paid.entry.digest, "ML-1, F-7"):
        assert words in order
    assert MoneyLine.objects.get() == line


def test_what_stands_against_it_stands_on_the_sheet_and_nothing_is_lost(people, estimate):
    manager = desk(people.programme)
    answer = act(manager, "sanction", estimate.pk, **{**TERMS, "valid_to": "2026-04-01"})
    assert answer.status_code == 422
    text = page(answer)
    assert "Nothing was decided" in text
    assert "It would be over already, on 2026-04-01." in text
    assert "Open in January." in text
    assert not Sanction.objects.exists()


def test_what_no_field_is_to_blame_for_stands_above_the_form(people, estimate):
    answer = act(desk(people.district), "sanction", estimate.pk, **TERMS)
    assert answer.status_code == 422
    assert "No limit of the district office for the technical sanction is entered." in page(answer)


def test_a_sheet_that_is_no_longer_the_newest_is_void(people, estimate):
    answer = act(desk(people.programme), "sanction", estimate.pk + 1, **TERMS)
    assert answer.status_code == 422
    assert "Estimate 1 came since" in page(answer)


@pytest.mark.parametrize("name", ["send-back", "refuse"])
def test_two_ways_to_say_no(site, people, estimate, name):
    said = {
        "reason": "The right bank is not seen.",
        **({"to": "drawn"} if name == "send-back" else {}),
    }
    answer = act(desk(people.district), name, estimate.pk, **said)
    assert answer.status_code == 200
    site.structure.refresh_from_db()
    assert site.structure.stage == {"send-back": "drawn", "refuse": "flow-judged"}[name]
    assert "The right bank is not seen." in page(answer)


def test_the_list_names_what_waits_for_whom(people, estimate):
    text = page(desk(people.district).get("/decisions/"))
    assert "Nothing waits for you." in text
    assert "for the programme manager" in text
    mine = page(desk(people.programme).get("/decisions/"))
    assert "EX-A the ford: technical sanction" in mine
    assert f"{estimate.sanction:,}" in mine


@pytest.mark.parametrize("role", [Role.AUDITOR, Role.ENGINEER])
def test_who_only_reads_is_offered_no_act(site, estimate, role):
    client = desk(a_user(role, site.watershed.district))
    assert "/acts/" not in page(client.get(SHEET))
    assert act(client, "sanction", estimate.pk, **TERMS).status_code == 422
    assert not Sanction.objects.exists()


@pytest.mark.parametrize("role", [Role.FIELD, Role.ADMIN])
def test_who_sees_no_money_sees_no_sheet(site, estimate, role):
    client = desk(a_user(role, site.watershed.district))
    assert client.get(SHEET).status_code == 404
    assert act(client, "sanction", estimate.pk, **TERMS).status_code == 404


def test_a_devices_token_opens_no_decision(people, estimate):
    """The pages know sessions only, and no address of the API decides."""
    manager = people.programme
    token, _ = give_token(user=manager)
    sent = {"HTTP_AUTHORIZATION": f"Token {token}"}
    client = Client()
    assert (
        client.get("/api/v1/structures/EX-A/missing", **sent).json()["next_stage"] == "sanctioned"
    )
    answer = client.post(f"{SHEET}acts/sanction/", {"seen": estimate.pk}, **sent)
    assert (answer.status_code, answer.url.partition("?")[0]) == (302, "/sign-in/")
    assert not Entry.objects.filter(act="technical sanction").exists()
    client.force_login(manager)
    answer = client.post(
        f"{SHEET}acts/sanction/",
        {"seen": estimate.pk, **{f"sanction-{key}": value for key, value in TERMS.items()}},
        **sent,
    )
    assert "A device&#x27;s token decides nothing" in page(answer)
    assert not Sanction.objects.exists()
