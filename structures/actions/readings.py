"""Taking readings, one or many: each is kept, already here, held for a decision, or refused."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, field, replace
from datetime import UTC, datetime, time
from typing import TYPE_CHECKING, Final
from uuid import UUID, uuid4, uuid5
from zoneinfo import ZoneInfo

from django.db import transaction
from django.utils import timezone

from structures.access import Act, may
from structures.actions.doubts import repair_of
from structures.actions.reading_store import store_readings
from structures.actions.recount import recount
from structures.errors import Finding
from structures.intake.doubt import Doubt
from structures.models import Photo, Reading, Repair, Well
from structures.queries.wells import facts_of, past_of, visible_wells
from structures.water.marks import level_below_m
from structures.water.quality import Sent, doubts_of, held, mark_used

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from structures.intake.level_records import LevelRecord
    from structures.models import Upload, User
    from structures.water.quality import Past, WellFacts

KEPT: Final = "kept"
ALREADY: Final = "already here"
HELD: Final = "held"
REFUSED: Final = "refused"
_OTHERS: Final = UUID("0f3c6a3e-6a0b-4a54-9a53-5d5f5f6f0b11")  # of second forms of a record
RULES_KEPT: Final = ("LV-04", "LV-05", "LV-12", "LV-17")  # told and kept with the reading
AT_ONCE: Final = 500


@dataclass(frozen=True, slots=True)
class Answer:
    """What became of one record, and why."""

    id: UUID | None
    result: str
    findings: tuple[Finding, ...] = ()
    where: str = ""
    row: int | None = None


@dataclass(slots=True)
class _OneWell:
    """A well under its lock, with what its readings are held against."""

    well: Well
    facts: WellFacts
    past: Past
    marks: dict[str, int]
    at: dict[datetime, list[Reading]]
    zone: ZoneInfo
    now: datetime


@dataclass(slots=True)
class _Batch:
    """What is being taken: who sent it, what is known of it, and the rows that come of it."""

    by: User
    upload: Upload | None
    known: dict[UUID, Reading]
    photos: set[UUID]
    new: list[Reading] = field(default_factory=list)
    repairs: list[Repair] = field(default_factory=list)


@transaction.atomic
def take_readings(
    *, records: Sequence[LevelRecord], by: User, upload: Upload | None = None
) -> tuple[Answer, ...]:
    """Take readings; gives one answer a record, in their order.

    Sent again, a reading changes nothing. The same time with another value holds both (LV-13), the
    same identifier with other content keeps both (PC-02): somebody else decides.
    """
    wells = _locked(records, by)
    ids = {one.id for one in records if one.id is not None}
    known = {one.pk: one for one in Reading.objects.filter(pk__in=ids).select_related("mark")}
    photos = set(
        Photo.objects.filter(pk__in={one.photo for one in records if one.photo}).values_list(
            "pk", flat=True
        )
    )
    batch = _Batch(by, upload, known, photos)
    answers: list[Answer] = []
    for one in records:
        place = wells.get(one.well or "")
        if one.blocked:
            answers.append(_answer(one, REFUSED, one.findings))
        elif place is None:
            answers.append(_answer(one, REFUSED, (*one.findings, _nowhere(one))))
        else:
            answers.append(_take(one, place, batch))
    new, repairs = batch.new, batch.repairs
    store_readings(new)
    Repair.objects.bulk_create(repairs, batch_size=AT_ONCE, ignore_conflicts=True)
    older = {one.reading_id for one in repairs} - {one.pk for one in new}
    for place in wells.values():
        beside = [one for rows in place.at.values() for one in rows if one.pk in older]
        if beside:
            recount(place.well, beside)
    return tuple(answers)


def _locked(records: Sequence[LevelRecord], by: User) -> dict[str, _OneWell]:
    """Lock the wells in the order of their codes, so that two parcels never wait for each other."""
    codes = {one.well for one in records if one.well}
    seen = visible_wells(by).filter(code__in=codes).values_list("pk", flat=True)
    rows = (
        Well.objects.select_for_update(of=("self",))
        .select_related("watershed__district")
        .filter(pk__in=list(seen))
        .order_by("code")
    )
    at: dict[str, set[datetime]] = defaultdict(set)
    for one in records:
        if one.well and one.read_at:
            at[one.well].add(one.read_at)
    return {
        one.code: _one_well(one, at[one.code]) for one in rows if may(by, Act.SEND_READINGS, one)
    }


def _one_well(well: Well, times: set[datetime]) -> _OneWell:
    beside: dict[datetime, list[Reading]] = defaultdict(list)
    if times:
        between = well.readings.filter(read_at__range=(min(times), max(times)))
        for one in between.select_related("mark"):
            beside[one.read_at].append(one)
    zone = ZoneInfo(well.watershed.district.zone)
    marks = dict(well.marks.values_list("mark", "pk"))
    return _OneWell(well, facts_of(well), past_of(well), marks, beside, zone, now_in(well, zone))


def now_in(well: Well, zone: ZoneInfo) -> datetime:
    """What counts as now: where the district stands still, the end of its day."""
    as_of = well.watershed.district.as_of
    if as_of is None:
        return timezone.now().astimezone(zone)
    return datetime.combine(as_of, time.max.replace(microsecond=0), zone)


def _take(one: LevelRecord, place: _OneWell, batch: _Batch) -> Answer:
    one, told = _with_bottom(one, place)
    if one.dry and one.depth_m is None:
        return _answer(one, REFUSED, (*one.findings, *told))
    sent = Sent(
        one.read_at.astimezone(place.zone), one.state, one.dry, one.depth_m, one.mark, one.again_m
    )
    own = {(doubt.field, doubt.rule) for doubt in one.doubts}  # who sent it knows more of its clock
    judged = doubts_of(sent, place.facts, place.past, now=place.now)
    doubts = [*one.doubts, *(doubt for doubt in judged if (doubt.field, doubt.rule) not in own)]
    before = batch.known.get(one.id) if one.id else None
    if before is not None and _same(before, one):
        return _answer(one, ALREADY, (_already(one),))
    if any(doubt.level == "block" for doubt in doubts):
        return _answer(one, REFUSED, _told(one, doubts, told))
    others = [row for row in place.at[one.read_at] if row.pk != getattr(before, "pk", None)]
    if any(_same(row, one, but_mark=True) for row in others):
        return _answer(one, ALREADY, (_already(one),))
    row = _row(one, sent, place, batch)
    if before is not None:
        row.pk = uuid5(
            _OTHERS, f"{one.id} {one.well} {one.read_at} {one.depth_m} {one.state} {one.dry}"
        )
        if row.pk in batch.known or Reading.objects.filter(pk=row.pk).exists():
            return _answer(one, ALREADY, (_already(one),))
        doubts.append(_other_content(one))
        batch.repairs.append(repair_of(before.pk, _other_content(one)))
    for other in others:
        doubts.append(_two_values(one, other))
        batch.repairs.append(repair_of(other.pk, _two_values(one, other)))
    waits = {(doubt.field, doubt.rule): doubt for doubt in held(doubts)}
    batch.repairs += [repair_of(row.pk, doubt) for doubt in waits.values()]
    row.rules = sorted({doubt.rule for doubt in doubts if doubt.level != "hold"} | _rules(one))
    if waits:
        row.standing = Reading.Standing.HELD
    elif one.state == Reading.State.STATIC and not one.dry and row.level_m is not None:
        place.past.add(sent.read_at.date(), row.level_m)
    batch.new.append(row)
    batch.known[row.pk] = row
    place.at[one.read_at].append(row)
    return _answer(one, HELD if waits else KEPT, _told(one, doubts, told), row.pk)


def _with_bottom(one: LevelRecord, place: _OneWell) -> tuple[LevelRecord, tuple[Finding, ...]]:
    """Give a dry reading without a depth that of the well's bottom, and say so."""
    if not one.dry or one.depth_m is not None:
        return one, ()
    mark = mark_used(
        Sent(one.read_at.astimezone(place.zone), one.state, one.dry, None), place.facts
    )
    bottom = place.facts.bottom_below_mark_m(mark)
    if bottom is None:
        what = f"{one.well} was dry and its bottom is not known."
        return one, (Finding(one.where, "depth_m", what, "Sound the bottom.", "block", "WL-02"),)
    what = f"{one.well} dry: level is deeper than {bottom:.2f} m, its bottom."
    told = Finding(one.where, "depth_m", what, "", "note", "LV-05")
    return replace(one, depth_m=round(bottom, 4)), (told,)


