"""Parcels of phones: what was written down without signal, sent in one piece when there is some.

A parcel is judged record by record: one that cannot be read keeps no other one out. The phone's
clock is not trusted: when a record was made, when it was sent and when it came are three times.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID

from structures.errors import Finding, Refused
from structures.intake.moments import read_moment
from structures.intake.tree import Ledger, Node, shown

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import tzinfo

RECORDS_MOST: Final = 500  # of one parcel (project choice): a month of a site
KEYS: Final = ("parcel", "device", "by", "sent", "records")
ABOUT: Final = ("id", "type", "site", "strip", "photos", "device_time")
DEVICE_MOST: Final = 60  # characters of a device's name
# No record waits longer on a phone: three weeks without net, a month of holding on (project choice).
AGE_MOST: Final = timedelta(days=60)
AHEAD_MOST: Final = timedelta(hours=1)  # by which two clocks may differ
SHIFT_MOST: Final = timedelta(hours=12)  # more, and the day of a record is in doubt


@dataclass(frozen=True, slots=True)
class Sent:
    """One record as it was sent.

    `content` is all of it but the identifier, as it is compared when it comes again; `values` what
    its kind asks for; `findings` what is wrong with the envelope, with level "block" where it
    cannot be taken. `id` is None where it has none.
    """

    place: int
    id: UUID | None
    kind: str
    site: str
    strip: int | None
    photos: tuple[UUID, ...]
    made_at: datetime | None
    content: dict[str, Any]
    values: dict[str, Any]
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True)
class Parcel:
    """What a phone sent: its own names for parcel and device, whose records, and when."""

    name: str
    device: str
    by: str
    sent_at: datetime | None
    records: tuple[Sent, ...]
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True)
class ClockDoubt:
    """A time that cannot be, and the one suggested in its place."""

    what: str
    suggested: datetime


def read_parcel(document: object, zone: tzinfo) -> Parcel:
    """Read a parcel.

    Parameters
    ----------
    document
        JSON values: `parcel`, `device`, `by`, `sent`, `records`; a record has `id`, `type`,
        `site`, perhaps `strip`, `photos` and `device_time`, and the fields of its kind.
    zone
        Taken for times without one.

    Raises
    ------
    Refused
        If it is no parcel at all; a single record that cannot be read is told in its findings.
    """
    if not isinstance(document, dict) or not isinstance(document.get("records"), list):
        raise Refused(
            "This is no parcel of records.",
            remedy='Send an object with "records", a list; see the schema.',
        )
    records = document["records"]
    if len(records) > RECORDS_MOST:
        raise Refused(
            f"{len(records)} records are more than {RECORDS_MOST}. Nothing was read.",
            where="records",
            remedy="Send them in several parcels.",
        )
    ledger = Ledger()
    sent = _moment(document.get("sent"), "parcel", "sent", zone, ledger)
    for key in document:
        if key not in KEYS:
            node = Node(None, "parcel", shown(key)[1:-1])
            ledger.add(
                node, "A parcel has no such field.", f"Known: {', '.join(KEYS)}.", level="note"
            )
    return Parcel(
        str(document.get("parcel") or "")[:DEVICE_MOST],
        str(document.get("device") or "")[:DEVICE_MOST],
        str(document.get("by") or "")[:150],
        sent,
        tuple(_sent(place, one, zone) for place, one in enumerate(records, start=1)),
        tuple(ledger.findings),
    )


def judge_clock(
    made_at: datetime,
    *,
    sent_at: datetime | None,
    received_at: datetime,
    before: datetime | None = None,
) -> ClockDoubt | None:
    """Say whether a record can have been made when its phone says so (LV-11).

    Sending takes no time: where the phone said another time than that of receiving, its clock was
    off, and the record's time is moved by as much. Else a record that cannot be so old or so young
    was made before the one that follows it in the parcel, at the latest when it was sent.

    Parameters
    ----------
    received_at
        When it came; in a district that stands still on a day, when it was sent.
    before
        Time of the next record of the parcel whose own time can be; None where there is none.
    """
    off = timedelta(0) if sent_at is None else received_at - sent_at
    oldest, youngest = received_at - AGE_MOST, received_at + AHEAD_MOST
    if abs(off) <= SHIFT_MOST and oldest <= made_at <= youngest:
        return None
    sent = "" if sent_at is None else f", and it was sent on {sent_at:%Y-%m-%d %H:%M}"
    what = f"Made on {made_at:%Y-%m-%d %H:%M}, says the phone{sent}. Is its clock wrong?"
    moved = made_at + off
    if abs(off) > SHIFT_MOST:
        return ClockDoubt(what, moved if oldest <= moved <= youngest else before or received_at)
    return ClockDoubt(what, before or sent_at or received_at)


def clock_doubts(
    records: Sequence[Sent], *, sent_at: datetime | None, received_at: datetime
) -> dict[int, ClockDoubt]:
    """Judge the clock of every record of a parcel by its place in it."""
    doubts: dict[int, ClockDoubt] = {}
    before: datetime | None = None
    for one in reversed(records):
        if one.made_at is None:
            continue
        doubt = judge_clock(one.made_at, sent_at=sent_at, received_at=received_at, before=before)
        if doubt is None:
            before = one.made_at
        else:
            doubts[one.place] = doubt
    return doubts


def _sent(place: int, given: object, zone: tzinfo) -> Sent:
    where = f"record {place}"
    ledger = Ledger()
    if not isinstance(given, dict):
        ledger.add(
            Node(given, where), f"A record is an object, not {shown(given)}.", "Send it anew."
        )
        return Sent(place, None, "", "", None, (), None, {}, {}, tuple(ledger.findings))
    content = {str(key): value for key, value in given.items() if key != "id"}
    name = _uuid(given.get("id"), where, "id", ledger)
    photos = given.get("photos") or []
    if not isinstance(photos, list):
        ledger.add(
            Node(photos, where, "photos"), "A list of identifiers is wanted.", "Send it anew."
        )
        photos = []
    shown_by = tuple(_uuid(one, where, "photos", ledger) for one in photos)
    return Sent(
        place,
        name,
        str(given.get("type") or ""),
        str(given.get("site") or ""),
        _strip(given.get("strip"), where, ledger),
        tuple(one for one in shown_by if one is not None),
        _moment(given.get("device_time"), where, "device_time", zone, ledger),
        content,
        {key: value for key, value in content.items() if key not in ABOUT},
        tuple(ledger.findings),
    )


def _uuid(value: object, where: str, field: str, ledger: Ledger) -> UUID | None:
    try:
        return UUID(str(value)) if isinstance(value, str) else _wrong(value, where, field, ledger)
    except ValueError:
        return _wrong(value, where, field, ledger)


def _wrong(value: object, where: str, field: str, ledger: Ledger) -> None:
    words = "This record has no identifier." if value is None else f"{shown(value)} is no UUID."
    ledger.add(Node(value, where, field), words, "The phone gives each record one.", rule="PC-01")


def _strip(value: object, where: str, ledger: Ledger) -> int | None:
    if value is None or value == "":
        return None
    text = str(value)
    if isinstance(value, bool) or not text.isdecimal() or len(text) > 4:
        ledger.add(Node(value, where, "strip"), f"{shown(value)} is no strip.", "Give its number.")
        return None
    return int(text)


def _moment(value: object, where: str, field: str, zone: tzinfo, ledger: Ledger) -> datetime | None:
    if value is None or value == "":
        return None
    return read_moment(Node(value, where, field), zone, ledger)
