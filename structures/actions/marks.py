"""Changing the measuring point of a well: what follows for every reading since that day is told."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import timedelta
from typing import TYPE_CHECKING, Any

from django.db import transaction

from structures.access import Act, insist
from structures.actions.doubts import open_doubts
from structures.actions.recount import recount
from structures.actions.refusals import as_documents, blocking, refusal
from structures.actions.register import append
from structures.actions.well_rows import read_mark, typed_row
from structures.errors import Finding
from structures.intake.tree import Ledger
from structures.models import MeasuringPoint, Photo, Reading, Well
from structures.queries.districts import today_of
from structures.queries.wells import mark_of, marks_of
from structures.water.marks import mark_findings, moved_m

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from datetime import date
    from uuid import UUID

    from structures.actions.recount import Moved
    from structures.models import User


@dataclass(frozen=True, slots=True)
class Changed:
    """A mark that was entered, the readings whose level came out otherwise, what is doubted."""

    mark: MeasuringPoint
    moved: tuple[Moved, ...]
    held: int
    findings: tuple[Finding, ...]


@transaction.atomic
def change_mark(
    *, well_id: int, values: Mapping[str, Any], by: User, photo_id: UUID | None = None
) -> Changed:
    """Enter the measuring point that is used from a day on; the one before ends the day before.

    Readings since that day get their level anew, and those that name the mark before wait for a
    decision (LV-03).

    Raises
    ------
    Refused
        If the marks would overlap (MM-01) or a field cannot be; `findings` names each.
    """
    # The well's row locks its marks and readings: two changes do not cross.
    well = (
        Well.objects.select_for_update(of=("self",))
        .select_related("watershed__district")
        .get(pk=well_id)
    )
    insist(by, Act.ENTER_WELL, well)
    said = _read(well, values)
    now = well.marks.filter(valid_to__isnull=True).first()
    if now is not None and now.valid_from < said["valid_from"]:
        now.valid_to = said["valid_from"] - timedelta(days=1)
        now._history_user = by
        now.save()
    new = MeasuringPoint(well=well, by=by, entered_on=today_of(well.watershed.district), **said)
    new.photo = None if photo_id is None else Photo.objects.filter(pk=photo_id).first()
    found = mark_findings(well.code, [*marks_of(well), mark_of(new)])
    if blocking(found):
        raise refusal(found, "measuring point")
    mine = tuple(one for one in found if one.where == f"{well.code} {new.mark}")
    new.findings = as_documents(mine)
    new._history_user = by
    new.save()
    since = _since(well, new.valid_from)
    held = open_doubts(well, since, only=("LV-03",))
    moved = recount(well, since)
    _register(well, new, now, moved, by)
    return Changed(new, tuple(moved), held, mine)


def _read(well: Well, values: Mapping[str, Any]) -> dict[str, Any]:
    ledger = Ledger()
    said = read_mark(typed_row(values, well.code), ledger)
    if said is not None and said.get("height_above_ground_m") is None:
        level, ground = said.get("level_m"), well.ground_level_m
        if None not in (level, ground):
            said["height_above_ground_m"] = round(level - ground, 3)
    if said is not None and said.get("level_m") is None:
        height, ground = said.get("height_above_ground_m"), well.ground_level_m
        if None not in (height, ground):
            said["level_m"] = round(ground + height, 3)
    if said is not None and well.marks.filter(mark=said["mark"]).exists():
        ledger.findings.append(
            Finding(
                well.code, "mark", f"{well.code} has a mark {said['mark']}.", "Take a new name."
            )
        )
    if blocking(ledger.findings):
        raise refusal(ledger.findings, "measuring point")
    return {key: value for key, value in said.items() if value is not None}


def _since(well: Well, day: date) -> Sequence[Reading]:
    # A day earlier by the clock of the server may be the same day by that of the district.
    return list(well.readings.filter(read_at__date__gte=day - timedelta(days=1)))


def _register(
    well: Well, new: MeasuringPoint, old: MeasuringPoint | None, moved: Sequence[Moved], by: User
) -> None:
    step_m = None if old is None else moved_m(mark_of(old), mark_of(new))
    append(
        district=well.watershed.district,
        by=by,
        act="measuring point",
        subject=f"{well.code}: {new.mark}, {new.what}"[:200],
        content={
            "well": well.code,
            "mark": new.mark,
            "valid_from": new.valid_from.isoformat(),
            "level_m": new.level_m,
            "moved_m": None if step_m is None else round(step_m, 3),
            "readings_computed_again": len(moved),
        },
    )
