"""What the head of every page says of its reader: which places, and which invented day."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.utils import timezone

from structures.access import MAY, Act
from structures.models import Role
from structures.queries.districts import today_of
from structures.queries.people import own_postings

if TYPE_CHECKING:
    from datetime import date

    from django.contrib.auth.models import AnonymousUser

    from structures.models import District, User


@dataclass(frozen=True, slots=True)
class Frame:
    """Places beyond those of everyone, the districts that are invented, and the reader's day.

    `today` and `zone` are those of the reader's districts; where these differ, or there is none,
    the server's.
    """

    keeps_people: bool
    sees_money: bool
    at_trenches: bool
    invented: tuple[District, ...]
    today: date
    zone: str


def frame_of(user: User | AnonymousUser) -> Frame:
    """Read the user's postings in force once and say what follows from them."""
    held = list(own_postings(user))
    roles = {posting.role for posting in held}
    districts = {posting.district for posting in held if posting.district is not None}
    days, zones = {today_of(one) for one in districts}, {one.zone for one in districts}
    return Frame(
        keeps_people=Role.ADMIN in roles,
        sees_money=bool(roles & MAY[Act.SEE_MONEY]),
        at_trenches=bool(roles & MAY[Act.RECORD_WORKS]),
        invented=tuple(
            sorted((one for one in districts if one.invented), key=lambda one: one.code)
        ),
        today=days.pop() if len(days) == 1 else timezone.localdate(),
        zone=zones.pop() if len(zones) == 1 else timezone.get_default_timezone_name(),
    )
