"""A refusal becomes words at the field it speaks of, or a page that says what, where, what to do."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.shortcuts import render
from django.utils.http import url_has_allowed_host_and_scheme

from structures.errors import Refused

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from django.forms import Form
    from django.http import HttpRequest, HttpResponse

STATUS = 422  # the request was understood and cannot be carried out (RFC 9110, 15.5.21)


def refuse(form: Form, refused: Refused, *, fields: Mapping[str, str] | None = None) -> None:
    """Put a refusal at the fields it names; what names none of this form stands above it.

    `fields` gives the form's field for a name that the refusal has for it.
    """
    known = {**(fields or {}), **{name: name for name in form.fields}}
    for one in refused.findings or (refused,):
        names = (getattr(one, "field", ""), one.where)
        named = next((known[name] for name in names if name in known), None)
        words = f"{one.what} {one.remedy}".strip() if named else one.sentence()
        form.add_error(named, words)


class RefusalMiddleware:
    """Answer a refusal that no page took up, with the way back to where it was asked."""

    def __init__(self, get_response: Callable[[HttpRequest], HttpResponse]) -> None:
        self.get_response = get_response

    def __call__(self, request: HttpRequest) -> HttpResponse:
        return self.get_response(request)

    def process_exception(self, request: HttpRequest, error: Exception) -> HttpResponse | None:
        if not isinstance(error, Refused):
            return None
        context = {"refused": error, "back": _came_from(request)}
        return render(request, "refused.html", context, status=STATUS)


def _came_from(request: HttpRequest) -> str:
    page = request.headers.get("Referer", "")
    own = url_has_allowed_host_and_scheme(
        page, allowed_hosts={request.get_host()}, require_https=request.is_secure()
    )
    return page if own else ""
