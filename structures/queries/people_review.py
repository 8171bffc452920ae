"""People as an administrator looks them over: whose time is over, who is posted twice, who waits."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING

from django.utils import timezone
from django.utils.translation import gettext as _

from structures.access import account_over, keeps_office
from structures.models import Watershed
from structures.queries.districts import administered_districts, today_of
from structures.queries.people import administered_people

if TYPE_CHECKING:
    from datetime import date, datetime

    from django.db.models import QuerySet

    from structures.models import Posting, User


@dataclass(frozen=True, slots=True)
class PersonLine:
    """One account with the postings that the reader keeps, and what is to be looked at."""

    person: User
    postings: tuple[Posting, ...]
    doubts: tuple[str, ...]


def people_to_review(user: User, text: str = "") -> list[PersonLine]:
    """People whose name holds the text; those with something to look at come first."""
    found = administered_people(user).filter(username__icontains=text.strip())
    lines = [_line(person) for person in found.select_related("sign_in_word")]
    return sorted(lines, key=lambda line: not line.doubts)


def person_to_review(user: User, person_id: int) -> PersonLine | None:
    person = administered_people(user).select_related("sign_in_word").filter(pk=person_id).first()
    return None if person is None else _line(person)


def administered_watersheds(user: User) -> QuerySet[Watershed]:
    """Watersheds in which the user may post people."""
    found = Watershed.objects.filter(district__in=administered_districts(user))
    return found.select_related("district").order_by("district__code", "code")


def keeps_the_office(user: User) -> bool:
    """Whether the user keeps people and settings of the whole office."""
    return keeps_office(user)


def _line(person: User) -> PersonLine:
    postings = tuple(person.kept_postings)
    return PersonLine(person, postings, tuple(_doubts(person, postings, timezone.now())))


def _doubts(person: User, postings: tuple[Posting, ...], now: datetime) -> list[str]:
    doubts = []
    if not person.is_active or account_over(person):
        doubts.append(_("The account is over."))
    elif all(_over(one) for one in postings):
        doubts.append(_("No posting is in force or to come: no page shows anything."))
    for one, other in combinations([one for one in postings if not _over(one)], 2):
        if _overlap(one, other):
            doubts.append(_("Posted twice as %s in one place.") % one.get_role_display())
    word = getattr(person, "sign_in_word", None)
    if not person.has_usable_password():
        open_still = word is not None and word.used_at is None and word.expires_at > now
        doubts.append(
            _("Has not come in yet; the one-time word is good.")
            if open_still
            else _("Cannot come in: no password, and no one-time word that is good.")
        )
    return doubts


def _over(posting: Posting) -> bool:
    return posting.valid_to is not None and posting.valid_to < _day(posting)


def _day(posting: Posting) -> date:
    return timezone.localdate() if posting.district is None else today_of(posting.district)


def _overlap(one: Posting, other: Posting) -> bool:
    """Whether two postings give the same role in the same place at the same time."""
    if one.role != other.role or one.district_id != other.district_id:
        return False
    first, second = sorted((one, other), key=lambda posting: posting.valid_from)
    if first.valid_to is not None and first.valid_to < second.valid_from:
        return False
    places, others = (
        {watershed.pk for watershed in posting.watersheds.all()} for posting in (one, other)
    )
    return not places or not others or bool(places & others)
