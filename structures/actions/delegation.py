"""Letting somebody act for oneself: a posting lent for some days, shown on what is decided by it."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import timedelta
from typing import TYPE_CHECKING

from django.db import transaction

from structures.access import Act, insist
from structures.actions.register import append
from structures.errors import Refused
from structures.models import Posting, User
from structures.queries.delegation import own_to_delegate, possible_delegates
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from datetime import date


@dataclass(frozen=True, slots=True)
class Days:
    """First and last day, both counted."""

    first: date
    last: date


@transaction.atomic
def delegate(*, posting_id: int, to_id: int, days: Days, reason: str, by: User) -> Posting:
    """Lend one's own posting to somebody who serves in the district, from a day to a day.

    Raises
    ------
    Refused
        If the posting is not one's own or was itself lent, the person may not stand in, the days
        do not fit, or no reason is given.
    """
    to = User.objects.select_for_update().get(pk=to_id)
    own = own_to_delegate(by).filter(pk=posting_id).first()
    if own is None:
        raise Refused(
            "Only a posting of your own, in force, can be lent.",
            where="posting",
            remedy="Choose one of the list.",
        )
    insist(by, Act.DELEGATE, own.district)
    if not possible_delegates(by).filter(pk=to.pk).exists():
        raise Refused(
            f"{to.username} may not stand in for you.",
            where="to",
            remedy="Choose somebody of the list: neither administrators nor auditors decide.",
        )
    if not reason.strip():
        raise Refused("The reason is missing.", where="reason", remedy="Write why.")
    _check_days(own, days)
    lent = Posting(
        user=to,
        role=own.role,
        district=own.district,
        valid_from=days.first,
        valid_to=days.last,
        delegated_by=by,
    )
    lent._history_user = by
    lent.save()
    lent.watersheds.set(own.watersheds.all())
    _enter(lent, "delegation given", by, reason.strip())
    return lent


@transaction.atomic
def end_delegation(*, posting_id: int, by: User) -> None:
    """Take a lent posting back: it ends yesterday, or never begins.

    Raises
    ------
    Refused
        If the user did not lend it.
    """
    lent = Posting.objects.select_for_update().filter(pk=posting_id, delegated_by=by).first()
    if lent is None:
        raise Refused("You lent no such posting.", remedy="Look at the list.")
    lent.valid_to = today_of(lent.district) - timedelta(days=1)
    lent.valid_from = min(lent.valid_from, lent.valid_to)
    lent._history_user = by
    lent.save()
    _enter(lent, "delegation ended", by, "")


def _check_days(own: Posting, days: Days) -> None:
    today = today_of(own.district)
    if days.last < days.first:
        what = f"It would end on {days.last}, before it begins on {days.first}."
        raise Refused(what, where="last", remedy="Look at both days.")
    if days.first < today:
        what = f"It would begin on {days.first}, and it is {today}."
        raise Refused(what, where="first", remedy="Nothing is lent for days that are over.")
    if own.valid_to is not None and own.valid_to < days.last:
        what = f"Your own posting ends on {own.valid_to}."
        raise Refused(what, where="last", remedy="Lend it no longer than that.")


def _enter(lent: Posting, act: str, by: User, reason: str) -> None:
    append(
        district=lent.district,
        by=by,
        act=act,
        subject=f"{lent.user.username} in the place of {by.username}",
        content={
            "to": lent.user.username,
            "instead_of": by.username,
            "role": lent.role,
            "from": lent.valid_from.isoformat(),
            "until": lent.valid_to.isoformat(),
            "watersheds": sorted(one.code for one in lent.watersheds.all()),
            "reason": reason,
        },
    )
