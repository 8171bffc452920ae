"""Hold points: asked for by one person, seen by another, in their order; each entered for good."""

from __future__ import annotations

from datetime import datetime
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID, uuid4

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist
from structures.actions.found import Found, keep_found_levels
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.actions.trench import (
    days_not_to_come,
    locked_strip,
    why_nobody_goes_in,
)
from structures.errors import Finding, Refused
from structures.intake.field_records import HOLD, HOLD_READINGS, point_of
from structures.life.holds import LAST, LAYERS, NINE, Sight, judge_hold, photo_counts
from structures.life.stages import CLEARED, DIGGING, HALTED, RISING
from structures.models import HoldPoint, Photo, Strip
from structures.queries.trench_day import moment_in, so_far

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from datetime import date

    from structures.models import User

SEEN: Final = "hold point seen"
ASKED_IN: Final = (CLEARED, DIGGING, RISING, HALTED)
BEFORE_DIGGING: Final = "H1"  # pegs are set on ground that nobody has opened
ROCK_AT: Final = ("rock_start_m", "rock_middle_m", "rock_end_m")


class AskedBefore(Refused):
    """The hold point waits already, asked for by somebody else or with other readings."""

    def __init__(self, hold: HoldPoint) -> None:
        self.hold = hold
        asked = f"{hold.asked_at:%Y-%m-%d %H:%M}"
        super().__init__(
            f"{hold.hold} was asked for by {hold.asked_by.username} on {asked} and waits to be seen.",
            where=str(hold.strip),
            remedy="Both are kept; the engineer sees the two side by side.",
        )


@transaction.atomic
def ask_hold(
    *,
    strip_id: int,
    hold: str,
    by: User,
    asked_at: datetime,
    readings: Mapping[str, Any],
    photos: Sequence[UUID] = (),
    row_id: UUID | None = None,
) -> tuple[HoldPoint, tuple[Finding, ...]]:
    """Ask for a hold point to be seen, with what was read there; the levels of H2 are rock found.

    Raises
    ------
    AskedBefore
        If it waits already.
    Refused
        If the user may not, the strip is not at that point, a reading is missing, or nobody looked
        into the trench that day and it was not taken from the edge.
    """
    strip = locked_strip(strip_id)
    insist(by, Act.RECORD_WORKS, strip.structure)
    asked_at = moment_in(strip.structure, asked_at)
    day = asked_at.date()
    days_not_to_come(strip.structure, day)
    against = _against_asking(strip, hold, day, readings)
    if against:
        raise refusal(against, "hold point")
    earlier = [one for one in strip.holds.all() if one.hold == hold]
    waiting = next((one for one in earlier if one.seen_at is None), None)
    if waiting is not None:
        raise AskedBefore(waiting)
    newest = max((one.attempt for one in earlier), default=0)
    row = HoldPoint.objects.create(
        id=row_id or uuid4(),
        strip=strip,
        hold=hold,
        attempt=newest + 1,
        asked_at=asked_at,
        asked_by=by,
        readings={key: value for key, value in readings.items() if value is not None},
    )
    row.photos.set(_photos_of(strip, photos))
    findings: tuple[Finding, ...] = ()
    if hold == "H2":
        findings = _keep_rock(strip, row, day, by)
    return row, findings


@transaction.atomic
def see_hold(
    *,
    hold_id: UUID,
    result: str,
    by: User,
    note: str = "",
    photos: Sequence[UUID] = (),
    seen_at: datetime | None = None,
) -> HoldPoint:
    """Say what was seen: go, go with a note, or no; with photos of one's own beside the asker's.

    Raises
    ------
    Refused
        If the user may not see it or asked for it (HP-02), it was seen, a point before it was not
        (HP-01), a photo is missing (HP-03), a note is, or the strip is halted or covered.
    """
    owner = HoldPoint.objects.values_list("strip_id", flat=True).get(pk=hold_id)
    strip = locked_strip(owner)
    row = HoldPoint.objects.select_related("asked_by").get(pk=hold_id)
    insist(by, Act.SEE_HOLD, strip.structure)
    if row.seen_at is not None:
        who = row.seen_by.username
        raise Refused(f"{row.hold} was seen by {who}: {row.result}.", where=str(strip))
    if result not in (HoldPoint.Result.GO, HoldPoint.Result.NOTE, HoldPoint.Result.NO):
        raise Refused("It is not said what was seen.", where="result", remedy="Go, or no.")
    if result != HoldPoint.Result.GO and not note.strip():
        raise Refused("A note is missing.", where="note", remedy="Write what is to be done.")
    row.photos.add(*_photos_of(strip, photos))
    against = judge_hold(
        so_far(strip),
        Sight(
            row.hold,
            row.asked_by.username,
            by.username,
            photos=counting_photos(row),
            lets_go=result != HoldPoint.Result.NO,
        ),
    )
    if against:
        raise refusal(against, "hold point")
    row.seen_at = moment_in(strip.structure, seen_at or timezone.now())
    row.seen_by = by
    row.result, row.note = result, note.strip()
    row.save(update_fields=["seen_at", "seen_by", "result", "note"])
    _enter(strip, row)
    return row


