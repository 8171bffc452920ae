"""The daily list of one person, and its first lines for the first page."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.shortcuts import render
from django.urls import reverse
from django.views.decorators.http import require_safe

from costing.queries.notices import notices_of

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

FIRST_LINES: Final = 5


@require_safe
def notices(request: HttpRequest) -> HttpResponse:
    return render(request, "costing/notices.html", {"lines": lines_of(request.user)})


def lines_of(user):
    """Each line with the address of its page."""
    return [(one, reverse(one.page, args=one.args)) for one in notices_of(user)]


def first_lines_of(user):
    """The first lines and how many follow; nothing without an account."""
    lines = lines_of(user) if user.is_authenticated else []
    return {"lines": lines[:FIRST_LINES], "more": max(len(lines) - FIRST_LINES, 0)}
