"""Codes of the telephone and of the list, each once; a lost one taken away by two people."""

from __future__ import annotations

import base64
import hashlib
import hmac
import struct
from datetime import UTC, datetime, timedelta

import pytest
from django.db import IntegrityError, transaction
from django.utils import timezone
from hypothesis import given
from hypothesis import strategies as st

from structures.actions import second_factor as acts
from structures.errors import Refused
from structures.models import Entry, FactorReset, Role, SecondFactor, Setting
from structures.queries.second_factor import needs_factor, resets_to_agree
from tests import factories as make

KEY = b"12345678901234567890"  # RFC 6238, appendix B
SECRET = base64.b32encode(KEY).decode()


def code_at(secret, moment, steps=0):
    """Oracle: RFC 4226, 5.3, written out."""
    step = int(moment.timestamp()) // 30 + steps
    hashed = hmac.digest(base64.b32decode(secret), struct.pack(">Q", step), hashlib.sha1)
    start = hashed[-1] & 15
    number = struct.unpack(">I", hashed[start : start + 4])[0] & 0x7FFFFFFF
    return f"{number % 10**6:06d}"


def at(seconds):
    return datetime.fromtimestamp(seconds, UTC)


@given(st.integers(min_value=60, max_value=4_000_000_000), st.binary(min_size=20, max_size=20))
def test_a_code_is_that_of_the_standard(seconds, key):
    factor = SecondFactor(secret=base64.b32encode(key).decode())
    assert acts._step_of(factor, code_at(factor.secret, at(seconds)), at(seconds)) is not None


@pytest.mark.parametrize(
    ("seconds", "code"),
    # RFC 6238, appendix B, SHA-1: the last six of its eight digits.
    [(59, "287082"), (1111111109, "081804"), (1234567890, "005924"), (2000000000, "279037")],
)
def test_the_printed_codes_of_the_standard_fit(seconds, code):
    assert code_at(SECRET, at(seconds)) == code
    assert acts._step_of(SecondFactor(secret=SECRET), code, at(seconds)) == seconds // 30


@pytest.fixture
def district(db):
    return make.a_district()


@pytest.fixture
def officer(district):
    return make.a_user(Role.DISTRICT, district, login="officer")


@pytest.fixture
def manager(district):
    return make.a_user(Role.PROGRAMME, district, login="manager")


@pytest.fixture
def admin(district):
    return make.a_user(Role.ADMIN, district, login="keeper")


def set_up(user):
    """A factor in force, and its list."""
    factor = acts.begin_factor(by=user)
    moment = timezone.now() - timedelta(minutes=10)
    codes = acts.confirm_factor(by=user, code=code_at(factor.secret, moment), now=moment)
    return SecondFactor.objects.get(user=user), codes


def take(user, code, now=None):
    return acts.take_code(user_id=user.pk, code=code, now=now or timezone.now())


def test_a_code_counts_once_and_half_a_minute_either_way(officer):
    factor, _ = set_up(officer)
    now = timezone.now()
    assert not take(officer, code_at(factor.secret, now, -2), now)
    assert not take(officer, code_at(factor.secret, now, 2), now)
    assert take(officer, code_at(factor.secret, now, -1), now)
    code = code_at(factor.secret, now)
    assert take(officer, f"{code[:3]} {code[3:]}", now)
    assert not take(officer, code, now)
    assert not take(officer, code_at(factor.secret, now, -1), now)
    assert take(officer, code_at(factor.secret, now, 1), now)


def test_a_code_of_the_list_counts_once_and_is_kept_hashed(officer, manager):
    factor, codes = set_up(officer)
    assert len(set(codes)) == 10
    kept = str(list(factor.recovery_codes.values()))
    assert not any(code in kept or code.replace("-", "") in kept for code in codes)
    set_up(manager)
    assert not take(manager, codes[0])
    assert take(officer, codes[0].upper().replace("-", " "))
    assert not take(officer, codes[0])
    assert take(officer, codes[1])


def test_a_new_list_voids_the_old_one_and_asks_for_a_code(officer):
    _, old = set_up(officer)
    with pytest.raises(Refused, match="does not fit"):
        acts.renew_recovery_codes(by=officer, code="000000", now=timezone.now())
    new = acts.renew_recovery_codes(by=officer, code=old[0], now=timezone.now())
    assert not take(officer, old[1])
    assert take(officer, new[1])


