"""The daily list by e-mail: at most one a person and day, and none where nothing stands in it."""

from __future__ import annotations

import logging
from smtplib import SMTPException
from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.core.mail import send_mail
from django.db import transaction
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from costing.queries.notices import notices_of
from structures.access import account_over
from structures.models import DailyMail, User

if TYPE_CHECKING:
    from datetime import date

    from structures.queries.notices import Notice

log = logging.getLogger(__name__)
DAILY_MAIL: Final = "notices.mail"


def send_daily_mail(*, day: date) -> int:
    """Write to everyone with an address for whom something waits; gives how many were written to.

    A person whom the server refuses is left for tomorrow; the others get theirs.
    """
    if not settings.MAIL_IS_SET:
        return 0
    reached = User.objects.filter(is_active=True).exclude(email="").order_by("pk")
    return sum(_write_to(user, day) for user in reached if not account_over(user))


def _write_to(user: User, day: date) -> bool:
    lines = notices_of(user)
    if not lines:
        return False
    try:
        # The row is written first and taken back if the server refuses: never two a day.
        with transaction.atomic():
            _, new = DailyMail.objects.get_or_create(
                user=user, day=day, defaults={"lines": len(lines)}
            )
            if new:
                send_mail(_subject(lines), _text(user, lines), None, [user.email])
            return new
    except (SMTPException, OSError):
        log.exception("The daily list of account %s was not sent.", user.pk)
        return False


def _subject(lines: list[Notice]) -> str:
    held = sum(one.hold for one in lines)
    told = ngettext("%(count)s line waits for you", "%(count)s lines wait for you", len(lines))
    told %= {"count": len(lines)}
    return f"{told}, {_('%(held)s stand still') % {'held': held}}" if held else told


def _text(user: User, lines: list[Notice]) -> str:
    """Say no sum and no name of a person: a mail lies open on its way."""
    told = [f"- {one.subject}{_(' (stands still)') if one.hold else ''}" for one in lines]
    last = _("The reasons stand in your list on the page, under 'today's list'.")
    return "\n".join([user.username + ",", "", *told, "", last, ""])
