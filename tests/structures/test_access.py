"""Postings: what each role sees and may do, where and when."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from django.contrib.auth.models import AnonymousUser
from django.utils import timezone

from structures import access
from structures.access import MAY, Act
from structures.errors import Refused
from structures.models import Role
from tests.factories import a_district, a_posting, a_site, a_user, a_watershed

pytestmark = pytest.mark.django_db


@pytest.fixture
def two_districts():
    here, there = a_district("QU"), a_district("ZZ")
    sites = [
        a_site(a_watershed(here, "OD"), "OD-01"),
        a_site(a_watershed(here, "TA"), "TA-01"),
        a_site(a_watershed(there, "ZA"), "ZA-01"),
    ]
    return here, there, sites


def seen(user):
    return (
        sorted(access.districts(user).values_list("code", flat=True)),
        sorted(access.watersheds(user).values_list("code", flat=True)),
        sorted(access.sites(user).values_list("code", flat=True)),
    )


NOTHING = ([], [], [])


@pytest.mark.parametrize("role", Role.values)
def test_each_role_sees_its_own_district_and_no_other(two_districts, role):
    here, there, _ = two_districts
    assert seen(a_user(role, here)) == (["QU"], ["OD", "TA"], ["OD-01", "TA-01"])
    assert seen(a_user(role, there)) == (["ZZ"], ["ZA"], ["ZA-01"])


@pytest.mark.parametrize("role", Role.values)
def test_named_watersheds_narrow_a_posting(two_districts, role):
    here, _, sites = two_districts
    user = a_user(role, here, watersheds=[sites[0].watershed])
    assert seen(user) == (["QU"], ["OD"], ["OD-01"])
    assert access.roles(user, access.place_of(sites[0])) == {role}
    assert access.roles(user, access.place_of(sites[1])) == set()
    assert access.roles(user, access.place_of(here)) == {role}


@pytest.mark.parametrize("role", Role.values)
@pytest.mark.parametrize(
    "days",
    [
        {"valid_to": timezone.localdate() - timedelta(days=1)},
        {"valid_from": timezone.localdate() + timedelta(days=1)},
    ],
)
def test_a_posting_over_or_not_begun_shows_nothing(two_districts, role, days):
    here, _, sites = two_districts
    user = a_user(role, here, **days)
    assert seen(user) == NOTHING
    assert not any(access.may(user, act, thing) for act in Act for thing in (sites[0], here, None))


def test_a_posting_holds_on_its_last_day(two_districts):
    here, _, _ = two_districts
    user = a_user(Role.FIELD, here, valid_to=timezone.localdate())
    assert seen(user)[0] == ["QU"]


def test_a_district_that_stands_still_counts_its_own_day():
    district = a_district(invented=True, as_of=date(2026, 4, 10))
    assert seen(a_user(Role.FIELD, district, valid_to=date(2026, 4, 10)))[0] == ["QU"]
    assert seen(a_user(Role.FIELD, district, valid_to=date(2026, 4, 9))) == NOTHING
    assert seen(a_user(Role.FIELD, district, valid_from=date(2026, 4, 11))) == NOTHING


def test_nobody_and_accounts_out_of_force_see_nothing(two_districts):
    here, _, _ = two_districts
    ended, resting = a_user(Role.ENGINEER, here), a_user(Role.ENGINEER, here)
    ended.account_ends_on = timezone.localdate() - timedelta(days=1)
    resting.is_active = False
    for user in (AnonymousUser(), a_user(), ended, resting):
        assert seen(user) == NOTHING
        assert not access.may(user, Act.SEE, here)


def test_a_superuser_flag_opens_nothing(two_districts):
    user = a_user()
    user.is_superuser = user.is_staff = True
    assert seen(user) == NOTHING


def test_the_administrator_of_the_office_keeps_people_and_sees_no_site(two_districts):
    here, _, sites = two_districts
    user = a_user(Role.ADMIN)
    assert seen(user) == NOTHING
    assert sorted(access.administered(user).values_list("code", flat=True)) == ["QU", "ZZ"]
    allowed = {act for act in Act if access.may(user, act, here)}
    assert allowed == {
        Act.MANAGE_PEOPLE,
        Act.MANAGE_DISTRICT,
        Act.SET_ENGINEERING,
        Act.SET_OFFICE,
        Act.SET_PROGRAMME,
    }
    assert not access.may(user, Act.SEE, sites[0])


def test_an_administrator_of_a_district_keeps_that_one_only(two_districts):
    here, there, _ = two_districts
    user = a_user(Role.ADMIN, here)
    assert list(access.administered(user)) == [here]
    assert access.may(user, Act.MANAGE_PEOPLE, here)
    assert not access.may(user, Act.MANAGE_PEOPLE, there)
    assert not access.may(user, Act.MANAGE_PEOPLE)


@pytest.mark.parametrize("role", Role.values)
def test_a_role_may_what_the_table_says_at_home_and_nothing_elsewhere(two_districts, role):
    here, there, sites = two_districts
    user = a_user(role, here)
    for act in Act:
        assert access.may(user, act, sites[0]) == (role in MAY[act])
        assert not access.may(user, act, sites[2])
        assert not access.may(user, act, there)


def test_the_auditor_writes_nothing():
    """Source: the office's practice, people: read-only."""
    assert [act for act in Act if Role.AUDITOR in MAY[act]] == [
        Act.SEE,
        Act.SEE_MONEY,
    ]


def test_field_staff_never_price_and_administrators_never_decide():
    """Source: the office's practice, what each role may never do."""
    priced = MAY[Act.REQUEST_ESTIMATE] | MAY[Act.IMPORT_SCHEDULE] | MAY[Act.SEE_MONEY]
    assert Role.FIELD not in priced
    for act in (Act.SETTLE_ROCK, Act.REQUEST_ESTIMATE, Act.ACCEPT_SURVEY, Act.IMPORT_SCHEDULE):
        assert Role.ADMIN not in MAY[act]


def test_two_postings_add_up(two_districts):
    here, there, sites = two_districts
    user = a_user(Role.AUDITOR, here)
    a_posting(user, Role.ENGINEER, there)
    assert seen(user)[2] == ["OD-01", "TA-01", "ZA-01"]
    assert not access.may(user, Act.SETTLE_ROCK, sites[0])
    assert access.may(user, Act.SETTLE_ROCK, sites[2])


def test_a_refusal_names_roles_and_nothing_of_the_thing(two_districts):
    _, there, sites = two_districts
    with pytest.raises(Refused) as refused:
        access.insist(a_user(Role.FIELD, there), Act.SETTLE_ROCK, sites[0])
    assert refused.value.sentence() == (
        "You may not settle a rock line here. Ask somebody posted here as engineer."
    )


def test_scopes_cost_one_query_each(two_districts, django_assert_num_queries):
    user = a_user(Role.ENGINEER, two_districts[0])
    with django_assert_num_queries(3):
        assert len(list(access.districts(user))) == 1
        assert len(list(access.watersheds(user))) == 2
        assert len(list(access.sites(user))) == 2
