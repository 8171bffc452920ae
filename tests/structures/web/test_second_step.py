"""Signing in by two steps, on the page and by the API, without a script; and what guards it."""

from __future__ import annotations

from datetime import timedelta

import pytest
from django.test import Client
from django.utils import timezone

from structures.actions.people import invite
from structures.models import Role, SecondFactor
from structures.web import sessions
from tests.factories import PASSWORD, a_district, a_user
from tests.structures.actions.test_second_factor import ask_for_it, code_at, set_up

pytestmark = pytest.mark.django_db
HERE = "/one-time-codes/"


@pytest.fixture
def officer():
    user = a_user(Role.DISTRICT, a_district(), login="officer")
    user.set_password(PASSWORD)
    user.save()
    return user


def first_step(client, **more):
    return client.post("/sign-in/", {"username": "officer", "password": PASSWORD, **more})


def is_in(client):
    return client.get("/password/").status_code == 200


def words(answer):
    return " ".join(answer.content.decode().split())


def now_code(factor, steps=0):
    return code_at(factor.secret, timezone.now(), steps)


def test_the_password_alone_opens_nothing(client, officer):
    factor, _ = set_up(officer)
    assert first_step(client, next="/decisions/").url == "/second-step/"
    assert not is_in(client)
    assert "Which code does your telephone show?" in words(client.get("/second-step/"))
    wrong = client.post("/second-step/", {"code": "000000"})
    assert wrong.status_code == 422
    assert "does not fit" in words(wrong)
    assert not is_in(client)
    assert client.post("/second-step/", {"code": now_code(factor)}).url == "/decisions/"
    assert is_in(client)


def test_a_code_that_was_seen_over_the_shoulder_is_used_up(client, officer):
    factor, _ = set_up(officer)
    first_step(client)
    code = now_code(factor)
    client.post("/second-step/", {"code": code})
    other = Client()
    first_step(other)
    assert other.post("/second-step/", {"code": code}).status_code == 422
    assert not is_in(other)


def test_a_code_of_the_list_does_as_well(client, officer):
    _, codes = set_up(officer)
    first_step(client)
    assert client.post("/second-step/", {"code": codes[3]}).status_code == 302
    assert is_in(client)
    assert "9 codes are unused" in words(client.get(HERE))


def test_wrong_codes_lock_like_wrong_passwords(client, officer, settings):
    factor, _ = set_up(officer)
    first_step(client)
    answers = [
        client.post("/second-step/", {"code": "000000"}) for _ in range(settings.AXES_FAILURE_LIMIT)
    ]
    assert [one.status_code for one in answers] == [422] * 4 + [429]
    locked = client.post("/second-step/", {"code": now_code(factor)})
    assert locked.status_code == 429
    assert not is_in(client)
    assert first_step(Client()).status_code == 429


def test_the_second_step_waits_ten_minutes_and_never_without_the_first(
    client, officer, monkeypatch
):
    factor, _ = set_up(officer)
    assert client.get("/second-step/").url == "/sign-in/"
    first_step(client)
    later = timezone.now() + timedelta(minutes=11)
    monkeypatch.setattr(sessions.timezone, "now", lambda: later)
    assert client.post("/second-step/", {"code": now_code(factor)}).url == "/sign-in/"
    assert not is_in(client)


def test_a_new_password_ends_a_first_step(client, officer):
    factor, _ = set_up(officer)
    first_step(client)
    officer.set_password(f"{PASSWORD}-2")
    officer.save()
    assert client.post("/second-step/", {"code": now_code(factor)}).url == "/sign-in/"


def test_it_is_set_up_by_picture_or_key_and_the_list_is_shown_once(client, officer):
    client.force_login(officer)
    assert client.post(f"{HERE}begin/").url == f"{HERE}set-up/"
    factor = SecondFactor.objects.get()
    page = words(client.get(f"{HERE}set-up/"))
    assert 'src="data:image/svg+xml;' in page
    assert " ".join(factor.secret[start : start + 4] for start in range(0, 32, 4)) in page
    assert client.post(f"{HERE}set-up/", {"code": "12"}).status_code == 422
    shown = client.post(f"{HERE}set-up/", {"code": now_code(factor)})
    assert shown.content.count(b'class="once"') == 10
    assert "no-store" in shown["Cache-Control"]
    assert "Yes, since" in words(client.get(HERE))
    assert factor.secret not in words(client.get(HERE))
    assert client.get(f"{HERE}set-up/").url == HERE


