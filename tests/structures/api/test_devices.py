"""Signing a device in: the token, its end, the lock that it shares with the pages."""

from __future__ import annotations

from datetime import timedelta

import pytest
from django.utils import timezone
from rest_framework.test import APIClient

from structures.actions.people import end_sessions, set_password
from structures.api.devices import SignInThrottle
from structures.models import DeviceToken
from tests import factories as make

pytestmark = pytest.mark.django_db
SIGN_IN = "/api/v1/sign-in"


@pytest.fixture
def person(engineer):
    set_password(user_id=engineer.pk, password=make.PASSWORD)
    engineer.refresh_from_db()
    return engineer


def sign_in(user, password=make.PASSWORD):
    said = {"username": user.username, "password": password}
    return APIClient().post(SIGN_IN, said, format="json")


def device(token):
    client = APIClient()
    client.credentials(HTTP_AUTHORIZATION=f"Token {token}")
    return client


def test_a_token_opens_what_the_postings_cover_and_is_kept_hashed(person, site):
    answer = sign_in(person)
    assert answer.status_code == 200
    assert set(answer.json()) == {"token", "expires"}
    token = answer.json()["token"]
    assert token not in str(DeviceToken.objects.values().get())
    listed = device(token).get("/api/v1/sites").json()
    assert [one["code"] for one in listed["results"]] == [site.code]


def test_without_a_sign_a_device_is_asked_for_its_token(site):
    answer = APIClient().get("/api/v1/sites")
    assert answer.status_code == 401
    assert answer["WWW-Authenticate"] == "Token"
    assert answer["Content-Type"] == "application/problem+json"
    assert answer.json()["status"] == 401


@pytest.mark.parametrize(
    "end",
    [
        lambda user: end_sessions(user_id=user.pk, by=user),
        lambda user: set_password(user_id=user.pk, password=f"{make.PASSWORD}-2"),
        lambda user: type(user).objects.filter(pk=user.pk).update(is_active=False),
        lambda user: type(user).objects.filter(pk=user.pk).update(account_ends_on="2020-01-01"),
        lambda _: DeviceToken.objects.update(expiry=timezone.now() - timedelta(seconds=1)),
    ],
    ids=["sessions ended", "new password", "not active", "account over", "expired"],
)
def test_a_token_ends_with_the_sessions_of_its_account(person, end):
    token = sign_in(person).json()["token"]
    end(person)
    assert device(token).get("/api/v1/sites").status_code == 401


def test_signing_out_ends_this_token_and_no_other(person):
    first, second = (sign_in(person).json()["token"] for _ in range(2))
    assert device(first).post("/api/v1/sign-out").status_code == 204
    assert device(first).get("/api/v1/sites").status_code == 401
    assert device(second).get("/api/v1/sites").status_code == 200


def test_a_wrong_password_says_no_more_than_that(person):
    wrong, nobody = sign_in(person, "not-this-one"), make.User(username="no-one")
    unknown = sign_in(nobody, "not-this-one")
    assert wrong.status_code == unknown.status_code == 401
    assert wrong.json()["detail"] == unknown.json()["detail"]


def test_the_lock_of_the_pages_counts_here_and_the_other_way_round(person, settings, client):
    for _ in range(settings.AXES_FAILURE_LIMIT):
        last = sign_in(person, "not-this-one")
    assert last.status_code == 429
    right = sign_in(person)
    assert right.status_code == 429
    assert right["Content-Type"] == "application/problem+json"
    assert right["Retry-After"] == str(int(settings.AXES_COOLOFF_TIME.total_seconds()))
    said = {"username": person.username, "password": make.PASSWORD}
    assert client.post("/sign-in/", said).status_code == 429


def test_a_session_needs_its_token_against_forged_forms(person, site):
    client = APIClient(enforce_csrf_checks=True)
    client.force_login(person)
    assert client.get("/api/v1/sites").status_code == 200
    answer = client.post(f"/api/v1/sites/{site.code}/estimates", {}, format="json")
    assert answer.status_code == 403
    assert "CSRF" in answer.json()["detail"]


def test_a_missing_field_is_named(site):
    answer = APIClient().post(SIGN_IN, {"username": "x"}, format="json")
    assert answer.status_code == 400
    assert [one["field"] for one in answer.json()["findings"]] == ["password"]


def test_too_many_tries_from_one_place_have_to_wait(monkeypatch, person):
    monkeypatch.setattr(SignInThrottle, "get_rate", lambda _: "2/min")
    answers = [sign_in(person).status_code for _ in range(3)]
    assert answers == [200, 200, 429]
