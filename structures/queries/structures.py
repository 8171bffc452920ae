"""Structures and the walls designed for them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures import access
from structures.models import Structure

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_structures(user: User) -> QuerySet[Structure]:
    """Structures of all sites the user may see, with their designs, newest first."""
    found = Structure.objects.filter(site__in=access.sites(user))
    return found.select_related("site__watershed__district").prefetch_related(
        "designs__survey", "designs__rock_line", "designs__by"
    )
