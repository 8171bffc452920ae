"""People pages: who is looked at first, letting in, posting, ending; and who may not."""

from __future__ import annotations

import re
from datetime import date, timedelta

import pytest
from django.utils import timezone

from structures.actions import people
from structures.models import Posting, Role, SignInWord, User
from tests.factories import PASSWORD, a_district, a_posting, a_user, a_watershed

pytestmark = pytest.mark.django_db
YESTERDAY = timezone.localdate() - timedelta(days=1)


def words(answer):
    return " ".join(answer.content.decode().split())


@pytest.fixture
def near():
    return a_district("QU")


@pytest.fixture
def admin(near, client):
    """An administrator of the one district, signed in."""
    user = a_user(Role.ADMIN, near, login="keeps-qu")
    client.force_login(user)
    return user


@pytest.fixture
def chief(client):
    """An administrator of the whole office, signed in."""
    user = a_user(Role.ADMIN, login="keeps-all")
    client.force_login(user)
    return user


def new_person(client, near, **changes):
    said = {"login": "fresh", "role": "field", "district": near.pk, "valid_from": "2026-01-01"}
    return client.post("/people/new/", {**said, **changes})


def in_with_password(user):
    people.set_password(user_id=user.pk, password=PASSWORD)
    user.refresh_from_db()
    return user


def test_those_to_look_at_stand_first_with_the_reason(client, admin, near):
    client.force_login(in_with_password(admin))
    in_with_password(a_user(Role.FIELD, near, login="a-fine"))
    over = in_with_password(a_user(Role.FIELD, near, login="y-over"))
    User.objects.filter(pk=over.pk).update(account_ends_on=YESTERDAY)
    in_with_password(a_user(Role.FIELD, near, login="x-idle", valid_to=YESTERDAY))
    twice = in_with_password(a_user(Role.FIELD, near, login="z-twice"))
    a_posting(twice, Role.FIELD, near, watersheds=[a_watershed(near)])
    text = words(client.get("/people/"))
    order = re.findall(r'rowheader"> <a href="[^"]*">([^<]+)', text)
    assert order == ["x-idle", "y-over", "z-twice", "a-fine", "keeps-qu"]
    assert "3 to look at" in text
    for reason in (
        "The account is over.",
        "No posting is in force or to come",
        "Posted twice as field staff in one place.",
    ):
        assert text.count(reason) == 1


def test_one_role_after_another_or_in_other_watersheds_is_not_twice(client, admin, near):
    one, other = a_watershed(near, "OD"), a_watershed(near, "TA")
    user = in_with_password(a_user(Role.FIELD, near, watersheds=[one]))
    a_posting(user, Role.FIELD, near, watersheds=[other])
    a_posting(user, Role.ENGINEER, near)
    assert "Posted twice" not in words(client.get(f"/people/{user.pk}/"))


def test_a_new_person_comes_in_by_the_word_shown_once(client, admin, near):
    watershed = a_watershed(near)
    answer = new_person(client, near, watersheds=[watershed.pk], valid_to="2026-12-31")
    word = re.search(r'class="once">([a-z2-9-]{19})<', answer.content.decode()).group(1)
    assert "no-store" in answer["Cache-Control"]
    user = people.redeem_invite(login="fresh", word=word, password=PASSWORD)
    posting = Posting.objects.get(user=user)
    assert (posting.role, posting.district, list(posting.watersheds.all())) == (
        *("field", near),
        [watershed],
    )
    assert (posting.valid_from, posting.valid_to) == (date(2026, 1, 1), date(2026, 12, 31))
    assert word not in words(client.get(f"/people/{user.pk}/"))


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"login": "keeps-qu"}, "keeps-qu is taken."),
        ({"login": "two words"}, "Enter a valid username."),
        ({"login": ""}, "This field is required."),
        ({"valid_to": "2025-01-01"}, "before it begins"),
        ({"valid_from": "31.2.2026"}, "Enter a valid date."),
        ({"district": ""}, "This field is required."),
        ({"role": "king"}, "Select a valid choice."),
    ],
)
def test_what_cannot_be_is_told_at_its_field_and_nothing_is_kept(
    client, admin, near, change, sentence
):
    answer = new_person(client, near, **change)
    assert answer.status_code == 422
    assert sentence in words(answer)
    assert 'value="2026-01-01"' in words(answer) or "valid_from" in change
    assert set(User.objects.values_list("username", flat=True)) == {"keeps-qu"}
    assert not SignInWord.objects.exists()


def test_watersheds_of_another_district_are_refused(client, chief, near):
    other = a_watershed(a_district("ZZ"), "ZZ-1")
    answer = new_person(client, near, watersheds=[other.pk])
    assert answer.status_code == 422
    assert "A watershed is of another district." in words(answer)


