"""From where a request came."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from django.http import HttpRequest


def address(request: HttpRequest) -> str | None:
    """The visitor's address as the server gives it; none where no server stood before.

    The server puts a forwarded address there only if the proxy on this machine sent it; a header
    that a visitor wrote is never looked at.
    """
    return request.META.get("REMOTE_ADDR")
