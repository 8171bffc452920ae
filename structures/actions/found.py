"""Rock as it is found in the open trench; where it lies under what was drawn, the strip is halted."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, NamedTuple
from uuid import UUID, uuid4

from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import as_documents
from structures.actions.register import append
from structures.actions.trench import days_not_to_come, locked_strip
from structures.errors import Finding, Refused
from structures.life.strips import judge_found_rock
from structures.models import FoundLevel
from structures.queries.drawn_wall import ALLOWED_M, drawn_wall
from structures.queries.runs import site_subject
from structures.runs.events import ROCK_FOUND, happened

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from structures.models import Strip, User

HALTED: Final = "strip halted"
CORRECTED: Final = "correction"
BESIDE_M: Final = 0.5  # by which an offset may lie outside its strip (project choice)


class Found(NamedTuple):
    """One level: where, how high above the bench mark, under which identifier."""

    offset_m: float
    level_m: float
    row_id: UUID | None = None


@transaction.atomic
def keep_found_levels(
    *,
    strip_id: int,
    on: date,
    levels: Sequence[Found],
    by: User,
    corrects: FoundLevel | None = None,
) -> tuple[list[FoundLevel], tuple[Finding, ...]]:
    """Keep levels of rock seen in a strip, and say what they mean against the drawing (HP-05).

    Rock below the drawn range halts the strip at once; whoever waits for that computes anew. A
    mistaken level is mended by one that `corrects` it; the halt stays until it is decided on.

    Raises
    ------
    Refused
        If the user may not, the strip was not open that day, or an offset lies outside of it.
    """
    strip = locked_strip(strip_id)
    structure = strip.structure
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, on)
    _insist_open(strip, on)
    for one in levels:
        _insist_inside(strip, one)
    rows = [
        FoundLevel.objects.create(
            id=one.row_id or uuid4(),
            strip=strip,
            offset_m=one.offset_m,
            level_m=one.level_m,
            measured_on=on,
            by=by,
            corrects=corrects,
        )
        for one in levels
    ]
    findings = _judge(strip, rows)
    if any(one.level == "block" for one in findings):
        _halt(strip, rows, findings, by)
    if corrects is not None:
        _enter(strip, by, CORRECTED, [corrects, *rows], ())
    return rows, findings


def _insist_open(strip: Strip, on: date) -> None:
    if strip.opened_on is None or on < strip.opened_on:
        raise Refused(
            f"Strip {strip.number} was not open on {on.isoformat()}.",
            where=str(strip),
            remedy="Write down first that it was opened, or look at the day.",
        )
    if strip.covered_on is not None and on > strip.covered_on:
        raise Refused(
            f"Strip {strip.number} was covered on {strip.covered_on}: nobody saw rock in it later.",
            where=str(strip),
            remedy="Look at the day.",
        )


def _insist_inside(strip: Strip, one: Found) -> None:
    if not strip.from_m - BESIDE_M <= one.offset_m <= strip.to_m + BESIDE_M:
        raise Refused(
            f"Offset {one.offset_m:g} m lies outside strip {strip.number} "
            f"({strip.from_m:g} to {strip.to_m:g} m).",
            where="offset_m",
            remedy="Other strip, or measured from the other bank?",
        )


def _judge(strip: Strip, rows: Sequence[FoundLevel]) -> tuple[Finding, ...]:
    drawn = drawn_wall(strip.structure)
    found = []
    for row in rows:
        if drawn is not None:
            low, high = drawn.range_at(row.offset_m)
        else:  # taken over from before: of the drawing only the lowest rock of the strip is known
            lowest = strip.drawn_rock_low_m
            if lowest is None and strip.drawn_rock_m is not None:
                lowest = strip.drawn_rock_m - ALLOWED_M
            low, high = lowest, None if lowest is None else max(lowest, row.level_m)
        said = judge_found_rock(strip.number, row.level_m, low, high)
        if said is not None:
            found.append(said)
    return tuple(found)


def _halt(
    strip: Strip, rows: Sequence[FoundLevel], findings: tuple[Finding, ...], by: User
) -> None:
    structure = strip.structure
    strip.halted = True
    strip.save(update_fields=["halted"])
    _enter(strip, by, HALTED, rows, findings)
    lowest = min(rows, key=lambda row: row.level_m)
    subject = site_subject(structure.site.code)
    happened(ROCK_FOUND, structure.pk, cause=str(lowest.pk), subject=subject, by=by)


def _enter(
    strip: Strip, by: User, act: str, rows: Sequence[FoundLevel], findings: tuple[Finding, ...]
) -> None:
    structure = strip.structure
    append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"strip {strip.number} of {structure.site.code}",
        structure=structure,
        content={
            "strip": strip.number,
            "levels": [
                [str(row.pk), row.offset_m, row.level_m, row.measured_on.isoformat()]
                for row in rows
            ],
            "findings": as_documents(findings),
        },
    )
