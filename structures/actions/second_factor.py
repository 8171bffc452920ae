"""The second factor: set up, asked for, used once a code, and taken away by two people only."""

from __future__ import annotations

import secrets
from datetime import datetime, timedelta
from typing import TYPE_CHECKING, Final

import pyotp
from django.db import transaction
from django.db.models import F
from django.utils import timezone
from django.utils.crypto import salted_hmac
from pyotp.exceptions import OTPVerificationError

from structures.actions.people import LETTERS, insist_keeps
from structures.actions.register import append
from structures.errors import Refused
from structures.models import FactorReset, RecoveryCode, SecondFactor, User
from structures.queries.second_factor import approves_beside, asks_factor, factor_of

if TYPE_CHECKING:
    from structures.models import District

RESET: Final = "second factor taken away"
FRESH: Final = timedelta(hours=12)  # a working day: what is decided later asks for a code again
STEPS_EITHER_SIDE: Final = 1  # a telephone's clock may be half a minute off (RFC 6238, 5.2)
RECOVERY_CODES: Final = 10
CODE_GROUPS, GROUP_LETTERS = 2, 5  # 31 letters, 10 of them: 49 bits behind the lock-out
NO_FIT: Final = "That code does not fit, or it was used before."


@transaction.atomic
def begin_factor(*, by: User) -> SecondFactor:
    """Make a second factor, which counts from its first code; one begun before is replaced.

    Raises
    ------
    Refused
        If there is one in force: it is not changed by whoever found the session open.
    """
    User.objects.select_for_update().get(pk=by.pk)
    if factor_of(by) is not None:
        raise Refused(
            "A second factor is set up already.",
            where=by.username,
            remedy="If it is lost, an administrator and another approver take it away.",
        )
    SecondFactor.objects.filter(user=by).delete()
    return SecondFactor.objects.create(
        user=by, secret=pyotp.random_base32(), made_at=timezone.now()
    )


def provisioning_address(factor: SecondFactor) -> str:
    """The address that a telephone's code program reads from the picture."""
    return pyotp.TOTP(factor.secret).provisioning_uri(
        name=factor.user.username, issuer_name="Underbund"
    )


@transaction.atomic
def confirm_factor(*, by: User, code: str, now: datetime) -> list[str]:
    """Put the begun factor in force by its first code; gives the recovery codes, shown once.

    Raises
    ------
    Refused
        If none was begun, or the code is not one of it.
    """
    factor = SecondFactor.objects.select_for_update().filter(user=by, confirmed_at=None).first()
    if factor is None:
        raise Refused("No second factor was begun.", remedy="Begin again.")
    step = _step_of(factor, code, now)
    if step is None:
        raise Refused(
            "That is not the code of this moment.",
            where="code",
            remedy="Look at the telephone's clock, then type the newest six digits.",
        )
    factor.confirmed_at, factor.last_step = now, step
    factor.save(update_fields=["confirmed_at", "last_step"])
    return _new_codes(factor)


@transaction.atomic
def renew_recovery_codes(*, by: User, code: str, now: datetime) -> list[str]:
    """Replace the printed list by a new one, against a code of the telephone.

    Raises
    ------
    Refused
        If there is no factor in force, or the code does not fit.
    """
    if not take_code(user_id=by.pk, code=code, now=now):
        raise Refused(NO_FIT, where="code", remedy="Wait for the next code and type that one.")
    return _new_codes(SecondFactor.objects.get(user=by))


@transaction.atomic
def take_code(*, user_id: int, code: str, now: datetime) -> bool:
    """Take a code of the telephone or of the printed list; each counts once.

    Whoever calls counts what did not fit against the lock-out of signing in.
    """
    factor = (
        SecondFactor.objects.select_for_update()
        .filter(user_id=user_id, confirmed_at__isnull=False)
        .first()
    )
    if factor is None:
        return False
    step = _step_of(factor, code, now)
    if step is not None:
        # The condition stands in the update: two requests at once cannot both use one code.
        return bool(
            SecondFactor.objects.filter(pk=factor.pk, last_step__lt=step).update(last_step=step)
        )
    kept = RecoveryCode.objects.filter(factor=factor, code_hash=_hash(code), used_at=None)
    return bool(kept.update(used_at=now))


