"""The measurement book: entries with what stands against them, and what is left to measure."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final
from urllib.parse import urlencode
from zoneinfo import ZoneInfo

from structures import access
from structures.life.measuring import RELIES_ON, HoldSeen, MeasuredWork, judge_measurement
from structures.models import HoldPoint, MeasurementEntry, Structure
from structures.queries.as_dug import dug_wall
from structures.takeoff.quantity import GATE_DECIMALS

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping
    from datetime import date

    from django.db.models import QuerySet

    from structures.errors import Finding
    from structures.models import Strip, User
    from structures.queries.as_dug import DugWall
    from structures.takeoff.quantity import Quantity

GO: Final = (HoldPoint.Result.GO, HoldPoint.Result.NOTE)
Place = tuple[int | None, str, float | None]  # strip, item, where the lift begins


@dataclass(frozen=True, slots=True)
class BookLine:
    """One entry, where it stands, and what stands against it by today's rules."""

    entry: MeasurementEntry
    covered_on: date | None
    findings: tuple[Finding, ...]

    @property
    def state(self) -> str:
        if self.entry.sent_back_why:
            return "sent back"
        return "accepted" if self.entry.checked_by_id else "waiting"

    @property
    def holds(self) -> tuple[Finding, ...]:
        return tuple(one for one in self.findings if one.level == "hold")

    @property
    def late(self) -> bool:
        return any(one.rule == "BL-03" for one in self.findings)


@dataclass(frozen=True, slots=True)
class Offered:
    """Work that the trench shows and nobody has measured; `seen`: along rock that was levelled."""

    strip: Strip | None
    item: str
    from_m: float | None
    to_m: float | None
    unit: str
    quantity: Decimal
    working: str
    relies_on: tuple[str, ...]
    seen: bool

    @property
    def asked(self) -> str:
        """Give it as an address asks for it: what a form begins with."""
        known = {
            "strip": self.strip and self.strip.pk,
            "item": self.item,
            "from_m": self.from_m,
            "to_m": self.to_m,
            "quantity": f"{self.quantity:f}",
            "working": self.working,
        }
        return urlencode({key: value for key, value in known.items() if value is not None})


@dataclass(frozen=True, slots=True)
class Book:
    """The measurement book of one structure."""

    structure: Structure
    lines: tuple[BookLine, ...]

    def of(self, state: str) -> tuple[BookLine, ...]:
        return tuple(line for line in self.lines if line.state == state)

    @property
    def waiting(self) -> tuple[BookLine, ...]:
        return self.of("waiting")

    @property
    def late(self) -> tuple[BookLine, ...]:
        return tuple(line for line in self.lines if line.late and line.state != "sent back")


def visible_measurements(user: User) -> QuerySet[MeasurementEntry]:
    found = MeasurementEntry.objects.filter(structure__site__in=access.sites(user))
    return found.select_related(
        "structure__site__watershed__district",
        "strip",
        "measured_by",
        "checked_by",
        "corrects",
    ).order_by("strip__number", "measured_on", "code")


def book_of(user: User, code: str) -> Book | None:
    """Give the book of one structure; None where the user may not see it."""
    structure = (
        Structure.objects.filter(site__in=access.sites(user), site__code=code)
        .select_related("site__watershed__district")
        .first()
    )
    if structure is None:
        return None
    seen = holds_seen(structure)
    entries = visible_measurements(user).filter(structure=structure)
    return Book(structure, tuple(line_of(one, seen) for one in entries))


def line_of(entry: MeasurementEntry, seen: Mapping[int, tuple[HoldSeen, ...]]) -> BookLine:
    """Judge one entry by the rules of today."""
    covered = covered_on(entry)
    work = MeasuredWork(
        entry=entry.code,
        measured_by=entry.measured_by.username,
        measured_on=entry.measured_on,
        strip=None if entry.strip is None else entry.strip.number,
        covered_on=covered,
        checked_by="" if entry.checked_by is None else entry.checked_by.username,
        relies_on=tuple(entry.relies_on),
        holds=seen.get(entry.strip_id, ()),
    )
    return BookLine(entry, covered, judge_measurement(work))


def covered_on(entry: MeasurementEntry) -> date | None:
    """When the work was covered: as the entry says, else as its strip does by now."""
    if entry.covered_on is not None or entry.strip is None:
        return entry.covered_on
    return entry.strip.covered_on


def holds_seen(structure: Structure) -> dict[int, tuple[HoldSeen, ...]]:
    """Give the hold points of every strip with the day each was seen with leave to go on."""
    zone = ZoneInfo(structure.site.watershed.district.zone)
    last: dict[tuple[int, str], HoldPoint] = {}
    for hold in HoldPoint.objects.filter(strip__structure=structure).order_by("attempt"):
        last[hold.strip_id, hold.hold] = hold
    found: dict[int, list[HoldSeen]] = defaultdict(list)
    for (strip, name), hold in last.items():
        went_on = hold.seen_at is not None and hold.result in GO
        day = hold.seen_at.astimezone(zone).date() if went_on else None
        found[strip].append(HoldSeen(name, day))
    return {strip: tuple(holds) for strip, holds in found.items()}


def offered(structure: Structure) -> tuple[Offered, ...]:
    """List work that was dug, or belongs to the whole wall, and stands in no entry yet.

    Raises
    ------
    Refused
        If the levels found cannot be so.
    """
    dug = dug_wall(structure)
    if dug is None:
        return ()
    taken = places_taken(structure.measurements.all())
    begun = structure.strips.filter(opened_on__isnull=False).order_by("number")
    found = [one for strip in begun for one in _of_strip(dug, strip)]
    if begun:
        found += [_offer(one, None, seen=True) for one in dug.work_of_wall(structure)]
    return tuple(
        one
        for one in found
        if one.quantity and (one.strip and one.strip.pk, one.item, one.from_m) not in taken
    )


def places_taken(entries: Iterable[MeasurementEntry]) -> dict[Place, MeasurementEntry]:
    """Give the entry that measures each piece of work; corrections and what was sent back apart."""
    return {
        (one.strip_id, one.item, one.from_m): one
        for one in entries
        if one.corrects_id is None and not one.sent_back_why
    }


def _of_strip(dug: DugWall, strip: Strip) -> Iterable[Offered]:
    return (_offer(one, strip, seen=strip.number in dug.seen) for one in dug.work_of(strip))


def _offer(work: Quantity, strip: Strip | None, *, seen: bool) -> Offered:
    # As amounts do: to six decimals first, so that exact ties survive (handbook 8.4).
    exact = Decimal(f"{work.quantity:.{GATE_DECIMALS}f}")
    return Offered(
        strip=strip,
        item=work.item,
        from_m=work.from_m,
        to_m=work.to_m,
        unit=work.unit,
        quantity=exact.quantize(Decimal("0.01"), "ROUND_HALF_UP"),
        working=work.working,
        relies_on=() if strip is None else RELIES_ON.get(work.item, ()),
        seen=seen,
    )
