"""Parcels of phones: every record once, in any order, each with its own answer.

A record that is there already changes nothing (PC-01); the same identifier with other content, or
two records of one thing, are kept side by side until an engineer decides (PC-02). What was refused
left nothing behind and may come again.
"""

from __future__ import annotations

import json
from dataclasses import dataclass, replace
from datetime import datetime
from typing import TYPE_CHECKING, Any, Final
from zoneinfo import ZoneInfo

from django.db import IntegrityError, transaction
from django.utils import timezone

from structures import access
from structures.actions import readings
from structures.actions.field_records import TAKE, Taken
from structures.actions.holds import AskedBefore
from structures.actions.refusals import as_documents, blocking
from structures.actions.trench import locked
from structures.errors import Finding, Refused
from structures.intake.doubt import Doubt
from structures.intake.field_records import KINDS, read_record
from structures.intake.level_records import read_level_record, row_of
from structures.intake.parcel import AGE_MOST, Sent, clock_doubts, read_parcel
from structures.models import Clash, PhoneRecord, Strip
from structures.queries.districts import today_of
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from uuid import UUID

    from structures.intake.parcel import ClockDoubt
    from structures.models import FoundLevel, Site, Structure, User

KEPT: Final = "kept"
ALREADY: Final = "already here"
HELD: Final = "held"
REFUSED: Final = "refused"
LEVEL: Final = "level"  # a reading of a well
ORDER: Final = tuple(KINDS)  # what opens the way for the next one comes first


@dataclass(frozen=True, slots=True)
class Answer:
    """What became of one record: kept, already here, held or refused, and why."""

    id: UUID | None
    result: str
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True)
class Times:
    """When a parcel was sent, by its phone's clock, and when it came."""

    sent_at: datetime | None
    received_at: datetime


def take_parcel(*, document: object, by: User) -> tuple[str, tuple[Answer, ...]]:
    """Take what a phone sent; each record by itself, answered in the order of the parcel.

    Raises
    ------
    Refused
        If it is no parcel, or another person's: whoever wrote a record down sends it.
    """
    zone = _zone(by)
    parcel = read_parcel(document, zone)
    if parcel.by and parcel.by != by.username:
        raise Refused(
            f"These records were written down by {parcel.by}; you are signed in as {by.username}.",
            where="by",
            remedy=f"Sign in as {parcel.by} and send them; they stay on the phone until then.",
        )
    times = Times(parcel.sent_at, timezone.now())
    doubts = clock_doubts(parcel.records, sent_at=times.sent_at, received_at=_received(by, times))
    levels = [one for one in parcel.records if one.kind == LEVEL]
    answers = {
        one.place: take_record(sent=one, by=by, times=times, doubt=doubts.get(one.place))
        for one in sorted(parcel.records, key=_order)
        if one.kind != LEVEL
    }
    for one, taken in zip(levels, _take_levels(levels, doubts, zone, by), strict=True):
        answers[one.place] = Answer(taken.id or one.id, taken.result, taken.findings)
    return parcel.name, tuple(answers[place] for place in sorted(answers))


def take_record(*, sent: Sent, by: User, times: Times, doubt: ClockDoubt | None = None) -> Answer:
    """Take one record, or say that it is here already, or why it is held or refused."""
    unreadable = tuple(one for one in sent.findings if one.level == "block")
    if sent.id is None or unreadable or not _storable(sent.content):
        return Answer(sent.id, REFUSED, unreadable or (_no_text(sent),))
    site = access.sites(by).select_related("watershed__district").filter(code=sent.site).first()
    if sent.kind not in TAKE or site is None:
        return Answer(sent.id, REFUSED, (_nowhere(sent),))
    try:
        return _take(sent, site, by, times, doubt)
    except IntegrityError:  # the same identifier, at another site and in the same moment
        return _take(sent, site, by, times, doubt)


