"""Who acts for whom: postings that somebody gave for a time out of their own."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db.models import Q

from structures import access
from structures.access import MAY, Act, place_of
from structures.models import Posting, Role, User

if TYPE_CHECKING:
    from typing import Any

    from django.db.models import QuerySet

# An administrator approves nothing and an auditor writes nothing, in whoever's name.
NEVER = (Role.ADMIN, Role.AUDITOR)


def delegator_of(user: User, act: Act, thing: Any) -> User | None:
    """Give the person in whose name the user may do that there; None where it is their own right."""
    place = place_of(thing)
    here = Q(district_id=place.district_id)
    if place.watershed_id is not None:
        here &= Q(watersheds__isnull=True) | Q(watersheds=place.watershed_id)
    held = access.postings(user).filter(here, role__in=MAY[act]).select_related("delegated_by")
    found = list(held)
    if not found or any(one.delegated_by_id is None for one in found):
        return None
    return found[0].delegated_by


def own_to_delegate(user: User) -> QuerySet[Posting]:
    """Postings of the user's own, in force, that may be lent; what was lent is not lent on."""
    held = access.postings(user).filter(role__in=MAY[Act.DELEGATE], delegated_by__isnull=True)
    return held.select_related("district").prefetch_related("watersheds")


def delegations_given(user: User) -> QuerySet[Posting]:
    found = Posting.objects.filter(delegated_by=user).select_related("user", "district")
    return found.prefetch_related("watersheds").order_by("-valid_to", "-pk")


def delegations_held(user: User) -> QuerySet[Posting]:
    """What others have lent to the user and holds today."""
    held = access.postings(user).filter(delegated_by__isnull=False)
    return held.select_related("delegated_by", "district").prefetch_related("watersheds")


def possible_delegates(user: User) -> QuerySet[User]:
    """People who serve in a district of the user's own postings and may decide there."""
    districts = own_to_delegate(user).values("district")
    serving = Posting.objects.filter(district__in=districts)
    never = serving.filter(role__in=NEVER)
    found = User.objects.filter(is_active=True, postings__in=serving).exclude(pk=user.pk)
    return found.exclude(postings__in=never).distinct().order_by("username")
