"""A posting lent for some days: by whom, to whom, how long, and what it does not allow."""

from __future__ import annotations

from datetime import date

import pytest

from structures import access
from structures.access import Act
from structures.actions.delegation import Days, delegate, end_delegation
from structures.actions.people import set_posting
from structures.errors import Refused
from structures.models import Entry, Posting, Role
from structures.queries.delegation import delegations_held, delegator_of, possible_delegates
from tests.factories import a_district, a_posting, a_site, a_user, a_watershed

pytestmark = pytest.mark.django_db
DAY = date(2026, 4, 10)
WEEK = Days(DAY, date(2026, 4, 16))


@pytest.fixture
def district():
    return a_district(invented=True, as_of=DAY)


@pytest.fixture
def officer(district):
    return a_user(Role.DISTRICT, district)


@pytest.fixture
def engineer(district):
    return a_user(Role.ENGINEER, district)


def lent(by, to, days=WEEK, reason="At the hearing in Arvenda."):
    own = by.postings.get(delegated_by=None)
    return delegate(posting_id=own.pk, to_id=to.pk, days=days, reason=reason, by=by)


def test_who_is_lent_a_posting_acts_in_the_others_name(district, officer, engineer):
    site = a_site(a_watershed(district))
    assert not access.may(engineer, Act.SANCTION, site)
    posting = lent(officer, engineer)
    assert access.may(engineer, Act.SANCTION, site)
    assert delegator_of(engineer, Act.SANCTION, site) == officer
    assert delegator_of(officer, Act.SANCTION, site) is None
    assert list(delegations_held(engineer)) == [posting]
    [entry] = Entry.objects.filter(act="delegation given")
    assert entry.content["instead_of"] == officer.username
    assert (entry.content["from"], entry.content["until"]) == ("2026-04-10", "2026-04-16")


def test_it_ends_by_itself_and_can_be_taken_back(district, officer, engineer):
    site = a_site(a_watershed(district))
    posting = lent(officer, engineer)
    district.as_of = date(2026, 4, 17)
    district.save()
    assert not access.may(engineer, Act.SANCTION, site)
    district.as_of = DAY
    district.save()
    end_delegation(posting_id=posting.pk, by=officer)
    assert not access.may(engineer, Act.SANCTION, site)
    assert Posting.objects.filter(pk=posting.pk).exists()
    with pytest.raises(Refused, match="You lent no such posting"):
        end_delegation(posting_id=posting.pk, by=engineer)


def test_it_holds_only_while_the_lender_serves(district, officer, engineer):
    site = a_site(a_watershed(district))
    lent(officer, engineer)
    officer.postings.filter(delegated_by=None).update(valid_to=date(2026, 4, 9))
    assert not access.may(engineer, Act.SANCTION, site)


def test_a_lent_posting_covers_no_more_than_its_lender_had(district, engineer):
    near, far = a_watershed(district), a_watershed(district, "TA")
    officer = a_user(Role.DISTRICT, district, watersheds=[near])
    lent(officer, engineer)
    assert access.may(engineer, Act.SANCTION, near)
    assert not access.may(engineer, Act.SANCTION, far)


def test_it_is_not_lent_on(officer, engineer, district):
    posting, third = lent(officer, engineer), a_user(Role.ENGINEER, district)
    with pytest.raises(Refused, match="Only a posting of your own"):
        delegate(posting_id=posting.pk, to_id=third.pk, days=WEEK, reason="on leave", by=engineer)


@pytest.mark.parametrize("role", [Role.ADMIN, Role.AUDITOR])
def test_administrators_and_auditors_stand_in_for_nobody(district, officer, role):
    """Oracle: what these roles may never do, in the office's practice."""
    other = a_user(role, district)
    assert other not in possible_delegates(officer)
    with pytest.raises(Refused, match="may not stand in"):
        lent(officer, other)


def test_nobody_of_another_district_stands_in(officer):
    with pytest.raises(Refused, match="may not stand in"):
        lent(officer, a_user(Role.DISTRICT, a_district("NX")))


@pytest.mark.parametrize(
    ("days", "words"),
    [
        (Days(DAY, date(2026, 4, 9)), "before it begins"),
        (Days(date(2026, 4, 9), DAY), "and it is 2026-04-10"),
        (Days(DAY, date(2027, 1, 1)), "Your own posting ends on 2026-12-31"),
    ],
)
def test_days_that_do_not_fit(district, engineer, days, words):
    officer = a_user(valid_to=date(2026, 12, 31))
    a_posting(officer, Role.DISTRICT, district, valid_to=date(2026, 12, 31))
    with pytest.raises(Refused, match=words):
        lent(officer, engineer, days)


def test_a_reason_is_asked_for(officer, engineer):
    with pytest.raises(Refused, match="The reason is missing"):
        lent(officer, engineer, reason=" ")


@pytest.mark.parametrize("role", [Role.FIELD, Role.ENGINEER, Role.AUDITOR, Role.ADMIN])
def test_only_who_decides_lends(district, engineer, role):
    with pytest.raises(Refused, match="Only a posting of your own"):
        lent(a_user(role, district), engineer)


def test_an_administrator_cuts_a_lent_posting_short_and_no_more(district, officer, engineer):
    keeper, posting = a_user(Role.ADMIN, district), lent(officer, engineer)
    said = {"user_id": engineer.pk, "posting_id": posting.pk, "district": district, "by": keeper}
    for days, role in (
        ((DAY, None), Role.DISTRICT),
        ((DAY, date(2026, 4, 17)), Role.DISTRICT),
        ((DAY, date(2026, 4, 12)), Role.PROGRAMME),
    ):
        with pytest.raises(Refused, match="lent this posting until 2026-04-16"):
            set_posting(role=role, days=days, **said)
    kept = set_posting(role=Role.DISTRICT, days=(DAY, date(2026, 4, 12)), **said)
    assert (kept.valid_to, kept.delegated_by) == (date(2026, 4, 12), officer)
