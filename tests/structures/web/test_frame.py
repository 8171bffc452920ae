"""The head of every page: which places for whom, and pages for what went wrong."""

from __future__ import annotations

import pytest
from django.template.loader import render_to_string
from django.test import Client

from structures.models import Role
from tests.factories import a_district, a_user

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