def counting_photos(hold: HoldPoint) -> int:
    """Count the photos that say their place and were taken on the day of asking or later."""
    structure = hold.strip.structure
    asked = moment_in(structure, hold.asked_at).date()
    count = 0
    for one in hold.photos.all():
        taken = None if one.taken_at is None else moment_in(structure, one.taken_at).date()
        day = max(asked, taken) if taken else asked
        count += photo_counts(taken_on=taken, has_position=one.lat is not None, day=day)
    return count


def _against_asking(
    strip: Strip, hold: str, day: date, readings: Mapping[str, Any]
) -> list[Finding]:
    where, structure = str(strip), strip.structure
    if not HOLD.fullmatch(hold) or hold == LAYERS:
        what = f"{hold} is no hold point of a strip."
        return [Finding(where, "hold", what, "H1 to H9; layers are H7.1, H7.2 and so on.")]
    found = []
    if structure.stage not in ASKED_IN:
        what = f"{structure.site.code} stands at {structure.stage}: nothing is dug there."
        found.append(Finding(where, "stage", what, "Have it cleared for this season first."))
    if strip.covered_on is not None and day > strip.covered_on and hold != LAST:
        what = f"Strip {strip.number} was covered on {strip.covered_on}; {hold} is past."
        found.append(Finding(where, "hold", what, "Nobody can see it now.", rule="HP-04"))
    if hold != BEFORE_DIGGING:
        if strip.opened_on is None or day < strip.opened_on:
            what = f"Strip {strip.number} was not open on {day.isoformat()}."
            found.append(Finding(where, "hold", what, "Write down first that it was opened."))
        elif not readings.get("from_edge"):
            found += why_nobody_goes_in(strip, day)
    for field in HOLD_READINGS[point_of(hold)]:
        if field.kind in ("number", "whole") and readings.get(field.key) is None:
            found.append(Finding(where, field.key, "This was not read.", field.asks))
    return found


def _keep_rock(strip: Strip, row: HoldPoint, day: date, by: User) -> tuple[Finding, ...]:
    places = (strip.from_m, (strip.from_m + strip.to_m) / 2, strip.to_m)
    levels = [
        Found(offset_m, row.readings[key]) for offset_m, key in zip(places, ROCK_AT, strict=True)
    ]
    _, findings = keep_found_levels(strip_id=strip.pk, on=day, levels=levels, by=by)
    return findings


def _photos_of(strip: Strip, ids: Sequence[UUID]) -> list[Photo]:
    found = list(Photo.objects.filter(pk__in=ids, site=strip.structure.site_id))
    if len(found) != len(set(ids)):
        raise Refused(
            "A photo named here has not come.",
            where="photos",
            remedy="The phone sends photos first; send the record again after them.",
        )
    return found


def _enter(strip: Strip, row: HoldPoint) -> None:
    structure = strip.structure
    append(
        district=structure.site.watershed.district,
        by=row.seen_by,
        act=SEEN,
        subject=f"{row.hold} {NINE[point_of(row.hold)].name}, strip {strip.number} of "
        f"{structure.site.code}: {row.result}",
        structure=structure,
        content={
            "hold_point": str(row.pk),
            "hold": row.hold,
            "strip": strip.number,
            "attempt": row.attempt,
            "asked_by": row.asked_by.username,
            "asked_at": row.asked_at.isoformat(),
            "readings": row.readings,
            "photos": sorted(one.sha256 for one in row.photos.all()),
            "result": row.result,
            "note": row.note,
        },
    )
