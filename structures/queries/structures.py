"""Structures and the walls designed for them."""

from __future__ import annotations

from datetime import datetime, time
from typing import TYPE_CHECKING
from zoneinfo import ZoneInfo

from structures import access
from structures.models import Move, Paper, Structure

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_structures(user: User) -> QuerySet[Structure]:
    """Structures of all sites the user may see, with their designs, newest first."""
    found = Structure.objects.filter(site__in=access.sites(user))
    return found.select_related("site__watershed__district").prefetch_related(
        "designs__survey", "designs__rock_line", "designs__by"
    )


def visible_papers(user: User) -> QuerySet[Paper]:
    """Papers of all structures the user may see, newest first."""
    found = Paper.objects.filter(structure__site__in=access.sites(user))
    return (
        found.select_related("structure__site__watershed__district", "by")
        .prefetch_related("photos")
        .order_by("-at", "-pk")
    )


def moves_before(structure: Structure) -> QuerySet[Move]:
    """Moves taken over from before the register: of them only the day is known."""
    return structure.moves.filter(entry__isnull=True).select_related("by").order_by("number")


def midnight_of(move: Move) -> datetime:
    """The moment by which a move of which only the day is known stands among others."""
    zone = ZoneInfo(move.structure.site.watershed.district.zone)
    return datetime.combine(move.day, time(), tzinfo=zone)


def moves_of(structure: Structure) -> QuerySet[Move]:
    """The moves of a structure, newest first."""
    found = structure.moves.select_related("by", "entry").prefetch_related("papers")
    return found.order_by("-number")
