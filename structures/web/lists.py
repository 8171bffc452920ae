"""Long lists in sheets: one way to page for every page that lists."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.core.paginator import Paginator

if TYPE_CHECKING:
    from django.core.paginator import Page
    from django.db.models import QuerySet
    from django.http import HttpRequest

ROWS: Final = 25  # rows a sheet: about one screen and a half


def sheet_of(request: HttpRequest, found: QuerySet) -> Page:
    """Give the sheet the address asks for; an unknown number gives the nearest one."""
    return Paginator(found, ROWS).get_page(request.GET.get("page"))
