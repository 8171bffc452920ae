"""Readings of wells as far as their reader may see the wells."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.models import Reading
from structures.queries.wells import visible_wells

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_levels(user: User) -> QuerySet[Reading]:
    """Readings with their well and the mark that they name."""
    found = Reading.objects.filter(well__in=visible_wells(user).values("pk"))
    return found.select_related("well__watershed__district", "mark", "upload")