def _take_levels(
    levels: list[Sent], doubts: dict[int, ClockDoubt], zone: ZoneInfo, by: User
) -> tuple[readings.Answer, ...]:
    """Take readings of wells, which know for themselves what is there already and what clashes."""
    told: set[str] = set()
    records = []
    for one in levels:
        values = {**one.values, "id": None if one.id is None else str(one.id)}
        values.setdefault("read_at", one.content.get("device_time"))
        if one.photos:
            values["photo"] = str(one.photos[0])
        record = read_level_record(row_of(values, f"record {one.place}"), zone, told=told)
        doubt = doubts.get(one.place)
        if doubt is not None and record.read_at is not None:
            raw, suggested = (
                moment.isoformat(timespec="minutes") for moment in (record.read_at, doubt.suggested)
            )
            remedy = f"{suggested} is suggested. Decide."
            said = Doubt("LV-11", "read_at", "hold", doubt.what, remedy, raw, suggested)
            record = replace(record, doubts=(*record.doubts, said))
        records.append(record)
    return readings.take_readings(records=records, by=by) if records else ()


@transaction.atomic
def _take(sent: Sent, site: Site, by: User, times: Times, doubt: ClockDoubt | None) -> Answer:
    structure = locked(site.structure.pk)
    digest = input_digest(sent.content)
    known = PhoneRecord.objects.select_for_update().filter(pk=sent.id).first()
    if known is not None and known.site_id != site.pk:
        return Answer(sent.id, REFUSED, (_taken_elsewhere(sent),))
    if known is not None and known.outcome != PhoneRecord.Outcome.REFUSED:
        return _again(known, sent, digest, by)
    values, findings = read_record(KINDS[sent.kind], sent.values, KINDS[sent.kind].title)
    row = PhoneRecord(
        id=sent.id,
        site=site,
        kind=sent.kind,
        content=sent.content,
        digest=digest,
        made_at=sent.made_at,
        sent_at=times.sent_at,
        by=by,
    )
    if blocking(findings):
        return _kept(row, known, PhoneRecord.Outcome.REFUSED, findings)
    late = _day_doubt(structure, values, sent, doubt)
    if late is not None:
        suggested, finding = late
        answer = _kept(row, known, PhoneRecord.Outcome.HELD, (*findings, finding))
        _beside(row, {**sent.content, **suggested}, by)
        return answer
    return _carry_out(row, known, sent, structure, (values, findings))


def _carry_out(
    row: PhoneRecord,
    known: PhoneRecord | None,
    sent: Sent,
    structure: Structure,
    read: tuple[dict[str, Any], tuple[Finding, ...]],
) -> Answer:
    """Do what a record asks for in a step of its own, so that a refusal leaves nothing behind."""
    values, findings = read
    try:
        with transaction.atomic():
            said = carry_out(sent, values, structure, row_id=row.pk, by=row.by)
    except AskedBefore as asked:
        finding = Finding(asked.where, "hold", asked.what, asked.remedy, "hold", "PC-02")
        answer = _kept(row, known, PhoneRecord.Outcome.HELD, (*findings, finding))
        first = PhoneRecord.objects.filter(pk=asked.hold.pk).first() or row
        _beside(first, {**row.content, "id": str(row.pk)}, row.by, made_at=row.made_at)
        return answer
    except Refused as refused:
        told = refused.findings or (_as_finding(refused),)
        return _kept(row, known, PhoneRecord.Outcome.REFUSED, (*findings, *told))
    return _kept(row, known, PhoneRecord.Outcome.KEPT, (*findings, *said))


def carry_out(
    sent: Sent,
    values: dict[str, Any],
    structure: Structure,
    *,
    row_id: UUID,
    by: User,
    corrects: FoundLevel | None = None,
) -> tuple[Finding, ...]:
    """Do what a record asks for; one without a time was made when it came.

    Raises
    ------
    Refused
        As the act of its kind.
    """
    strip = _strip_of(structure, sent)
    made_at = sent.made_at or timezone.now()
    one = Taken(structure, strip, values, made_at, sent.photos, row_id, by, corrects)
    return TAKE[sent.kind](one)


def _again(known: PhoneRecord, sent: Sent, digest: str, by: User) -> Answer:
    if known.digest == digest:
        what = "Already here. Nothing changed."
        return Answer(sent.id, ALREADY, (Finding("record", "", what, "", "note", "PC-01"),))
    _beside(known, sent.content, by, made_at=sent.made_at)
    what = f"Record {sent.id} came before with other values."
    finding = Finding("record", "", what, "Both kept; engineer decides.", "hold", "PC-02")
    return Answer(sent.id, HELD, (finding,))


def _beside(
    first: PhoneRecord, content: dict[str, Any], by: User, *, made_at: datetime | None = None
) -> None:
    """Keep a second form of a record beside the first, once."""
    Clash.objects.get_or_create(
        record=first,
        digest=input_digest(content),
        defaults={"content": content, "made_at": made_at, "by": by},
    )


