"""Districts that a user serves in or keeps, and the day that counts as today there."""

from __future__ import annotations

from typing import TYPE_CHECKING
from zoneinfo import ZoneInfo

from django.db.models import Count, Q
from django.utils import timezone

from structures import access
from structures.life.stages import CLOSED_OFF

if TYPE_CHECKING:
    from datetime import date

    from django.db.models import QuerySet

    from structures.models import District, User, Watershed


def today_of(district: District) -> date:
    """The day that counts in a district: its own where it stands still, else that of its zone."""
    return district.as_of or timezone.localdate(timezone=ZoneInfo(district.zone))


def visible_districts(user: User) -> QuerySet[District]:
    return access.districts(user)


def administered_districts(user: User) -> QuerySet[District]:
    return access.administered(user)


def visible_watersheds(user: User) -> QuerySet[Watershed]:
    """Watersheds with their streams and gauges, and how many sites stand open in each."""
    going = Q(sites__structure__isnull=False) & ~Q(sites__structure__stage=CLOSED_OFF)
    found = access.watersheds(user).select_related("district")
    return found.prefetch_related("streams", "gauges").annotate(
        site_count=Count("sites", filter=going, distinct=True)
    )