def test_who_must_and_has_not_is_told_at_sign_in(client, officer):
    ask_for_it(officer.postings.get().district)
    came = client.post(
        "/sign-in/", {"username": "officer", "password": PASSWORD, "next": HERE}, follow=True
    )
    page = words(came)
    assert "Set it up under your name" in page
    assert "Not yet, and your district asks for it" in page


def test_a_one_time_word_does_not_go_round_the_second_step(client, officer):
    factor, _ = set_up(officer)

    word = invite(login="officer", role=Role.DISTRICT, district=officer.postings.get().district)
    said = {"login": "officer", "word": word, "password": "sluice-and-spindle"}
    came = client.post("/welcome/", {**said, "again": said["password"]})
    assert came.url == "/second-step/"
    assert not is_in(client)
    client.post("/second-step/", {"code": now_code(factor)})
    assert is_in(client)


def test_a_code_given_again_is_kept_with_the_session(client, officer):
    factor, _ = set_up(officer)
    client.force_login(officer)
    assert sessions.GIVEN not in client.session
    client.post(HERE, {"code": now_code(factor)})
    assert sessions.GIVEN in client.session
    client.post("/sign-out/")
    assert sessions.GIVEN not in client.session


def test_a_token_brings_no_second_factor(rf, officer):
    request = rf.get("/", HTTP_AUTHORIZATION="Token 1")
    request.session = {sessions.GIVEN: timezone.now().isoformat()}
    assert sessions.second_factor_given(request) is None
    request = rf.get("/")
    request.session = {sessions.GIVEN: "2026-04-10T03:12:00+00:00"}
    assert sessions.second_factor_given(request).isoformat() == "2026-04-10T03:12:00+00:00"


def test_an_administrator_asks_and_another_approver_agrees(client, officer):
    set_up(officer)
    district = officer.postings.get().district
    admin, manager = a_user(Role.ADMIN, district), a_user(Role.PROGRAMME, district)
    client.force_login(admin)
    assert "Ask for it" in words(client.get(f"/people/{officer.pk}/"))
    client.post(f"/people/{officer.pk}/second-factor/", {"reason": "Telephone stolen."})
    assert "has not agreed yet" in words(client.get(f"/people/{officer.pk}/"))
    reset = officer.factor_resets.get()
    assert client.post(f"/factor-resets/{reset.pk}/").status_code == 404
    client.force_login(manager)
    assert "Telephone stolen." in words(client.get("/factor-resets/"))
    assert client.get(f"/factor-resets/{reset.pk}/").status_code == 405
    assert client.post(f"/factor-resets/{reset.pk}/").status_code == 302
    assert not SecondFactor.objects.exists()


def api_sign_in(**more):
    said = {"username": "officer", "password": PASSWORD, **more}
    return Client().post("/api/v1/sign-in", said, content_type="application/json")


def test_a_device_sends_the_code_where_the_account_needs_one(officer, settings):
    assert api_sign_in().status_code == 200
    factor, _ = set_up(officer)
    missing = api_sign_in()
    assert missing.status_code == 401
    assert "one_time_code" in missing.json()["detail"]
    assert api_sign_in(one_time_code="000000").status_code == 401
    assert set(api_sign_in(one_time_code=now_code(factor)).json()) == {"token", "expires"}
    wrong = [api_sign_in(one_time_code="000000") for _ in range(settings.AXES_FAILURE_LIMIT)]
    assert wrong[-1].status_code == 429
    assert wrong[-1]["Content-Type"] == "application/problem+json"
    assert api_sign_in(one_time_code=now_code(factor, 1)).status_code == 429
