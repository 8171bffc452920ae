"""What waits for a decision: where, since when, how much, and how many days the season leaves."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from django.db.models import OuterRef, Subquery
from django.utils import timezone

from costing.models import Bill, Estimate, OptionPaper, Sanction
from costing.queries.standing import limit_of, within, work_of
from structures import access
from structures.access import Act
from structures.life.people import DISTRICT, PROGRAMME
from structures.models import Structure
from structures.queries.districts import today_of
from structures.queries.season import clocks_of

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import date
    from decimal import Decimal

    from django.db.models import QuerySet

    from structures.life.season import Clock
    from structures.models import Site, User

# stage -> (what is decided, key of the limit of the district office)
WAITS: Final[dict[str, tuple[str, str]]] = {
    "heard": ("technical sanction", "technical_sanction_limit"),
    "sanctioned": ("administrative approval", "administrative_approval_limit"),
}
LONG_DAYS: Final = 14  # what waits longer is asked about by the programme (office's practice, 9)


@dataclass(frozen=True, slots=True)
class Waiting:
    """One structure that waits; `mine` tells whether the reader may decide, `whose` who may."""

    structure: Structure
    what: str
    since: date
    days: int
    amount: Decimal | None
    currency: str
    clock: Clock
    whose: str
    mine: bool

    @property
    def long(self) -> bool:
        return self.days > LONG_DAYS


def waiting_structures(user: User, *, every: bool = False) -> QuerySet[Structure]:
    """Structures at the door of a decision, or every one, with the sum that is asked for."""
    newest = Estimate.objects.filter(site=OuterRef("site")).order_by("-version")
    given = Sanction.objects.filter(
        structure=OuterRef("pk"), kind=Sanction.Kind.TECHNICAL
    ).order_by("-revision")
    found = Structure.objects.filter(site__in=access.sites(user, Act.SEE_MONEY))
    if not every:
        found = found.filter(stage__in=tuple(WAITS))
    return found.select_related("site__watershed__district", "site__stream").annotate(
        newest_estimate=Subquery(newest.values("pk")[:1]),
        asked=Subquery(newest.values("sanction")[:1]),
        asked_currency=Subquery(newest.values("currency")[:1]),
        sanctioned=Subquery(given.values("amount")[:1]),
        sanctioned_currency=Subquery(given.values("currency")[:1]),
    )


def waiting(user: User) -> list[Waiting]:
    """What waits for a sanction or an approval, in the order of the dry-season clock."""
    rows = list(waiting_structures(user))
    clocks = clocks_of(rows, quantities_of(rows))
    limits = {
        (one.pk, key): limit_of(one, key)
        for one in {row.site.watershed.district for row in rows}
        for _, key in WAITS.values()
    }
    roles = {place: access.roles(user, place) for place in {access.place_of(row) for row in rows}}
    lines = [_line(row, clocks[row.pk], limits, roles[access.place_of(row)]) for row in rows]
    return sorted(lines, key=lambda one: (one.clock.order(), -one.days))


def _line(
    row: Structure,
    clock: Clock,
    limits: Mapping[tuple[int, str], float | None],
    roles: frozenset[str],
) -> Waiting:
    what, key = WAITS[row.stage]
    district = row.site.watershed.district
    sanctioned = row.stage == "sanctioned"
    amount = row.sanctioned if sanctioned else row.asked
    currency = row.sanctioned_currency if sanctioned else row.asked_currency
    inside = amount is not None and within(amount, limits[district.pk, key])
    return Waiting(
        structure=row,
        what=what,
        since=row.since,
        days=(today_of(district) - row.since).days,
        amount=amount,
        currency=currency or "",
        clock=clock,
        whose=DISTRICT if inside else PROGRAMME,
        mine=PROGRAMME in roles or (bool(inside) and DISTRICT in roles),
    )


def quantities_of(rows: list[Structure]) -> dict[int, dict[str, float | None]]:
    """Give the work of each structure's newest estimate by item."""
    by_estimate = {one.newest_estimate: one.pk for one in rows if one.newest_estimate}
    return {by_estimate[number]: work for number, work in work_of(by_estimate).items()}


@dataclass(frozen=True, slots=True)
class WaitingPaper:
    """A bill that was handed in, or an option paper that is open."""

    kind: str
    pk: int
    site: Site
    name: str
    since: date
    days: int


def waiting_papers(user: User) -> list[WaitingPaper]:
    """Option papers that are open and bills handed in, oldest first: a trench may wait for the first."""
    options = OptionPaper.objects.filter(
        way="", structure__site__in=access.sites(user, Act.DECIDE_OPTIONS)
    ).select_related("structure__site__watershed__district")
    bills = Bill.objects.filter(
        state=Bill.State.HANDED_IN, structure__site__in=access.sites(user, Act.DECIDE_BILL)
    ).select_related("structure__site__watershed__district")
    found = [
        *(_option(one) for one in options),
        *(_bill(one) for one in bills),
    ]
    return sorted(found, key=lambda one: (one.kind != "option", -one.days))


def _option(paper: OptionPaper) -> WaitingPaper:
    # Both days are those of the clock on the wall: an invented district stands still on its own.
    since = timezone.localdate(paper.opened_at)
    days = (timezone.localdate() - since).days
    return WaitingPaper("option", paper.pk, paper.structure.site, paper.cause, since, days)


def _bill(bill: Bill) -> WaitingPaper:
    site = bill.structure.site
    days = (today_of(site.watershed.district) - bill.billed_on).days
    return WaitingPaper("bill", bill.pk, site, bill.number, bill.billed_on, days)