@transaction.atomic
def ask_reset(*, user_id: int, reason: str, by: User) -> FactorReset:
    """Ask, as an administrator, that a lost second factor be taken away; an approver must agree.

    Raises
    ------
    Refused
        If the account is one's own or not the user's to keep, has no second factor, it was asked
        before, or no reason is given.
    """
    user = User.objects.select_for_update().get(pk=user_id)
    insist_keeps(by, user)
    if user == by:
        raise Refused(
            "Nobody asks for the reset of their own second factor.",
            remedy="Ask another administrator.",
        )
    if factor_of(user) is None:
        raise Refused(f"{user.username} has no second factor.", remedy="Nothing is to be done.")
    if FactorReset.objects.filter(user=user, agreed_by=None).exists():
        raise Refused(
            f"The reset for {user.username} is asked for already.",
            remedy="An approver of the district must agree to it.",
        )
    if not reason.strip():
        raise Refused("The reason is missing.", where="reason", remedy="Write what happened.")
    return FactorReset.objects.create(
        user=user, reason=reason.strip(), asked_by=by, asked_at=timezone.now()
    )


@transaction.atomic
def agree_reset(*, reset_id: int, by: User) -> None:
    """Agree, as another approver: factor and sessions end, and the register says by whom.

    Raises
    ------
    Refused
        If it was agreed before, or the user asked for it, is the person, or approves nowhere
        where the person serves.
    """
    reset = FactorReset.objects.select_for_update().get(pk=reset_id)
    user = User.objects.select_for_update().get(pk=reset.user_id)
    if reset.agreed_by_id is not None:
        raise Refused("It was agreed to already.", remedy="Nothing is to be done.")
    if by.pk in (reset.asked_by_id, reset.user_id):
        raise Refused("Two other people must take it away.", remedy="Ask another approver.")
    district = approves_beside(by, user).first()
    if district is None:
        raise Refused(
            "You approve nowhere where this person serves.",
            remedy="Ask an approver of their district.",
        )
    reset.agreed_by, reset.agreed_at = by, timezone.now()
    reset.save(update_fields=["agreed_by", "agreed_at"])
    SecondFactor.objects.filter(user=user).delete()
    User.objects.filter(pk=user.pk).update(sessions_round=F("sessions_round") + 1)
    append(
        district=district,
        by=by,
        act=RESET,
        subject=f"second factor of {user.username}",
        content={
            "person": user.username,
            "asked_by": reset.asked_by.username,
            "asked_at": reset.asked_at.isoformat(timespec="seconds"),
            "agreed_by": by.username,
            "reason": reset.reason,
        },
    )


def insist_given(*, by: User, district: District, given_at: datetime | None) -> None:
    """Refuse a decision without a code given in this session, where the district asks for one.

    Raises
    ------
    Refused
        If none is set up, none was given, or the last is older than a working day.
    """
    if not asks_factor(district):
        return
    if factor_of(by) is None:
        raise Refused(
            "Decisions of this district ask for a one-time code, and you have none set up.",
            remedy="Set it up under your name, 'One-time codes', then decide.",
        )
    if given_at is None or timezone.now() - given_at > FRESH:
        raise Refused(
            "This decision asks for a one-time code given within the last 12 hours.",
            remedy="Give one under your name, 'One-time codes', then decide.",
        )


def _step_of(factor: SecondFactor, code: str, now: datetime) -> int | None:
    try:
        return pyotp.TOTP(factor.secret).verify_and_get_timecode(
            "".join(code.split()), for_time=now, valid_window=STEPS_EITHER_SIDE
        )
    except OTPVerificationError:
        return None


def _new_codes(factor: SecondFactor) -> list[str]:
    factor.recovery_codes.all().delete()
    codes = ["-".join(_group() for _ in range(CODE_GROUPS)) for _ in range(RECOVERY_CODES)]
    RecoveryCode.objects.bulk_create(
        RecoveryCode(factor=factor, code_hash=_hash(code)) for code in codes
    )
    return codes


def _group() -> str:
    return "".join(secrets.choice(LETTERS) for _ in range(GROUP_LETTERS))


def _hash(code: str) -> str:
    """Hash a code as typed: capitals, blanks and dashes do not matter."""
    plain = "".join(code.lower().split()).replace("-", "")
    return salted_hmac("underbund.recovery", plain, algorithm="sha256").hexdigest()