def _row(one: LevelRecord, sent: Sent, place: _OneWell, batch: _Batch) -> Reading:
    mark = mark_used(sent, place.facts)
    named = one.mark if one.mark is not None else getattr(mark, "mark", None)
    return Reading(
        id=one.id or uuid4(),
        well=place.well,
        mark_id=place.marks.get(named) if named else None,
        read_at=one.read_at,
        state=one.state,
        dry=one.dry,
        depth_m=one.depth_m,
        level_m=level_below_m(one.depth_m, mark),
        read_by=one.read_by or ("" if batch.upload else batch.by.username),
        note=one.note,
        upload=batch.upload,
        row=one.row,
        photo_id=one.photo if one.photo in batch.photos else None,
        by=batch.by,
    )


def _same(row: Reading, one: LevelRecord, *, but_mark: bool = False) -> bool:
    same = (row.well.code if not but_mark else one.well, row.read_at, row.state, row.dry) == (
        one.well,
        one.read_at,
        one.state,
        one.dry,
    )
    return same and row.depth_m == one.depth_m and (but_mark or _mark_same(row, one))


def _mark_same(row: Reading, one: LevelRecord) -> bool:
    return one.mark is None or row.mark is None or row.mark.mark == one.mark


def _rules(one: LevelRecord) -> set[str]:
    told = {finding.rule for finding in one.findings if finding.rule in RULES_KEPT}
    return told if one.state == Reading.State.STATIC else told | {"LV-04"}


