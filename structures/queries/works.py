"""The works: strips with their hold points, what is open today, what waits to be seen or decided."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from django.db.models import Count, F, Prefetch, Q

from structures import access
from structures.drawing.strips import StripDrawn, StripsView
from structures.intake.field_records import HOLDS, point_of
from structures.life.holds import LAYERS, next_hold
from structures.life.stages import CLEARED, DIGGING, HALTED, RISING
from structures.models import (
    Clash,
    HoldPoint,
    PhoneRecord,
    Photo,
    Strip,
    Structure,
    TrenchLook,
)
from structures.queries.districts import today_of
from structures.queries.drawn_wall import drawn_wall, surveyed_wall
from structures.queries.trench_day import against_entering, last_look, so_far

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from django.db.models import QuerySet

    from structures.errors import Finding
    from structures.models import FoundLevel, User

AT_WORK: Final = (CLEARED, DIGGING, RISING, HALTED)
WAITING: Final = "waiting"
NO: Final = "no"
NEXT_STRIPS: Final = 2  # not begun, as a round shows them (project choice)
LAST_RECORDS: Final = 30  # of what phones sent, as a page shows them


@dataclass(frozen=True, slots=True)
class Cell:
    """One hold point of a strip: what the table says of it, and the newest asking behind it."""

    point: str
    word: str
    css: str
    hold: HoldPoint | None = None


@dataclass(frozen=True, slots=True)
class StripLine:
    """One strip with its nine points, the next of them, and why nobody goes in today."""

    strip: Strip
    cells: tuple[Cell, ...]
    next: str | None
    against: tuple[Finding, ...]
    look: TrenchLook | None

    @property
    def open(self) -> bool:
        return self.strip.opened_on is not None and self.strip.covered_on is None

    @property
    def asks(self) -> tuple[str, ...]:
        """Hold points to ask for next, whether or not those before were seen; layers go on.

        What was answered with "no" comes first; after a layer both the next one and H8 may follow.
        """
        if self.strip.covered_on is not None:
            return ()
        refused = [one.hold.hold for one in self.cells if one.word == NO and one.hold]
        if refused:
            return (refused[0],)
        layers = sum(one.hold.startswith(f"{LAYERS}.") for one in self.strip.holds.all())
        for cell in self.cells:
            if cell.hold is None and cell.point == LAYERS:
                return (f"{LAYERS}.1",)
            if cell.hold is None:
                more = (f"{LAYERS}.{layers + 1}",) if cell.point == "H8" else ()
                return (*more, cell.point)
        return ()

    @property
    def later(self) -> tuple[str, ...]:
        """The points that follow, for a day without signal."""
        if not self.open:
            return ()
        first = point_of(self.asks[0]) if self.asks else HOLDS[-1]
        return tuple(one for one in HOLDS[HOLDS.index(first) :] if one not in self.asks)

    @property
    def waiting(self) -> tuple[HoldPoint, ...]:
        return tuple(one.hold for one in self.cells if one.word == WAITING and one.hold)


@dataclass(frozen=True, slots=True)
class Works:
    """One structure at work, on the day of its district."""

    structure: Structure
    today: date
    lines: tuple[StripLine, ...]
    look: TrenchLook | None
    against: tuple[Finding, ...]

    @property
    def open(self) -> tuple[StripLine, ...]:
        return tuple(line for line in self.lines if line.open)

    @property
    def begun(self) -> bool:
        """Whether a strip was ever opened: from then on the wall is not cut anew."""
        return any(line.strip.opened_on is not None for line in self.lines)

    @property
    def at_hand(self) -> tuple[StripLine, ...]:
        """Strips that are open, and the next to begin: what a round goes by."""
        begun = [line for line in self.lines if line.strip.opened_on is None]
        return (*self.open, *begun[:NEXT_STRIPS])

    @property
    def unseen(self) -> tuple[Strip, ...]:
        return tuple(line.strip for line in self.lines if line.strip.covered_unseen)

    def line(self, number: int) -> StripLine | None:
        return next((one for one in self.lines if one.strip.number == number), None)


def visible_strips(user: User) -> QuerySet[Strip]:
    found = Strip.objects.filter(structure__site__in=access.sites(user))
    return found.select_related("structure__site")


def unseen_strips(structure: Structure) -> QuerySet[Strip]:
    """Strips that were covered before they were seen: a mark for good, told on every sheet."""
    return structure.strips.filter(covered_unseen=True)


def works_of(user: User, code: str) -> Works | None:
    """Give one structure at work; None where there is none that the user may see."""
    found = _with_works(Structure.objects.filter(site__in=access.sites(user), site__code=code))
    structure = found.first()
    return None if structure is None else _works(structure)


def round_of(user: User) -> list[Works]:
    """Give the trenches where the user makes records, down the stream and strip by strip."""
    mine = access.sites(user, access.Act.RECORD_WORKS)
    found = _with_works(Structure.objects.filter(site__in=mine, stage__in=AT_WORK))
    ordered = found.order_by(
        "site__watershed__code",
        "site__stream__name",
        F("site__bed_level_m").desc(nulls_last=True),
        "site__code",
    )
    return [_works(one) for one in ordered]


def open_trenches(user: User) -> list[Works]:
    """Give every structure the user may see on which a strip stands open today."""
    standing = Strip.objects.filter(opened_on__isnull=False, covered_on__isnull=True)
    found = Structure.objects.filter(site__in=access.sites(user), strips__in=standing).distinct()
    return [_works(one) for one in _with_works(found).order_by("site__code")]


def looks_missing_today(user: User) -> list[Works]:
    """Give the open trenches into which nobody looked today, or not into every open strip."""
    return [one for one in open_trenches(user) if any(line.look is None for line in one.open)]


def hold_requests(user: User) -> QuerySet[HoldPoint]:
    """Hold points that wait to be seen where the user may see them and did not ask; oldest first."""
    where = access.sites(user, access.Act.SEE_HOLD)
    found = HoldPoint.objects.filter(seen_at__isnull=True, strip__structure__site__in=where)
    return (
        found.filter(strip__covered_on__isnull=True)
        .exclude(asked_by=user)
        .select_related("strip__structure__site", "asked_by")
        .order_by("asked_at")
    )


def visible_holds(user: User) -> QuerySet[HoldPoint]:
    found = HoldPoint.objects.filter(strip__structure__site__in=access.sites(user))
    return found.select_related("strip__structure__site", "asked_by", "seen_by").prefetch_related(
        "photos"
    )


def open_clashes(user: User) -> QuerySet[Clash]:
    """Records of which two forms came and nobody has said which counts; oldest first."""
    return visible_clashes(user).filter(counts="").order_by("received_at")


def visible_clashes(user: User) -> QuerySet[Clash]:
    found = Clash.objects.filter(record__site__in=access.sites(user))
    return found.select_related("record__site", "record__by", "by", "decided_by")


def records_of(user: User) -> QuerySet[PhoneRecord]:
    """What the user's own phones sent, newest first."""
    found = PhoneRecord.objects.filter(by=user, site__in=access.sites(user)).select_related("site")
    return found.order_by("-received_at")


