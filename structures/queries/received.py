"""Files received, as far as their reader may know what stands in them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db.models import Exists, OuterRef, Q

from structures import access
from structures.access import Act
from structures.models import Upload, Watershed
from structures.queries.uploads import visible_uploads

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def received_files(user: User) -> QuerySet[Upload]:
    """Files the user may see; those of rates only where they may see money."""
    priced = Q(district__in=access.districts(user, Act.SEE_MONEY))
    return visible_uploads(user).filter(~Q(kind=Upload.Kind.RATES) | priced)


def files_to_hand_back(user: User) -> QuerySet[Upload]:
    """Files whose bytes the user may have back: what they sent, and what holds nothing hidden.

    A list of the whole district is handed to those only who see each of its watersheds.
    """
    hidden = Watershed.objects.filter(district=OuterRef("district")).exclude(
        pk__in=access.watersheds(user)
    )
    whole = Q(watershed__isnull=False) | ~Exists(hidden)
    return received_files(user).filter(Q(by=user) | whole)