def _told(
    one: LevelRecord, doubts: Iterable[Doubt], more: tuple[Finding, ...]
) -> tuple[Finding, ...]:
    told = [*one.findings, *more, *(doubt.finding(one.where) for doubt in doubts)]
    if one.state not in (Reading.State.STATIC, *Reading.WITHOUT_DEPTH):
        what = f"Pump was {one.state}." if one.state != "not known" else "State not known."
        remedy = "Kept, not used for comparing years."
        told.append(Finding(one.where, "state", what, remedy, "warn", "LV-04"))
    return tuple(dict.fromkeys(told))


def _answer(
    one: LevelRecord, result: str, findings: tuple[Finding, ...], pk: UUID | None = None
) -> Answer:
    return Answer(pk or one.id, result, findings, one.where, one.row)


def _nowhere(one: LevelRecord) -> Finding:
    what = "There is no such well where you may send readings."
    return Finding(one.where, "well", what, "Look at the code; ask for a posting there.")


def _already(one: LevelRecord) -> Finding:
    return Finding(one.where, "", "Already here. Nothing changed.", "", "note", "PC-01")


def _other_content(one: LevelRecord) -> Doubt:
    what = f"Record {one.id} came before with other values."
    return Doubt("PC-02", "record", "hold", what, "Both kept; engineer decides.", str(one.id))


def _two_values(one: LevelRecord, other: Reading) -> Doubt:
    at = one.read_at.astimezone(UTC) if one.read_at.tzinfo is None else one.read_at
    values = " and ".join(_depth(each) for each in (other, one))
    what = f"Two readings of {one.well} at {at:%Y-%m-%d %H:%M}: {values}."
    return Doubt(
        "LV-13", "reading", "hold", what, "Keep both, choose one for use.", _depth(one)[:60]
    )


def _depth(one: Reading | LevelRecord) -> str:
    if one.depth_m is None:
        return str(one.state)
    return f"{'dry, ' if one.dry else ''}{one.depth_m:g} m"