def test_only_the_office_makes_administrators_of_the_whole_office(client, chief):
    answer = client.post(
        "/people/new/", {"login": "second", "role": "admin", "valid_from": "2026-01-01"}
    )
    assert answer.status_code == 200
    assert Posting.objects.get(user__username="second").district is None


def test_a_posting_is_given_changed_and_ended(client, admin, near):
    user = in_with_password(a_user(Role.FIELD, near))
    url = f"/people/{user.pk}/postings/"
    said = {"role": "engineer", "district": near.pk, "valid_from": "2026-02-01"}
    assert client.post(f"{url}new/", said).url == f"/people/{user.pk}/"
    posting = user.postings.get(role="engineer")
    page = words(client.get(f"{url}{posting.pk}/"))
    assert 'value="2026-02-01"' in page
    assert '<option value="engineer" selected>' in page
    client.post(f"{url}{posting.pk}/", {**said, "valid_to": "2026-03-31"})
    posting.refresh_from_db()
    assert posting.valid_to == date(2026, 3, 31)


def test_nobody_posts_themselves(client, admin, near):
    said = {"role": "engineer", "district": near.pk, "valid_from": "2026-02-01"}
    answer = client.post(f"/people/{admin.pk}/postings/new/", said)
    assert answer.status_code == 422
    assert "Nobody gives a posting to themselves." in words(answer)


def test_an_account_is_ended_on_a_day_and_its_licence_kept(client, admin, near):
    user = a_user(Role.ENGINEER, near)
    said = {"licence_number": "L-77", "account_ends_on": "2026-06-30"}
    assert client.post(f"/people/{user.pk}/", said).status_code == 302
    user.refresh_from_db()
    assert (user.licence_number, user.account_ends_on) == ("L-77", date(2026, 6, 30))


def test_another_word_ends_the_old_password_and_adds_no_posting(client, admin, near):
    user = in_with_password(a_user(Role.FIELD, near, valid_to=YESTERDAY))
    answer = client.post(f"/people/{user.pk}/word/")
    assert 'class="once"' in answer.content.decode()
    user.refresh_from_db()
    assert not user.has_usable_password()
    assert user.postings.count() == 1


def test_a_lost_device_is_signed_out_from_here(client, admin, near):
    user = a_user(Role.FIELD, near)
    assert client.post(f"/people/{user.pk}/end-sessions/").status_code == 302
    user.refresh_from_db()
    assert user.sessions_round == 1


def test_people_of_another_district_are_not_there(client, admin):
    far = a_user(Role.FIELD, a_district("ZZ"), login="far-away")
    a_posting(admin, Role.ADMIN, a_district("YY"), valid_to=YESTERDAY)
    assert "far-away" not in words(client.get("/people/?q=far"))
    for end in ("", "word/", "end-sessions/", "postings/new/"):
        assert client.post(f"/people/{far.pk}/{end}").status_code == 404
    assert client.get(f"/people/{far.pk}/").status_code == 404


def test_an_account_that_serves_elsewhere_too_is_not_this_administrators_to_reset(
    client, admin, near
):
    both = in_with_password(a_user(Role.FIELD, near))
    a_posting(both, Role.FIELD, a_district("ZZ", name="Zedland"))
    answer = client.post(f"/people/{both.pk}/word/")
    assert answer.status_code == 422
    assert "This account is not yours to change." in words(answer)
    assert "Zedland" not in words(answer)
    both.refresh_from_db()
    assert both.has_usable_password()


@pytest.mark.parametrize("role", [role for role in Role if role != Role.ADMIN])
def test_for_anybody_else_there_are_no_people_pages(client, near, role):
    user = a_user(role, near)
    client.force_login(user)
    for url in ("/people/", "/people/new/", f"/people/{user.pk}/"):
        assert client.get(url).status_code == 404
    assert "People" not in words(client.get("/password/"))


def test_a_long_list_is_paged_and_searched(client, admin, near):
    User.objects.bulk_create(User(username=f"n-{n:03}", password="!") for n in range(60))
    Posting.objects.bulk_create(
        Posting(user=user, role=Role.FIELD, district=near, valid_from=date(2022, 1, 1))
        for user in User.objects.filter(username__startswith="n-")
    )
    assert "Sheet 1 of 3, 61 in all" in words(client.get("/people/"))
    assert "n-059" in words(client.get("/people/?page=3"))
    assert re.findall(r"n-0\d\d(?=</a>)", words(client.get("/people/?q=n-05"))) == [
        f"n-05{n}" for n in range(10)
    ]


def test_the_list_costs_the_same_queries_for_many(
    client, admin, near, django_assert_max_num_queries
):
    for _ in range(12):
        a_user(Role.FIELD, near, watersheds=[])
    with django_assert_max_num_queries(14):
        client.get("/people/")
