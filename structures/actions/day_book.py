"""What a day at the trench was, and what went wrong: day sheets and incidents, never taken back."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final
from uuid import UUID, uuid4

from django.db import transaction

from structures.access import Act, insist
from structures.actions.register import append
from structures.actions.trench import days_not_to_come, locked
from structures.errors import Refused
from structures.models import DaySheet, Incident, Strip

if TYPE_CHECKING:
    from datetime import date

    from structures.models import User

HAPPENED: Final = "incident"
SAID: Final = dict(Incident.Kind.choices)


@transaction.atomic
def keep_day_sheet(
    *, structure_id: int, day: date, by: User, row_id: UUID | None = None, **said: Any
) -> DaySheet:
    """Keep what a day was; a later sheet of the same day stands beside the first.

    `said` are people, machines, pump_hours, weather, done.

    Raises
    ------
    Refused
        If the user may not write at this trench, or the day is still to come.
    """
    structure = locked(structure_id)
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, day)
    return DaySheet.objects.create(
        id=row_id or uuid4(), structure=structure, day=day, by=by, **_plain(said)
    )


@transaction.atomic
def tell_incident(
    *,
    structure_id: int,
    day: date,
    by: User,
    strip: Strip | None = None,
    adds_to_id: UUID | None = None,
    row_id: UUID | None = None,
    **said: Any,
) -> Incident:
    """Write down that somebody was hurt, or nearly; it goes into the register and stays there.

    `said` are kind, what, hurt, done. What was wrong or missing in it is told by a later one that
    `adds_to` it.

    Raises
    ------
    Refused
        If the user may not write at this trench, nothing is told, or the day is still to come.
    """
    structure = locked(structure_id)
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, day)
    kind, what = said.get("kind"), (said.get("what") or "").strip()
    if kind not in Incident.Kind.values:
        raise Refused("What it was is not said.", where="kind", remedy="Choose one of the list.")
    if not what:
        raise Refused(
            "It is not told what happened.", where="what", remedy="Tell it in a sentence."
        )
    adds_to = None
    if adds_to_id is not None:
        adds_to = structure.incidents.filter(pk=adds_to_id).first()
        if adds_to is None:
            raise Refused("There is no such incident here.", remedy="Add to one of this trench.")
    row = Incident.objects.create(
        id=row_id or uuid4(),
        structure=structure,
        strip=strip,
        day=day,
        kind=kind,
        hurt=said.get("hurt"),
        what=what,
        done=(said.get("done") or "").strip(),
        adds_to=adds_to,
        by=by,
    )
    append(
        district=structure.site.watershed.district,
        by=by,
        act=HAPPENED,
        subject=f"{SAID[kind]} at {structure.site.code}",
        structure=structure,
        content={
            "incident": str(row.pk),
            "day": day.isoformat(),
            "kind": kind,
            "hurt": row.hurt,
            "what": what,
            "done": row.done,
            "strip": None if strip is None else strip.number,
            "adds_to": None if adds_to is None else str(adds_to.pk),
        },
    )
    return row


def _plain(said: dict[str, Any]) -> dict[str, Any]:
    """Leave out what was not said: text fields have no None."""
    return {key: value for key, value in said.items() if value is not None}
