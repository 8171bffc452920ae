"""Accounts: the one-time word, the password, the end of sessions, and where people serve."""

from __future__ import annotations

import secrets
from datetime import timedelta
from typing import TYPE_CHECKING, Final

from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.db import IntegrityError, transaction
from django.db.models import F, Q
from django.utils import timezone
from django.utils.crypto import constant_time_compare, salted_hmac

from structures import access
from structures.access import Act, insist
from structures.errors import Finding, Refused
from structures.models import District, Posting, Role, SignInWord, User, Watershed
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

WORD_HOURS: Final = 24  # interface: a one-time word is valid for a day
LETTERS: Final = "abcdefghjkmnpqrstuvwxyz23456789"  # none that is taken for another
GROUPS, GROUP_LETTERS = 4, 4  # 31 letters, 16 of them: 79 bits, so that a quick hash will do
NO_FIT: Final = "That name and word do not fit, or the word is used or over."


@transaction.atomic
def invite(
    *, login: str, role: str, district: District | None = None, by: User | None = None
) -> str:
    """Make an account, or reset one, and give its one-time word; the word is kept hashed.

    The password and every session end. `by` None is the operator at the machine's own shell.

    Raises
    ------
    Refused
        If the role is unknown or lacks a district, or the account is not the user's to reset.
    """
    _check_role(role, district)
    if by is not None:
        insist(by, Act.MANAGE_PEOPLE, district)
    user = User.objects.select_for_update().filter(username=login).first()
    if user is None:
        user = _new_user(login)
    elif by is not None:
        insist_keeps(by, user)
    word = _reset(user, by)
    if not access.postings(user).filter(role=role, district=district).exists():
        first = timezone.localdate() if district is None else today_of(district)
        posting = Posting(user=user, role=role, district=district, valid_from=first)
        posting._history_user = by
        posting.save()
    return word


@transaction.atomic
def renew_word(*, user_id: int, by: User) -> str:
    """Give a person another one-time word; password and sessions end, postings stay as they are.

    Raises
    ------
    Refused
        If the account is not the user's to reset.
    """
    user = User.objects.select_for_update().get(pk=user_id)
    insist_keeps(by, user)
    return _reset(user, by)


@transaction.atomic
def redeem_invite(*, login: str, word: str, password: str) -> User:
    """Take a one-time word for a new password; a word opens one account once.

    Raises
    ------
    Refused
        If name and word do not fit, the word is used or over, the account has ended, or the
        password is too weak; of a word that does not fit nothing more is said.
    """
    now = timezone.now()
    found = SignInWord.objects.select_for_update().select_related("user")
    kept = found.filter(user__username=login, used_at=None, expires_at__gt=now).first()
    if kept is None or not constant_time_compare(_word_hash(word), kept.word_hash):
        raise Refused(NO_FIT, remedy="Ask an administrator for a new word.")
    user = kept.user
    if not user.is_active or access.account_over(user):
        raise Refused(NO_FIT, remedy="Ask an administrator for a new word.")
    set_password(user_id=user.pk, password=password)
    kept.used_at = now
    kept.save()
    user.refresh_from_db()
    return user


@transaction.atomic
def set_password(*, user_id: int, password: str) -> None:
    """Set a password; every session of the account ends with the old one.

    Raises
    ------
    Refused
        If the password is too weak; `findings` says why.
    """
    user = User.objects.select_for_update().get(pk=user_id)
    try:
        validate_password(password, user)
    except ValidationError as error:
        found = tuple(
            Finding("password", "", words, "Take a longer or rarer one.")
            for words in error.messages
        )
        raise Refused(error.messages[0], where="password", findings=found) from error
    user.set_password(password)
    user.must_change = False
    user.save()


def end_sessions(*, user_id: int, by: User) -> None:
    """Sign a person out everywhere.

    Raises
    ------
    Refused
        If it is neither the user's own account nor one that they keep.
    """
    user = User.objects.get(pk=user_id)
    if user != by:
        insist_keeps(by, user)
    User.objects.filter(pk=user_id).update(sessions_round=F("sessions_round") + 1)


@transaction.atomic
def edit_person(
    *,
    user_id: int,
    licence_number: str,
    account_ends_on: date | None,
    by: User,
    email: str | None = None,
) -> User:
    """Change an engineer's licence number, the last day of an account, or (unless None) its address.

    Raises
    ------
    Refused
        If the account is not the user's to keep.
    """
    user = User.objects.select_for_update().get(pk=user_id)
    insist_keeps(by, user)
    user.licence_number = licence_number.strip()
    user.account_ends_on = account_ends_on
    user.email = user.email if email is None else email
    user.save()
    return user


