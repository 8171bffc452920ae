"""Deciding on doubted readings: by somebody else than the sender, with a reason, never for ever."""

from __future__ import annotations

import re
from datetime import datetime
from typing import TYPE_CHECKING, Final

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist
from structures.actions.recount import recount
from structures.actions.register import append
from structures.errors import Refused
from structures.models import Reading, Repair, Well

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from structures.models import User

VALUE: Final = re.compile(r"\d{1,3}(\.\d{1,4})?", re.ASCII)
MANY: Final = 2000  # doubts that are decided with one reason


@transaction.atomic
def decide_repairs(
    *, repair_ids: Iterable[int], decision: str, why: str, by: User, value: str = ""
) -> list[Repair]:
    """Decide on open doubts with one reason; every level that depends on them follows.

    Raises
    ------
    Refused
        If the reason or the value is missing, somebody decided already, or the user sent the
        reading: nobody decides on their own.
    """
    rows = _locked(repair_ids, by)
    for one in rows:
        if one.decision:
            what = f"{one.decided_by.username} has decided on this already."
            raise Refused(what, where=_name(one), remedy="Reverse that decision instead.")
        _decide(one, decision, value, why, by)
        one.save()
    _follow(rows, by)
    return rows


@transaction.atomic
def reverse_repair(*, repair_id: int, decision: str, why: str, by: User, value: str = "") -> Repair:
    """Put another decision in the place of one that was made; both stay to be read.

    Raises
    ------
    Refused
        As for a decision, and if there is nothing to reverse.
    """
    (old,) = _locked([repair_id], by)
    if not old.decision or Repair.objects.filter(reverses=old).exists():
        raise Refused(
            "There is no decision here that counts.",
            where=_name(old),
            remedy="Open the reading again and look at what was decided last.",
        )
    new = Repair(
        reading=old.reading,
        field=old.field,
        rule=old.rule,
        raw=old.raw,
        suggested=old.suggested,
        told=old.told,
        reverses=old,
    )
    _decide(new, decision, value, why, by)
    new.save()
    _follow([new], by)
    return new


def _locked(repair_ids: Iterable[int], by: User) -> Sequence[Repair]:
    """Lock the wells, then their doubts, so that two people do not decide one thing at once."""
    ids = list(dict.fromkeys(repair_ids))
    if not ids:
        raise Refused("Nothing was chosen.", where="repairs", remedy="Tick what you decide on.")
    if len(ids) > MANY:
        raise Refused(f"{len(ids)} at once are too many.", remedy=f"Decide on {MANY} at most.")
    wells = (
        Well.objects.select_for_update(of=("self",))
        .filter(readings__repairs__in=ids)
        .select_related("watershed__district")
        .order_by("code")
    )
    for well in {one.pk: one for one in wells}.values():
        insist(by, Act.DECIDE_REPAIR, well)
    rows = list(
        Repair.objects.select_for_update(of=("self",))
        .filter(pk__in=ids)
        .select_related("reading__well__watershed__district", "reading__by", "decided_by")
        .order_by("pk")
    )
    if len(rows) < len(ids):
        raise Refused("Something chosen is not there.", remedy="Open the list again.")
    for one in rows:
        if one.reading.by_id == by.pk:
            raise Refused(
                f"You sent this reading of {one.reading.well.code}; another engineer decides.",
                where=_name(one),
                remedy="Leave it to somebody who did not send it.",
            )
    return rows


def _decide(one: Repair, decision: str, value: str, why: str, by: User) -> None:
    if not why.strip():
        raise Refused("This is missing.", where="why", remedy="Write why you decide so.")
    if decision not in (choice for choice in Repair.Decision.values if choice):
        raise Refused("Nothing was decided.", where="decision", remedy="Choose one.")
    one.value = _value(one, decision, value.strip())
    one.decision, one.why = decision, why.strip()
    one.decided_by, one.decided_at = by, timezone.now()


def _value(one: Repair, decision: str, value: str) -> str:
    if decision == Repair.Decision.SUGGESTED:
        if not one.suggested:
            raise Refused(
                "Nothing is suggested here.",
                where="decision",
                remedy="Keep what was sent, give another value, or leave the reading out.",
            )
        return one.suggested
    if decision != Repair.Decision.OTHER:
        return ""
    if one.field == "depth_m" and VALUE.fullmatch(value):
        return value
    if one.field == "mark" and one.reading.well.marks.filter(mark=value).exists():
        return value
    if one.field == "read_at" and _is_moment(value):
        return value
    words = {
        "depth_m": "Give the depth in metres, like 8.84.",
        "mark": f"Give a mark of {one.reading.well.code}.",
        "read_at": "Give day and time, like 2026-03-05T06:30+05:30.",
    }
    remedy = words.get(one.field, "Keep what was sent, or leave the reading out.")
    raise Refused("This value cannot be.", where="value", remedy=remedy)


def _is_moment(value: str) -> bool:
    try:
        return datetime.fromisoformat(value).tzinfo is not None
    except ValueError:
        return False


def _follow(rows: Sequence[Repair], by: User) -> None:
    """Work out what counts anew, and write the decision into the register, one entry a well."""
    wells = {one.reading.well_id: one.reading.well for one in rows}
    for well in wells.values():
        mine = [one for one in rows if one.reading.well_id == well.pk]
        readings = Reading.objects.filter(pk__in={one.reading_id for one in mine})
        moved = recount(well, list(readings))
        append(
            district=well.watershed.district,
            by=by,
            act="reading decided",
            subject=f"{well.code}: {mine[0].rule}, {len(mine)} readings",
            content={
                "well": well.code,
                "decision": mine[0].decision,
                "why": mine[0].why,
                "levels_changed": len(moved),
                "readings": [
                    {
                        "id": str(one.reading_id),
                        "rule": one.rule,
                        "field": one.field,
                        "raw": one.raw,
                        "value": one.value,
                    }
                    for one in mine[:100]
                ],
            },
        )


def _name(one: Repair) -> str:
    return f"{one.reading.well.code} {one.reading.read_at:%Y-%m-%d}"
