"""Accounts: the one-time word, the password, the end of sessions, and postings."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from django.contrib.auth import get_user
from django.http import HttpRequest
from django.test import Client
from django.utils import timezone

from structures import access
from structures.actions.people import (
    edit_person,
    end_sessions,
    invite,
    redeem_invite,
    set_password,
    set_posting,
)
from structures.errors import Refused
from structures.models import Posting, Role, SignInWord, User
from structures.queries.people import administered_people, administered_postings, own_postings
from tests.factories import PASSWORD, a_district, a_posting, a_user, a_watershed

pytestmark = pytest.mark.django_db
NO_FIT = "That name and word do not fit, or the word is used or over."


@pytest.fixture(autouse=True)
def _quick_hash(settings):
    """The hash in use is slow by design; which one it is belongs to the settings' own tests."""
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]


@pytest.fixture
def district():
    return a_district()


@pytest.fixture
def admin(district):
    return a_user(Role.ADMIN, district)


def test_the_first_administrator_comes_in_by_the_shell():
    word = invite(login="admin-1", role="admin")
    user = redeem_invite(login="admin-1", word=word, password=PASSWORD)
    assert user.check_password(PASSWORD)
    assert not user.must_change
    assert access.keeps_office(user)


def test_the_word_is_kept_hashed_and_has_no_letter_taken_for_another(district, admin):
    word = invite(login="field-1", role="field", district=district, by=admin)
    kept = SignInWord.objects.get()
    assert word.replace("-", "") not in kept.word_hash
    assert len(kept.word_hash) == 64
    assert (len(word), word.count("-")) == (19, 3)
    assert not set(word) & set("01ilo")
    assert kept.made_by == admin
    assert kept.expires_at - kept.made_at == timedelta(hours=24)


def test_a_word_is_read_in_any_case_and_spacing(district):
    word = invite(login="field-1", role="field", district=district)
    spaced = word.upper().replace("-", " ")
    assert redeem_invite(login="field-1", word=spaced, password=PASSWORD).username == "field-1"


def test_a_word_opens_once(district):
    word = invite(login="field-1", role="field", district=district)
    redeem_invite(login="field-1", word=word, password=PASSWORD)
    with pytest.raises(Refused, match=NO_FIT):
        redeem_invite(login="field-1", word=word, password="another-long-password")
    assert User.objects.get(username="field-1").check_password(PASSWORD)


def test_a_word_is_over_after_a_day(district):
    word = invite(login="field-1", role="field", district=district)
    past = timezone.now() - timedelta(hours=24, seconds=1)
    SignInWord.objects.update(made_at=past, expires_at=past + timedelta(hours=24))
    with pytest.raises(Refused, match=NO_FIT):
        redeem_invite(login="field-1", word=word, password=PASSWORD)


def test_a_new_word_ends_the_old_one(district):
    old = invite(login="field-1", role="field", district=district)
    new = invite(login="field-1", role="field", district=district)
    with pytest.raises(Refused, match=NO_FIT):
        redeem_invite(login="field-1", word=old, password=PASSWORD)
    assert redeem_invite(login="field-1", word=new, password=PASSWORD)


@pytest.mark.parametrize("case", ["wrong word", "unknown login", "account ended", "account off"])
def test_every_other_case_gets_the_same_words(district, case):
    word = invite(login="field-1", role="field", district=district)
    yesterday = timezone.localdate() - timedelta(days=1)
    if case == "account ended":
        User.objects.update(account_ends_on=yesterday)
    if case == "account off":
        User.objects.update(is_active=False)
    login = "field-9" if case == "unknown login" else "field-1"
    typed = "aaaa-bbbb-cccc-dddd" if case == "wrong word" else word
    with pytest.raises(Refused) as refused:
        redeem_invite(login=login, word=typed, password=PASSWORD)
    assert refused.value.sentence() == f"{NO_FIT} Ask an administrator for a new word."


