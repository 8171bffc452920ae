"""Files that were looked at and wait for a yes: their bytes by digest, the rest signed in the page."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.core import signing
from django.utils.translation import gettext as _

from structures.errors import Refused
from structures.runs.files import keep_bytes, kept_bytes

if TYPE_CHECKING:
    from django.http import HttpRequest

FIELD: Final = "looked_at"
SALT: Final = "structures.web.previews"
WAITS_SECONDS: Final = 12 * 60 * 60  # [A] a working day: how long a yes may come


def looked_at(request: HttpRequest, data: bytes, **said: Any) -> str:
    """Keep the bytes and give what a page carries until its reader says yes."""
    return signing.dumps([request.user.pk, keep_bytes(data), said], salt=SALT)


def agreed(request: HttpRequest) -> tuple[dict[str, Any], bytes]:
    """Give back what was looked at, with its bytes.

    Raises
    ------
    Refused
        If it is no longer there, was altered, or another person looked at it.
    """
    try:
        who, digest, said = signing.loads(request.POST[FIELD], salt=SALT, max_age=WAITS_SECONDS)
    except signing.BadSignature as error:
        raise _gone() from error
    if who != request.user.pk:
        raise _gone()
    try:
        return said, kept_bytes(digest)
    except FileNotFoundError as error:
        raise _gone() from error


def _gone() -> Refused:
    return Refused(_("What was looked at is no longer there."), remedy=_("Choose the file again."))
