"""Who signs in with a second step, who must, and whose lost one waits for a second person."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures import access
from structures.access import MAY, Act
from structures.models import FactorReset, Posting, SecondFactor
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from django.contrib.auth.models import AnonymousUser
    from django.db.models import QuerySet

    from structures.models import District, User

ASKED = "second_factor_for_approvers"


def factor_of(user: User | AnonymousUser) -> SecondFactor | None:
    """The user's second factor, once a code of it was given."""
    if not user.is_authenticated:
        return None
    return SecondFactor.objects.filter(user=user, confirmed_at__isnull=False).first()


def begun_factor_of(user: User) -> SecondFactor | None:
    """A second factor that has given no code yet."""
    return SecondFactor.objects.filter(user=user, confirmed_at=None).first()


def codes_left(factor: SecondFactor) -> int:
    return factor.recovery_codes.filter(used_at=None).count()


def asks_factor(district: District) -> bool:
    """Whether a district's approvers decide with a second factor."""
    return bool(settings_in_force(district)[ASKED].value)


def needs_factor(user: User) -> bool:
    """Whether the user serves as an approver where the second factor is asked."""
    return any(asks_factor(one) for one in access.districts(user, Act.APPROVE))


def approves_beside(user: User, other: User) -> QuerySet[District]:
    """Districts in which the user approves and the other one has, or had, a posting."""
    served = Posting.objects.filter(user=other).values("district")
    return access.districts(user, Act.APPROVE).filter(pk__in=served)


def resets_to_agree(user: User) -> list[FactorReset]:
    """Requests to take a lost second factor away that the user may agree to, oldest first."""
    if not access.postings(user).filter(role__in=MAY[Act.APPROVE]).exists():
        return []
    waiting = FactorReset.objects.filter(agreed_by=None).exclude(user=user).exclude(asked_by=user)
    return [
        one
        for one in waiting.select_related("user", "asked_by").order_by("asked_at")
        if approves_beside(user, one.user).exists()
    ]


def open_reset_of(user: User) -> FactorReset | None:
    return FactorReset.objects.filter(user=user, agreed_by=None).select_related("asked_by").first()