@pytest.mark.parametrize("weak", ["short", "password1234", "field-worker-1"])
def test_a_weak_password_leaves_the_word_good(district, weak):
    word = invite(login="field-worker-1", role="field", district=district)
    with pytest.raises(Refused) as refused:
        redeem_invite(login="field-worker-1", word=word, password=weak)
    assert refused.value.where == "password"
    assert redeem_invite(login="field-worker-1", word=word, password=PASSWORD)


def test_an_invite_resets_an_account_and_keeps_its_postings(district, admin):
    user = a_user(Role.FIELD, district, login="field-1")
    set_password(user_id=user.pk, password=PASSWORD)
    client = Client()
    sign_in(client, user)
    invite(login="field-1", role="field", district=district, by=admin)
    user.refresh_from_db()
    assert (user.has_usable_password(), user.must_change) == (False, True)
    assert Posting.objects.filter(user=user).count() == 1
    assert not signed_in(client)


def test_a_posting_by_invite_begins_on_the_day_of_its_district():
    district = a_district(invented=True, as_of=date(2026, 4, 10))
    invite(login="field-1", role="field", district=district)
    assert Posting.objects.get().valid_from == date(2026, 4, 10)
    assert access.districts(User.objects.get()).count() == 1


@pytest.mark.parametrize(
    ("login", "role", "here", "words"),
    [
        ("x-1", "king", True, "role: There is no role king. One of: field, engineer, district, "),
        ("x-1", "field", False, "district: The role field is held in a district. Name the dist"),
        ("no blanks", "field", True, "login: Enter a valid username."),
    ],
)
def test_an_invite_that_cannot_be(district, login, role, here, words):
    with pytest.raises(Refused) as refused:
        invite(login=login, role=role, district=district if here else None)
    assert refused.value.sentence().startswith(words)
    assert not User.objects.filter(username=login).exists()


def sign_in(client, user):
    client.force_login(user, backend="structures.queries.accounts.AccountBackend")


def signed_in(client):
    """Ask as the middleware of every request does."""
    request = HttpRequest()
    request.session = client.session
    return get_user(request).is_authenticated


class TestSessions:
    @pytest.fixture
    def user(self, district):
        user = a_user(Role.FIELD, district)
        set_password(user_id=user.pk, password=PASSWORD)
        return User.objects.get(pk=user.pk)

    @pytest.fixture
    def clients(self, user):
        pair = Client(), Client()
        for client in pair:
            sign_in(client, user)
            assert signed_in(client)
        return pair

    def test_signing_out_everywhere_ends_every_session(self, user, clients):
        end_sessions(user_id=user.pk, by=user)
        assert [signed_in(client) for client in clients] == [False, False]
        sign_in(clients[0], User.objects.get(pk=user.pk))
        assert signed_in(clients[0])

    def test_a_new_password_ends_every_session(self, user, clients):
        set_password(user_id=user.pk, password="another-long-password")
        assert [signed_in(client) for client in clients] == [False, False]

    def test_an_administrator_ends_them_and_a_stranger_does_not(self, user, clients, admin):
        with pytest.raises(Refused, match="This account is not yours to change"):
            end_sessions(user_id=user.pk, by=a_user(Role.ADMIN, a_district("ZZ")))
        assert signed_in(clients[0])
        end_sessions(user_id=user.pk, by=admin)
        assert not signed_in(clients[0])


