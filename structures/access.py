"""Who may see and do what: the one place that knows postings.

A posting gives a role in a district, or in named watersheds of it, from a first to a last day. The
day that counts is the district's own (`as_of`) where it has one. No posting, no data.
"""

from __future__ import annotations

from enum import StrEnum
from typing import TYPE_CHECKING, Any, Final, NamedTuple

from django.db.models import DateField, Exists, F, OuterRef, Q, Value
from django.db.models.functions import Coalesce
from django.utils import timezone

from structures.errors import Refused
from structures.models import District, Posting, Role, Site, User, Watershed

if TYPE_CHECKING:
    from datetime import date

    from django.contrib.auth.models import AnonymousUser
    from django.db.models import QuerySet


class Act(StrEnum):
    SEE = "see"
    SEE_MONEY = "see money"
    ENTER_SITE = "enter a site"
    EDIT_SITE = "edit a site"
    ENTER_WATERSHED = "enter a watershed"
    ENTER_PROFILE = "enter a long profile"
    ACCEPT_SURVEY = "hand in a survey"
    SETTLE_ROCK = "settle a rock line"
    DRAW = "draw a wall"
    IMPORT_SCHEDULE = "bring in a rate schedule"
    REQUEST_ESTIMATE = "ask for an estimate"
    MANAGE_PEOPLE = "manage people"
    MANAGE_DISTRICT = "manage a district"
    SET_ENGINEERING = "change an engineering default"
    SET_OFFICE = "change a default of the office"
    SET_PROGRAMME = "change a default of the programme"
    FILL_IN_PAPER = "fill in a paper"
    MOVE = "move a structure"
    ASK = "ask and answer questions"
    DELEGATE = "let somebody act for you"
    SANCTION = "give a technical sanction"
    APPROVE = "give an administrative approval"
    KEEP_MONEY_LINES = "keep money lines"
    SIGN_CONTRACT = "enter a signed contract"
    DECIDE_OPTIONS = "decide an option paper"
    RECORD_WORKS = "make records at the trench"
    SEE_HOLD = "see a hold point"
    SET_ALARM = "set an alarm"
    LIFT_ALARM = "lift an alarm"
    MEASURE = "measure up and check measurements"
    WRITE_BILL = "write a bill"
    DECIDE_BILL = "decide a bill"
    ENTER_WELL = "enter a well"
    SEND_READINGS = "send readings"
    DECIDE_REPAIR = "decide on a doubted reading"
    PROPOSE_VERDICT = "propose a verdict"
    REVIEW_VERDICT = "review a verdict"
    HEAR_COMPLAINT = "take in and answer a complaint"
    SETTLE_CLASH = "decide which of two records counts"


# Source: the office's practice, "people": what each role may and may never do.
MAY: Final[dict[Act, frozenset[Role]]] = {
    Act.SEE: frozenset(Role),
    Act.SEE_MONEY: frozenset(Role) - {Role.FIELD, Role.ADMIN},
    Act.ENTER_SITE: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT}),
    Act.EDIT_SITE: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT}),
    Act.ENTER_WATERSHED: frozenset({Role.ENGINEER, Role.DISTRICT, Role.PROGRAMME}),
    Act.ENTER_PROFILE: frozenset({Role.FIELD, Role.ENGINEER}),
    Act.ACCEPT_SURVEY: frozenset({Role.FIELD, Role.ENGINEER}),
    Act.SETTLE_ROCK: frozenset({Role.ENGINEER}),
    Act.DRAW: frozenset({Role.ENGINEER}),
    Act.IMPORT_SCHEDULE: frozenset({Role.ENGINEER, Role.DISTRICT}),
    Act.REQUEST_ESTIMATE: frozenset({Role.ENGINEER}),
    Act.MANAGE_PEOPLE: frozenset({Role.ADMIN}),
    Act.MANAGE_DISTRICT: frozenset({Role.ADMIN}),
    Act.SET_ENGINEERING: frozenset({Role.ENGINEER, Role.ADMIN}),
    Act.SET_OFFICE: frozenset({Role.DISTRICT, Role.ADMIN}),
    Act.SET_PROGRAMME: frozenset({Role.PROGRAMME, Role.ADMIN}),
    # Which paper and which move a role may make stands in `life`; here, that it makes any.
    Act.FILL_IN_PAPER: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT, Role.PROGRAMME}),
    Act.MOVE: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT, Role.PROGRAMME}),
    Act.ASK: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT, Role.PROGRAMME}),
    Act.DELEGATE: frozenset({Role.DISTRICT, Role.PROGRAMME}),
    Act.SANCTION: frozenset({Role.DISTRICT, Role.PROGRAMME}),
    Act.APPROVE: frozenset({Role.DISTRICT, Role.PROGRAMME}),
    Act.KEEP_MONEY_LINES: frozenset({Role.PROGRAMME}),
    Act.SIGN_CONTRACT: frozenset({Role.DISTRICT}),
    Act.DECIDE_OPTIONS: frozenset({Role.DISTRICT, Role.PROGRAMME}),
    Act.RECORD_WORKS: frozenset({Role.FIELD, Role.ENGINEER}),
    Act.SEE_HOLD: frozenset({Role.ENGINEER}),
    Act.SET_ALARM: frozenset({Role.FIELD, Role.ENGINEER, Role.DISTRICT, Role.PROGRAMME}),
    Act.LIFT_ALARM: frozenset({Role.ENGINEER, Role.DISTRICT}),
    Act.MEASURE: frozenset({Role.ENGINEER}),
    Act.WRITE_BILL: frozenset({Role.ENGINEER}),
    Act.DECIDE_BILL: frozenset({Role.DISTRICT}),
    Act.ENTER_WELL: frozenset({Role.FIELD, Role.ENGINEER}),
    Act.SEND_READINGS: frozenset({Role.FIELD, Role.ENGINEER}),
    Act.DECIDE_REPAIR: frozenset({Role.ENGINEER}),
    Act.PROPOSE_VERDICT: frozenset({Role.ENGINEER}),
    Act.REVIEW_VERDICT: frozenset({Role.PROGRAMME}),
    Act.HEAR_COMPLAINT: frozenset({Role.DISTRICT}),
    Act.SETTLE_CLASH: frozenset({Role.ENGINEER}),
}
# What an administrator of the whole office does everywhere; none of it shows a site.
OF_THE_OFFICE: Final = frozenset(act for act in MAY if Role.ADMIN in MAY[act]) - {Act.SEE}


