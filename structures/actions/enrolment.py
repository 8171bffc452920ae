"""A new person let in at once: account, one posting, one-time word."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db import transaction

from structures.actions.people import invite, set_posting
from structures.errors import Refused
from structures.models import Posting, User

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from structures.models import District, Watershed


@transaction.atomic
def enrol(
    *,
    login: str,
    role: str,
    district: District | None,
    days: tuple[date, date | None],
    by: User,
    watersheds: Sequence[Watershed] = (),
) -> tuple[User, str]:
    """Make an account with one posting; gives it and its one-time word.

    Raises
    ------
    Refused
        If the name is taken, or what `invite` and `set_posting` refuse.
    """
    if User.objects.filter(username=login).exists():
        raise Refused(
            f"{login} is taken.",
            where="login",
            remedy="Take another name, or open that person to invite them again.",
        )
    word = invite(login=login, role=role, district=district, by=by)
    user = User.objects.get(username=login)
    set_posting(
        user_id=user.pk,
        role=role,
        district=district,
        days=days,
        by=by,
        watersheds=watersheds,
        posting_id=Posting.objects.get(user=user).pk,
    )
    return user, word
