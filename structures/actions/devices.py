"""Devices: their tokens, and writes that are carried out once however often they are sent."""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import timedelta
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.utils import timezone

from structures.errors import Refused
from structures.models import DeviceToken, SentWrite

if TYPE_CHECKING:
    from collections.abc import Callable
    from datetime import datetime

    from structures.models import User

KEY_DAYS: Final = 30  # for so long a write that is sent again finds its answer (project choice)


class KeyUsed(Exception):  # noqa: N818 -- says what happened, not that something broke
    """The key named another write before."""


@dataclass(frozen=True, slots=True)
class Answered:
    """What a write was answered; `again` where it was carried out at an earlier sending."""

    status: int
    body: Any
    headers: dict[str, str] = field(default_factory=dict)
    again: bool = False


def give_token(*, user: User) -> tuple[str, datetime]:
    """Give a device its token and the time until which it holds; only its hash is kept."""
    kept, token = DeviceToken.objects.create(user=user, session_hash=user.get_session_auth_hash())
    return token, kept.expiry


def end_token(*, token: DeviceToken) -> None:
    token.delete()


def carry_out_once(*, by: User, key: str, digest: str, write: Callable[[], Answered]) -> Answered:
    """Carry a write out, or give the answer that the same write had before.

    Key, effect and answer are written in one transaction. A write that was refused leaves no key
    behind, so that it can be sent again once its cause is mended.

    Raises
    ------
    KeyUsed
        If the key came before with other contents.
    Refused
        As the write itself.
    """
    with transaction.atomic():
        old = timezone.now() - timedelta(days=KEY_DAYS)
        SentWrite.objects.filter(by=by, at__lt=old).delete()
        sent, new = SentWrite.objects.get_or_create(by=by, key=key, defaults={"digest": digest})
        if not new:
            if sent.digest != digest:
                raise KeyUsed(key)
            return Answered(sent.status, sent.body, sent.headers, again=True)
        try:
            answered = write()
        except Refused as error:
            # What the refusal left behind, such as the file received, stays; the key does not.
            sent.delete()
            refused = error
        else:
            sent.status, sent.body, sent.headers = answered.status, answered.body, answered.headers
            sent.save()
            return answered
    raise refused
