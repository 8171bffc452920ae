"""What the head of every page says of its reader: which places, and which invented day."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from structures.access import MAY, Act
from structures.models import Role
from structures.queries.people import own_postings

if TYPE_CHECKING:
    from django.contrib.auth.models import AnonymousUser

    from structures.models import District, User


@dataclass(frozen=True, slots=True)
class Frame:
    """Places beyond those of everyone, and the districts that are invented."""

    keeps_people: bool
    sees_money: bool
    invented: tuple[District, ...]


def frame_of(user: User | AnonymousUser) -> Frame:
    """Read the user's postings in force once and say what follows from them."""
    held = list(own_postings(user))
    roles = {posting.role for posting in held}
    districts = {posting.district for posting in held if posting.district is not None}
    return Frame(
        keeps_people=Role.ADMIN in roles,
        sees_money=bool(roles & MAY[Act.SEE_MONEY]),
        invented=tuple(
            sorted((one for one in districts if one.invented), key=lambda one: one.code)
        ),
    )