def photos_of_strip(strip: Strip) -> QuerySet[Photo]:
    """Photos that came with records of a strip, newest first; hold points show their own."""
    records = PhoneRecord.objects.filter(
        site=strip.structure.site_id, content__strip=strip.number, content__has_key="photos"
    )
    names = [name for one in records for name in one.content["photos"]]
    found = Photo.objects.filter(pk__in=names, site=strip.structure.site_id)
    return found.select_related("by").order_by("-received_at")


def _with_works(found: QuerySet[Structure]) -> QuerySet[Structure]:
    holds = HoldPoint.objects.select_related("asked_by", "seen_by").order_by("asked_at", "attempt")
    return (
        found.select_related("site__watershed__district", "site__stream")
        .annotate(strip_count=Count("strips", filter=Q(strips__isnull=False), distinct=True))
        .prefetch_related(
            Prefetch("strips", Strip.objects.order_by("number")),
            Prefetch("strips__holds", holds),
            "strips__found",
            "alarms__set_by",
        )
    )


def _works(structure: Structure) -> Works:
    today = today_of(structure.site.watershed.district)
    looks = list(
        structure.looks.filter(day=today)
        .select_related("by", "strip")
        .order_by("looked_at", "received_at")
    )
    lines = tuple(_line(structure, strip, looks) for strip in structure.strips.all())
    look = last_look(looks)
    against = against_entering(look, structure.alarms.all(), structure, structure.site.code)
    return Works(structure, today, lines, look, against)


def _line(structure: Structure, strip: Strip, looks: Iterable[TrenchLook]) -> StripLine:
    strip.structure = structure
    newest: dict[str, list[HoldPoint]] = defaultdict(list)
    for hold in strip.holds.all():
        newest[point_of(hold.hold)].append(hold)
    cells = tuple(_cell(point, newest[point], strip) for point in HOLDS)
    look = last_look(looks, strip)
    against = ()
    following = None
    if strip.covered_on is None:
        against = against_entering(look, structure.alarms.all(), structure, str(strip))
        following = next_hold(so_far(strip))
    return StripLine(strip, cells, following, against, look)


def _cell(point: str, holds: list[HoldPoint], strip: Strip) -> Cell:
    """Say where one point stands; of the clay layers how many were seen and what waits."""
    if not holds:
        missed = strip.covered_on is not None and not strip.halted
        return Cell(point, "not seen" if missed else "", "stop" if missed else "")
    waiting = next((one for one in reversed(holds) if one.seen_at is None), None)
    if waiting is not None:
        if strip.covered_on is not None:
            return Cell(point, "not seen", "stop", waiting)
        return Cell(point, WAITING, "doubt", waiting)
    last = {one.hold: one for one in holds}
    refused = next((one for one in last.values() if one.result == HoldPoint.Result.NO), None)
    if refused is not None:
        return Cell(point, NO, "stop", refused)
    seen = holds[-1]
    word = f"{len(last)} seen" if len(last) > 1 else seen.result
    return Cell(point, word, "done", seen)


def strips_view(works: Works) -> StripsView | None:
    """Give what a drawing of the strips shows; None where no strip is cut or no line known.

    Works taken over from before have no frozen drawing; they stand on the newest survey.
    """
    drawn = drawn_wall(works.structure) or surveyed_wall(works.structure)
    if drawn is None or not works.lines:
        return None
    ground = drawn.pack.ground
    return StripsView(
        site=works.structure.site.code,
        ground_offset_m=np.array([one.offset_m for one in ground]),
        ground_m=np.array([one.level_m for one in ground]),
        rock_offset_m=drawn.offset_m,
        rock_m=drawn.level_m,
        strips=tuple(
            StripDrawn(
                line.strip.number,
                line.strip.from_m,
                line.strip.to_m,
                line.strip.stands,
                line.strip.covered_unseen,
            )
            for line in works.lines
        ),
        found=tuple(
            (row.offset_m, row.level_m)
            for line in works.lines
            for row in levels_that_count(list(line.strip.found.all()))
        ),
    )


def levels_that_count(rows: list[FoundLevel]) -> list[FoundLevel]:
    """Leave out the levels of rock that another one corrects."""
    mended = {row.corrects_id for row in rows}
    return [row for row in rows if row.pk not in mended]