class Place(NamedTuple):
    """Where a row belongs; without a watershed the district as such, without either the office."""

    district_id: int | None
    watershed_id: int | None = None


def postings(user: User | AnonymousUser) -> QuerySet[Posting]:
    """Postings in force, of an account in force; one that was lent, while its lender serves so."""
    if not user.is_authenticated or not user.is_active or account_over(user):
        return Posting.objects.none()
    today = Coalesce("district__as_of", Value(timezone.localdate()), output_field=DateField())
    held = Posting.objects.filter(user=user).annotate(day=today)
    lender = Posting.objects.filter(
        Q(valid_to__isnull=True) | Q(valid_to__gte=OuterRef("day")),
        Q(user__account_ends_on__isnull=True)
        | Q(user__account_ends_on__gte=Value(timezone.localdate())),
        user=OuterRef("delegated_by"),
        user__is_active=True,
        role=OuterRef("role"),
        district=OuterRef("district"),
        valid_from__lte=OuterRef("day"),
        delegated_by__isnull=True,
    )
    return held.filter(
        Q(valid_to__isnull=True) | Q(valid_to__gte=F("day")),
        Q(delegated_by__isnull=True) | Exists(lender),
        valid_from__lte=F("day"),
    )


def account_over(user: User) -> bool:
    ends: date | None = user.account_ends_on
    return ends is not None and ends < timezone.localdate()


def districts(user: User | AnonymousUser, act: Act = Act.SEE) -> QuerySet[District]:
    """Districts in which the user serves, and may do that."""
    held = postings(user).filter(role__in=MAY[act])
    return District.objects.filter(Exists(held.filter(district=OuterRef("pk"))))


def watersheds(user: User | AnonymousUser, act: Act = Act.SEE) -> QuerySet[Watershed]:
    """Watersheds in which the user serves and may do that: those named, or all of the district."""
    held = postings(user).filter(role__in=MAY[act])
    whole = held.filter(district=OuterRef("district"), watersheds__isnull=True)
    named = held.filter(district=OuterRef("district"), watersheds=OuterRef("pk"))
    return Watershed.objects.filter(Exists(whole) | Exists(named))


def sites(user: User | AnonymousUser, act: Act = Act.SEE) -> QuerySet[Site]:
    return Site.objects.filter(watershed__in=watersheds(user, act))


def administered(user: User | AnonymousUser) -> QuerySet[District]:
    """Districts whose people and settings the user keeps."""
    held = postings(user).filter(role=Role.ADMIN)
    here = held.filter(Q(district=OuterRef("pk")) | Q(district__isnull=True))
    return District.objects.filter(Exists(here))


def place_of(thing: Any) -> Place:
    """Where a row belongs, by what it points to: its watershed, its site, its district."""
    if thing is None:
        return Place(None)
    if isinstance(thing, District):
        return Place(thing.pk)
    if isinstance(thing, Watershed):
        return Place(thing.district_id, thing.pk)
    for name in ("watershed", "site", "survey", "structure"):
        owner = getattr(thing, name, None)
        if owner is not None:
            return place_of(owner)
    return Place(thing.district_id)


def roles(user: User | AnonymousUser, place: Place) -> frozenset[str]:
    """Roles of the postings that cover a place."""
    if place.district_id is None:
        return frozenset()
    here = Q(district_id=place.district_id)
    if place.watershed_id is not None:
        here &= Q(watersheds__isnull=True) | Q(watersheds=place.watershed_id)
    return frozenset(postings(user).filter(here).values_list("role", flat=True))


def of_the_office(user: User | AnonymousUser) -> QuerySet[Posting]:
    """Postings as an administrator of the whole office."""
    return postings(user).filter(role=Role.ADMIN, district__isnull=True)


def keeps_office(user: User | AnonymousUser) -> bool:
    """Whether the user is an administrator of the whole office."""
    return of_the_office(user).exists()


def may(user: User | AnonymousUser, act: Act, thing: Any = None) -> bool:
    """Whether the user may do that there; without a thing, in the office as such."""
    if not roles(user, place_of(thing)).isdisjoint(MAY[act]):
        return True
    return act in OF_THE_OFFICE and keeps_office(user)


def insist(user: User | AnonymousUser, act: Act, thing: Any = None) -> None:
    """Refuse what the user may not do there.

    Raises
    ------
    Refused
        Without a word about the thing: who may not see it learns nothing of it.
    """
    if not may(user, act, thing):
        words = " or ".join(sorted(Role(role).label for role in MAY[act]))
        raise Refused(f"You may not {act} here.", remedy=f"Ask somebody posted here as {words}.")
