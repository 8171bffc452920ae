"""Files received, each with what became of it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db.models import Q

from structures import access
from structures.models import Upload

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_uploads(user: User) -> QuerySet[Upload]:
    """Files of the user's watersheds, and those of the district as such."""
    mine = Q(watershed__in=access.watersheds(user))
    of_the_district = Q(watershed__isnull=True, district__in=access.districts(user))
    found = Upload.objects.filter(mine | of_the_district)
    return found.select_related("district", "watershed", "by")
