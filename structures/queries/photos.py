"""Photos and scans of the sites a user may see."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures import access
from structures.models import Photo

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_photos(user: User) -> QuerySet[Photo]:
    found = Photo.objects.filter(site__in=access.sites(user))
    return found.select_related("site", "by").order_by("-received_at")
