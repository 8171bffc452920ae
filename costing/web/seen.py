"""The structure of an address, for those who may see its money; nobody else learns that it is there."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.http import Http404
from django.shortcuts import get_object_or_404

from structures.access import Act, may
from structures.queries.structures import visible_structures

if TYPE_CHECKING:
    from datetime import datetime

    from django.http import HttpRequest

    from structures.models import Structure, User


def priced_structure(user: User, code: str) -> Structure:
    """Give the structure of a site.

    Raises
    ------
    Http404
        If there is none where the user may see money.
    """
    found = get_object_or_404(visible_structures(user), site__code=code)
    if not may(user, Act.SEE_MONEY, found):
        raise Http404
    return found


def signed_in_at(request: HttpRequest) -> datetime | None:
    """When the session began by which something is decided; None where there is no session."""
    if not request.session.session_key or "HTTP_AUTHORIZATION" in request.META:
        return None
    return request.user.last_login