class TestPostings:
    days = (date(2026, 1, 1), None)

    def test_a_posting_is_given_and_changed_with_its_history(self, district, admin):
        user = a_user()
        watershed = a_watershed(district)
        posting = set_posting(
            user_id=user.pk,
            role="engineer",
            district=district,
            watersheds=[watershed],
            days=self.days,
            by=admin,
        )
        assert list(access.watersheds(user)) == [watershed]
        until = date(2026, 6, 30)
        set_posting(
            user_id=user.pk,
            role="engineer",
            district=district,
            days=(date(2026, 1, 1), until),
            by=admin,
            posting_id=posting.pk,
        )
        posting.refresh_from_db()
        assert (posting.valid_to, posting.watersheds.count()) == (until, 0)
        assert {row.history_user for row in posting.history.all()} == {admin}

    def test_nobody_posts_themselves(self, district, admin):
        with pytest.raises(Refused, match="Nobody gives a posting to themselves"):
            set_posting(
                user_id=admin.pk, role="engineer", district=district, days=self.days, by=admin
            )

    @pytest.mark.parametrize("role", [role for role in Role.values if role != Role.ADMIN])
    def test_only_administrators_post_and_invite(self, district, role):
        by = a_user(role, district)
        with pytest.raises(Refused, match="You may not manage people here"):
            set_posting(user_id=a_user().pk, role="field", district=district, days=self.days, by=by)
        with pytest.raises(Refused, match="You may not manage people here"):
            invite(login="x-1", role="field", district=district, by=by)

    def test_an_administrator_of_one_district_posts_in_no_other(self, admin):
        elsewhere = a_district("ZZ")
        for district, role in ((elsewhere, "field"), (None, "admin")):
            with pytest.raises(Refused, match="You may not manage people here"):
                set_posting(
                    user_id=a_user().pk, role=role, district=district, days=self.days, by=admin
                )

    def test_an_account_that_serves_elsewhere_too_is_not_reset(self, district, admin):
        """Else an administrator would come into the other district by a word of their own."""
        user = a_user(Role.FIELD, district, login="field-1")
        a_posting(user, Role.ENGINEER, a_district("ZZ"))
        with pytest.raises(Refused) as refused:
            invite(login="field-1", role="field", district=district, by=admin)
        assert refused.value.sentence() == (
            "field-1: This account is not yours to change. "
            "Ask an administrator of the whole office."
        )
        for login, role in (("boss", "admin"), ("nobody", None)):
            a_user(role, None, login=login)
            with pytest.raises(Refused, match="not yours to change"):
                invite(login=login, role="field", district=district, by=admin)
        assert invite(login="field-1", role="field", district=district, by=a_user(Role.ADMIN))

    @pytest.mark.parametrize(
        ("changes", "words"),
        [
            (
                {"days": (date(2026, 2, 1), date(2026, 1, 31))},
                "valid_to: The posting ends on 2026-01-31, before it begins on 2026-02-01.",
            ),
            ({"role": "king"}, "role: There is no role king."),
        ],
    )
    def test_a_posting_that_cannot_be(self, district, admin, changes, words):
        values = {"role": "field", "days": self.days, **changes}
        with pytest.raises(Refused) as refused:
            set_posting(user_id=a_user().pk, district=district, by=admin, **values)
        assert refused.value.sentence().startswith(words)

    def test_a_watershed_of_another_district_is_refused(self, district, admin):
        with pytest.raises(Refused, match="A watershed is of another district"):
            set_posting(
                user_id=a_user().pk,
                role="field",
                district=district,
                watersheds=[a_watershed(a_district("ZZ"), "ZA")],
                days=self.days,
                by=admin,
            )

    def test_licence_and_last_day_of_an_account(self, district, admin):
        user = a_user(Role.ENGINEER, district)
        edited = edit_person(
            user_id=user.pk, licence_number=" L-77 ", account_ends_on=date(2026, 6, 30), by=admin
        )
        assert (edited.licence_number, edited.account_ends_on) == ("L-77", date(2026, 6, 30))
        with pytest.raises(Refused, match="not yours to change"):
            edit_person(user_id=user.pk, licence_number="", account_ends_on=None, by=user)

    def test_people_are_seen_by_whom_they_are_kept(
        self, district, admin, django_assert_num_queries
    ):
        here = a_user(Role.FIELD, district)
        a_posting(here, Role.FIELD, a_district("ZZ"))
        a_user(Role.FIELD, a_district("YY"))
        with django_assert_num_queries(3):
            people = {one.username: one.kept_postings for one in administered_people(admin)}
        assert sorted(people) == sorted([here.username, admin.username])
        assert [one.district.code for one in people[here.username]] == ["QU"]
        assert administered_people(a_user(Role.ENGINEER, district)).count() == 0
        office = a_user(Role.ADMIN)
        assert administered_people(office).count() == User.objects.count()
        assert administered_postings(office).count() == Posting.objects.count()
        assert [one.role for one in own_postings(here)] == ["field", "field"]