def test_it_counts_from_its_first_code_only(officer):
    factor = acts.begin_factor(by=officer)
    now = timezone.now()
    assert not take(officer, code_at(factor.secret, now), now)
    with pytest.raises(Refused, match="not the code of this moment"):
        acts.confirm_factor(by=officer, code="000 000", now=now)
    other = acts.begin_factor(by=officer)
    assert other.secret != factor.secret
    acts.confirm_factor(by=officer, code=code_at(other.secret, now), now=now)
    with pytest.raises(Refused, match="set up already"):
        acts.begin_factor(by=officer)


def test_a_lost_one_is_taken_away_by_two_others_and_registered(officer, manager, admin):
    set_up(officer)
    reset = acts.ask_reset(user_id=officer.pk, reason=" Telephone in the river. ", by=admin)
    with pytest.raises(Refused, match="asked for already"):
        acts.ask_reset(user_id=officer.pk, reason="Again.", by=admin)
    assert resets_to_agree(manager) == [reset]
    for nobody in (officer, admin):
        assert resets_to_agree(nobody) == []
        with pytest.raises(Refused, match="Two other people"):
            acts.agree_reset(reset_id=reset.pk, by=nobody)
    rounds = officer.sessions_round
    acts.agree_reset(reset_id=reset.pk, by=manager)
    officer.refresh_from_db()
    assert officer.sessions_round == rounds + 1
    assert not SecondFactor.objects.exists()
    entry = Entry.objects.get(act="second factor taken away")
    said = {key: entry.content[key] for key in ("person", "asked_by", "agreed_by", "reason")}
    assert said == {
        "person": "officer",
        "asked_by": "keeper",
        "agreed_by": "manager",
        "reason": "Telephone in the river.",
    }
    assert "secret" not in str(entry.content)
    with pytest.raises(Refused, match="agreed to already"):
        acts.agree_reset(reset_id=reset.pk, by=manager)


def test_who_may_not_ask_or_agree(officer, manager, admin):
    elsewhere = make.a_district("FA")
    stranger = make.a_user(Role.PROGRAMME, elsewhere)
    with pytest.raises(Refused, match="no second factor"):
        acts.ask_reset(user_id=officer.pk, reason="Lost.", by=admin)
    set_up(officer)
    set_up(admin)
    for by in (manager, make.a_user(Role.ADMIN, elsewhere)):
        with pytest.raises(Refused, match="not yours to change"):
            acts.ask_reset(user_id=officer.pk, reason="Lost.", by=by)
    with pytest.raises(Refused, match="their own"):
        acts.ask_reset(user_id=admin.pk, reason="Lost.", by=admin)
    with pytest.raises(Refused, match="reason is missing"):
        acts.ask_reset(user_id=officer.pk, reason="  ", by=admin)
    reset = acts.ask_reset(user_id=officer.pk, reason="Lost.", by=admin)
    assert resets_to_agree(stranger) == []
    with pytest.raises(Refused, match="approve nowhere"):
        acts.agree_reset(reset_id=reset.pk, by=stranger)
    with pytest.raises(Refused, match="approve nowhere"):
        acts.agree_reset(
            reset_id=reset.pk, by=make.a_user(Role.ENGINEER, officer.postings.get().district)
        )


def test_the_database_itself_wants_two_others(officer, admin):
    with pytest.raises(IntegrityError), transaction.atomic():
        FactorReset.objects.create(
            user=officer,
            reason="Lost.",
            asked_by=admin,
            asked_at=timezone.now(),
            agreed_by=admin,
            agreed_at=timezone.now(),
        )


def ask_for_it(district):
    Setting.objects.create(
        district=district,
        key="second_factor_for_approvers",
        value=1,
        source="A",
        owner="P",
        changed_by=make.a_user(),
        reason="Two signed in with one password.",
    )


def test_a_decision_asks_for_a_fresh_code_only_where_the_district_does(district, officer):
    given = {"by": officer, "district": district}
    acts.insist_given(**given, given_at=None)
    assert not needs_factor(officer)
    ask_for_it(district)
    assert needs_factor(officer)
    assert not needs_factor(make.a_user(Role.ENGINEER, district))
    assert not needs_factor(make.a_user(Role.PROGRAMME, make.a_district("FA")))
    now = timezone.now()
    with pytest.raises(Refused, match="none set up"):
        acts.insist_given(**given, given_at=now)
    set_up(officer)
    acts.insist_given(**given, given_at=now - timedelta(hours=11, minutes=59))
    for late in (None, now - timedelta(hours=12, minutes=1)):
        with pytest.raises(Refused, match="within the last 12 hours"):
            acts.insist_given(**given, given_at=late)
