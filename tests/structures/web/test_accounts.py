"""Coming in and out: sign-in, lock-out, the one-time word, the password, the end of an account."""

from __future__ import annotations

from datetime import timedelta

import pytest
from django.test import Client
from django.utils import timezone

from structures.actions import people
from structures.models import Role, SignInWord, User
from tests.factories import PASSWORD, a_district, a_user

pytestmark = pytest.mark.django_db
OTHER = "sluice-and-spindle"


@pytest.fixture
def keeper():
    """An engineer with a password."""
    user = a_user(Role.ENGINEER, a_district(), login="keeper")
    user.set_password(PASSWORD)
    user.save()
    return user


def sign_in(client, password=PASSWORD, name="keeper", **more):
    return client.post("/sign-in/", {"username": name, "password": password}, **more)


def is_in(client):
    return client.get("/password/").status_code == 200


def words(answer):
    return " ".join(answer.content.decode().split())


def test_a_page_asks_for_sign_in_and_leads_back(client, keeper):
    asked = client.get("/password/")
    assert asked.url == "/sign-in/?next=/password/"
    came = client.post(
        asked.url, {"username": "keeper", "password": PASSWORD, "next": "/password/"}
    )
    assert came.url == "/password/"
    page = words(client.get("/password/"))
    assert "keeper" in page
    assert "engineer, Quenharra" in page


def test_sign_in_leads_to_no_other_host(client, keeper):
    answer = client.post(
        "/sign-in/",
        {"username": "keeper", "password": PASSWORD, "next": "https://elsewhere.example/"},
    )
    assert "elsewhere" not in answer.url


def test_a_wrong_password_says_nothing_of_the_name(client, keeper):
    known, unknown = sign_in(client, "wrong"), sign_in(client, "wrong", name="nobody-here")
    assert known.status_code == unknown.status_code == 422
    sentence = "That name and password do not fit."
    assert sentence in words(known)
    assert sentence in words(unknown)
    assert "wrong" not in words(known).replace("Nothing", "")


def test_five_wrong_passwords_lock_the_name_for_that_address_only(client, keeper):
    """Oracle: the limit of the settings, five."""
    for _ in range(4):
        assert sign_in(client, "wrong").status_code == 422
    assert sign_in(client, "wrong").status_code == 429
    locked = sign_in(client)
    assert locked.status_code == 429
    assert "Wait 15 minutes" in words(locked)
    assert sign_in(client, REMOTE_ADDR="192.0.2.7").status_code == 302


def test_an_address_that_the_visitor_wrote_does_not_get_round_the_lock(client, keeper):
    for number in range(5):
        sign_in(client, "wrong", HTTP_X_FORWARDED_FOR=f"198.51.100.{number}")
    assert sign_in(client, HTTP_X_FORWARDED_FOR="198.51.100.77").status_code == 429


def test_the_lock_opens_after_its_time(client, keeper, settings):
    settings.AXES_COOLOFF_TIME = timedelta(0)
    for _ in range(6):
        sign_in(client, "wrong")
    assert sign_in(client).status_code == 302


def test_signing_out_ends_this_session_by_post_only(client, keeper):
    client.force_login(keeper)
    assert client.get("/sign-out/").status_code == 405
    assert client.post("/sign-out/").url == "/sign-in/"
    assert not is_in(client)


def test_signing_out_everywhere_ends_the_other_sessions_too(client, keeper):
    elsewhere = Client()
    for one in (client, elsewhere):
        sign_in(one)
        assert is_in(one)
    assert "End every session" in words(client.get("/sign-out-everywhere/"))
    assert is_in(elsewhere)
    client.post("/sign-out-everywhere/")
    assert not is_in(client)
    assert not is_in(elsewhere)


def test_a_new_password_keeps_this_session_and_ends_the_others(client, keeper):
    elsewhere = Client()
    sign_in(client)
    sign_in(elsewhere)
    said = {"old": PASSWORD, "password": OTHER, "again": OTHER}
    assert client.post("/password/", said).url == "/password/"
    assert is_in(client)
    assert not is_in(elsewhere)
    assert sign_in(Client(), OTHER).status_code == 302


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"old": "wrong"}, "That is not the password until now."),
        ({"again": "other"}, "The two passwords differ."),
        ({"password": "short", "again": "short"}, "too short"),
        ({"password": "", "again": ""}, "This field is required."),
    ],
)
def test_a_password_that_cannot_be_is_told_at_its_field(client, keeper, change, sentence):
    sign_in(client)
    answer = client.post(
        "/password/", {"old": PASSWORD, "password": OTHER, "again": OTHER, **change}
    )
    assert answer.status_code == 422
    assert sentence in words(answer)
    keeper.refresh_from_db()
    assert keeper.check_password(PASSWORD)


def test_a_one_time_word_opens_once_and_sets_the_password(client):
    word = people.invite(login="first", role=Role.ADMIN)
    said = {"login": "first", "word": f" {word.upper()} ", "password": OTHER, "again": OTHER}
    assert "first" in words(client.get("/welcome/?name=first"))
    assert client.post("/welcome/", said).status_code == 302
    assert is_in(client)
    again = Client().post("/welcome/", said)
    assert again.status_code == 422
    assert "do not fit, or the word is used or over" in words(again)


def test_what_was_typed_is_kept_but_no_password_is_sent_back(client):
    people.invite(login="first", role=Role.ADMIN)
    said = {"login": "first", "word": "abcd", "password": OTHER, "again": OTHER}
    page = words(client.post("/welcome/", said))
    assert 'value="first"' in page
    assert 'value="abcd"' in page
    assert OTHER not in page


def test_a_word_is_over_after_a_day(client):
    """Oracle: interface, a one-time sign-in word is valid 24 h."""
    word = people.invite(login="first", role=Role.ADMIN)
    kept = SignInWord.objects.get()
    assert kept.expires_at - kept.made_at == timedelta(hours=24)
    SignInWord.objects.update(
        made_at=timezone.now() - timedelta(days=2), expires_at=timezone.now() - timedelta(days=1)
    )
    said = {"login": "first", "word": word, "password": OTHER, "again": OTHER}
    assert client.post("/welcome/", said).status_code == 422
    assert not User.objects.get().has_usable_password()


def test_a_weak_password_leaves_the_word_good(client):
    word = people.invite(login="first", role=Role.ADMIN)
    weak = {"login": "first", "word": word, "password": "password1234", "again": "password1234"}
    answer = client.post("/welcome/", weak)
    assert answer.status_code == 422
    assert "too common" in words(answer)
    strong = {**weak, "password": OTHER, "again": OTHER}
    assert client.post("/welcome/", strong).status_code == 302


def test_an_account_whose_last_day_is_over_is_out_and_stays_out(client, keeper):
    sign_in(client)
    keeper.account_ends_on = timezone.localdate()
    keeper.save()
    assert is_in(client)
    keeper.account_ends_on = timezone.localdate() - timedelta(days=1)
    keeper.save()
    assert not is_in(client)
    assert sign_in(client).status_code == 422


def test_passwords_are_kept_as_argon2(keeper):
    assert keeper.password.startswith("argon2$argon2id$")


def test_the_form_is_refused_without_its_token(keeper):
    assert sign_in(Client(enforce_csrf_checks=True)).status_code == 403
