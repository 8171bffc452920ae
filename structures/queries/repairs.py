"""Doubted readings as far as their reader may see the wells: what waits, what was decided."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.access import MAY, Act, postings
from structures.models import Repair
from structures.queries.wells import visible_wells

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_repairs(user: User) -> QuerySet[Repair]:
    """Doubts with their reading, well, file and decision; the newest reading first."""
    found = Repair.objects.filter(reading__well__in=visible_wells(user).values("pk"))
    return found.select_related(
        "reading__well__watershed__district",
        "reading__mark",
        "reading__upload",
        "reading__by",
        "decided_by",
        "reversed_by",
    ).order_by("-reading__read_at", "pk")


def waiting_repairs(user: User, *, well: str = "", rule: str = "") -> QuerySet[Repair]:
    """Doubts that nobody has decided on."""
    found = visible_repairs(user).filter(decision="")
    if well:
        found = found.filter(reading__well__code=well)
    return found.filter(rule=rule) if rule else found


def decided_repairs(user: User) -> QuerySet[Repair]:
    """Decisions, the last first; those that were reversed are among them."""
    return visible_repairs(user).exclude(decision="").order_by("-decided_at")


def decides_anywhere(user: User) -> bool:
    """Whether the user decides on doubted readings in any place."""
    return postings(user).filter(role__in=MAY[Act.DECIDE_REPAIR]).exists()
