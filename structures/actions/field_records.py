"""What becomes of one record of the stream bed: the same act, from a page or from a phone's parcel."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, datetime, time
from typing import TYPE_CHECKING, Any, Final

from structures.actions.clay import keep_clay_test
from structures.actions.day_book import keep_day_sheet, tell_incident
from structures.actions.found import Found, keep_found_levels
from structures.actions.holds import ask_hold
from structures.actions.looks import keep_look
from structures.actions.refusals import as_findings
from structures.errors import Finding, Refused

if TYPE_CHECKING:
    from collections.abc import Callable
    from uuid import UUID

    from structures.models import FoundLevel, Strip, Structure, User

Findings = tuple[Finding, ...]


@dataclass(frozen=True, slots=True)
class Taken:
    """One record, read and placed; `row_id` is the identifier of what it becomes.

    `corrects` is what an earlier form of the same record became, where it has to be told apart.
    """

    structure: Structure
    strip: Strip | None
    values: dict[str, Any]
    made_at: datetime
    photos: tuple[UUID, ...]
    row_id: UUID
    by: User
    corrects: FoundLevel | None = None

    @property
    def day(self) -> date:
        return date.fromisoformat(self.values["day"])

    def rest(self, *known: str) -> dict[str, Any]:
        """Give the values that are handed on as they are."""
        return {key: value for key, value in self.values.items() if key not in known}


def _look(one: Taken) -> Findings:
    row = keep_look(
        structure_id=one.structure.pk,
        day=one.day,
        looked_at=time.fromisoformat(one.values["looked_at"]),
        by=one.by,
        strip=one.strip,
        row_id=one.row_id,
        **one.rest("day", "looked_at"),
    )
    return as_findings(row.findings)


def _hold_asked(one: Taken) -> Findings:
    _, findings = ask_hold(
        strip_id=_strip(one).pk,
        hold=one.values["hold"],
        by=one.by,
        asked_at=one.made_at,
        readings=one.rest("hold"),
        photos=one.photos,
        row_id=one.row_id,
    )
    return findings


def _found_level(one: Taken) -> Findings:
    level = Found(one.values["offset_m"], one.values["level_m"], one.row_id)
    _, findings = keep_found_levels(
        strip_id=_strip(one).pk, on=one.day, levels=[level], by=one.by, corrects=one.corrects
    )
    return findings


def _clay_test(one: Taken) -> Findings:
    row = keep_clay_test(
        structure_id=one.structure.pk,
        day=one.day,
        by=one.by,
        strip=one.strip,
        row_id=one.row_id,
        **one.rest("day"),
    )
    return as_findings(row.findings)


def _day_sheet(one: Taken) -> Findings:
    keep_day_sheet(
        structure_id=one.structure.pk,
        day=one.day,
        by=one.by,
        row_id=one.row_id,
        **one.rest("day"),
    )
    return ()


def _incident(one: Taken) -> Findings:
    tell_incident(
        structure_id=one.structure.pk,
        day=one.day,
        by=one.by,
        strip=one.strip,
        row_id=one.row_id,
        **one.rest("day"),
    )
    return ()


def _strip(one: Taken) -> Strip:
    if one.strip is None:
        raise Refused("It is not said which strip.", where="strip", remedy="Name the strip.")
    return one.strip


TAKE: Final[dict[str, Callable[[Taken], Findings]]] = {
    "incident": _incident,
    "look": _look,
    "day-sheet": _day_sheet,
    "found-level": _found_level,
    "clay-test": _clay_test,
    "hold-asked": _hold_asked,
}
