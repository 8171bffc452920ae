"""People whom an administrator keeps, with their postings."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db.models import Exists, OuterRef, Prefetch, Q

from structures import access
from structures.models import Posting, User

if TYPE_CHECKING:
    from django.db.models import QuerySet


def administered_postings(user: User) -> QuerySet[Posting]:
    """Postings in the districts that the user keeps; those of the office for its administrator."""
    office = Exists(access.of_the_office(user))
    found = Q(district__in=access.administered(user)) | Q(office, district__isnull=True)
    return (
        Posting.objects.filter(found)
        .select_related("user", "district")
        .prefetch_related("watersheds")
    )


def administered_people(user: User) -> QuerySet[User]:
    """People with a posting, past or present, among those; with these postings only."""
    kept = administered_postings(user)
    shown = Prefetch("postings", queryset=kept, to_attr="kept_postings")
    mine = Exists(kept.filter(user=OuterRef("pk")))
    found = User.objects.filter(mine | Exists(access.of_the_office(user)))
    return found.prefetch_related(shown).order_by("username")


def own_postings(user: User) -> QuerySet[Posting]:
    """The user's postings in force, with their day as `day`."""
    return access.postings(user).select_related("district").prefetch_related("watersheds")