def _kept(
    row: PhoneRecord, known: PhoneRecord | None, outcome: str, findings: tuple[Finding, ...]
) -> Answer:
    row.outcome, row.findings = outcome, as_documents(findings)
    row.received_at = timezone.now()  # of a record that was refused before, that of its last coming
    row.save(force_insert=known is None, force_update=known is not None)
    result = {
        PhoneRecord.Outcome.KEPT: KEPT,
        PhoneRecord.Outcome.HELD: HELD,
        PhoneRecord.Outcome.REFUSED: REFUSED,
    }[outcome]
    return Answer(row.pk, result, findings)


def _day_doubt(
    structure: Structure, values: dict[str, Any], sent: Sent, doubt: ClockDoubt | None
) -> tuple[dict[str, str], Finding] | None:
    """Say whether the day of a record is in doubt, with the form that is suggested (LV-11)."""
    district = structure.site.watershed.district
    today, zone = today_of(district), ZoneInfo(district.zone)
    day = values.get("day")
    own = None if day is None else datetime.fromisoformat(day).date()
    clock = None if sent.made_at is None else sent.made_at.astimezone(zone).date()
    by_clock = doubt is not None and (own is None or own == clock)
    if not by_clock and (own is None or today - AGE_MOST <= own <= today):
        return None
    if doubt is not None:
        moment = doubt.suggested.astimezone(zone)
    else:
        moment = datetime.combine(today, datetime.min.time(), zone)
    suggested = {"device_time": moment.isoformat()} if own is None else {}
    if own is not None:
        suggested = {"day": min(moment.date(), today).isoformat()}
    what = doubt.what if doubt is not None else f"Written down for {day}; today is {today}."
    remedy = f"Kept; {next(iter(suggested.values()))} is suggested and an engineer decides."
    return suggested, Finding("record", "day", what, remedy, "hold", "LV-11")


def _strip_of(structure: Structure, sent: Sent) -> Strip | None:
    if sent.strip is None or KINDS[sent.kind].strip == "no":
        return None
    strip = structure.strips.filter(number=sent.strip).first()
    if strip is None:
        raise Refused(
            f"{structure.site.code} has no strip {sent.strip}.",
            where="strip",
            remedy="Look at the number on the strip board.",
        )
    return strip


def _received(by: User, times: Times) -> datetime:
    """Give the time of receiving; where every district stands still, that of sending, or its day."""
    still = access.districts(by).order_by("code").first()
    if still is None or access.districts(by).filter(as_of__isnull=True).exists():
        return times.received_at
    end_of_day = datetime.max.time().replace(microsecond=0)
    return times.sent_at or datetime.combine(still.as_of, end_of_day, ZoneInfo(still.zone))


def _zone(by: User) -> ZoneInfo:
    district = access.districts(by).order_by("code").first()
    return ZoneInfo("UTC" if district is None else district.zone)


def _order(one: Sent) -> tuple[int, str, int]:
    place = ORDER.index(one.kind) if one.kind in ORDER else len(ORDER)
    return place, str(one.values.get("hold") or ""), one.place


def _storable(content: dict[str, Any]) -> bool:
    """Whether every database can keep the text: no null character, no half of a pair."""
    try:
        text = json.dumps(content, ensure_ascii=False, allow_nan=False)
        text.encode()
    except (ValueError, UnicodeEncodeError):
        return False
    return "\\u0000" not in text


def _as_finding(refused: Refused) -> Finding:
    return Finding(refused.where, "", refused.what, refused.remedy)


def _no_text(sent: Sent) -> Finding:
    what = "It holds characters or numbers that cannot be kept."
    return Finding(f"record {sent.place}", "", what, "Type it again.")


def _nowhere(sent: Sent) -> Finding:
    where = f"record {sent.place}"
    if sent.kind not in TAKE:
        known = ", ".join((*TAKE, LEVEL))
        return Finding(where, "type", "No such record is taken.", f"Known: {known}.")
    what = "There is no such site where you serve."
    return Finding(where, "site", what, "Look at the code; ask for a posting there.")


def _taken_elsewhere(sent: Sent) -> Finding:
    what = "This identifier is taken."
    return Finding(
        f"record {sent.place}", "id", what, "Write it down anew on the phone.", rule="PC-02"
    )
