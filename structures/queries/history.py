"""Who changed a site, and when: its history as its sheet shows it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import Site

SHOWN: Final = 6  # the newest changes; a margin holds no more


def changes_of(site: Site) -> QuerySet:
    """The newest changes of a site, newest first, each with its hand and its revision."""
    return site.history.select_related("history_user").order_by("-history_date")[:SHOWN]