@transaction.atomic
def set_posting(
    *,
    user_id: int,
    role: str,
    district: District | None,
    days: tuple[date, date | None],
    by: User,
    watersheds: Sequence[Watershed] = (),
    posting_id: int | None = None,
) -> Posting:
    """Give a posting, or change one: role, district, watersheds (none named: all), first and last day.

    Raises
    ------
    Refused
        If the user does not keep that district or posts themselves, a watershed is of another
        district, or the last day comes before the first.
    """
    user = User.objects.select_for_update().get(pk=user_id)
    insist(by, Act.MANAGE_PEOPLE, district)
    if user == by:
        raise Refused("Nobody gives a posting to themselves.", remedy="Ask another administrator.")
    _check_role(role, district)
    first, last = days
    if last is not None and last < first:
        what = f"The posting ends on {last}, before it begins on {first}."
        raise Refused(what, where="valid_to", remedy="Look at both days.")
    if any(one.district != district for one in watersheds):
        raise Refused(
            "A watershed is of another district.",
            where="watersheds",
            remedy="Name watersheds of the posting's own district.",
        )
    posting = Posting(user=user)
    if posting_id is not None:
        posting = Posting.objects.select_for_update().get(pk=posting_id, user=user)
        insist(by, Act.MANAGE_PEOPLE, posting)
        _check_lent(posting, role, district, days)
    posting.role, posting.district = role, district
    posting.valid_from, posting.valid_to = first, last
    posting._history_user = by
    posting.save()
    posting.watersheds.set(watersheds)
    return posting


def insist_keeps(by: User, user: User) -> None:
    """Refuse to touch an account that also serves where the user keeps no people.

    Raises
    ------
    Refused
        Without a word on where else: resetting it would open what lies there.
    """
    if access.keeps_office(by):
        return
    elsewhere = Q(district__isnull=True) | ~Q(district__in=access.administered(by))
    postings = Posting.objects.filter(user=user)
    if not postings.exists() or postings.filter(elsewhere).exists():
        raise Refused(
            "This account is not yours to change.",
            where=user.username,
            remedy="Ask an administrator of the whole office.",
        )


def _check_role(role: str, district: District | None) -> None:
    if role not in Role.values:
        known = ", ".join(Role.values)
        raise Refused(f"There is no role {role}.", where="role", remedy=f"One of: {known}.")
    if district is None and role != Role.ADMIN:
        what = f"The role {role} is held in a district."
        raise Refused(what, where="district", remedy="Name the district.")


def _check_lent(
    posting: Posting, role: str, district: District | None, days: tuple[date, date | None]
) -> None:
    """Let a posting that somebody lent be cut short, and nothing else: it is not the office's."""
    first, last = days
    same = (role, district, first) == (posting.role, posting.district, posting.valid_from)
    if posting.delegated_by_id is None or (same and last and last <= posting.valid_to):
        return
    raise Refused(
        f"{posting.delegated_by.username} lent this posting until {posting.valid_to}.",
        where="valid_to",
        remedy="It can be ended earlier; anything else is a posting of its own.",
    )


def _new_user(login: str) -> User:
    user = User(username=login)
    try:
        user.clean_fields(exclude=["password"])
    except ValidationError as error:
        words = error.message_dict.get("username", error.messages)[0]
        raise Refused(words, where="login", remedy="Take another login.") from error
    try:
        with transaction.atomic():
            user.save()
    except IntegrityError as error:
        raise Refused(
            f"{login} was invited at this very moment by somebody else.",
            where="login",
            remedy="Invite again if another word is needed.",
        ) from error
    return user


def _reset(user: User, by: User | None) -> str:
    user.set_unusable_password()
    user.must_change = True
    user.sessions_round += 1
    user.save()
    return _new_word(user, by)


def _new_word(user: User, by: User | None) -> str:
    now = timezone.now()
    letters = [secrets.choice(LETTERS) for _ in range(GROUPS * GROUP_LETTERS)]
    SignInWord.objects.update_or_create(
        user=user,
        defaults={
            "word_hash": _word_hash("".join(letters)),
            "made_by": by,
            "made_at": now,
            "expires_at": now + timedelta(hours=WORD_HOURS),
            "used_at": None,
        },
    )
    starts = range(0, len(letters), GROUP_LETTERS)
    return "-".join("".join(letters[start : start + GROUP_LETTERS]) for start in starts)


def _word_hash(word: str) -> str:
    """Hash a word as typed: capitals, blanks and dashes do not matter."""
    plain = "".join(word.lower().split()).replace("-", "")
    return salted_hmac("underbund.word", plain, algorithm="sha256").hexdigest()
