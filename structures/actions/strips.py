"""Strips: cut from the frozen drawing, opened, covered; what was covered unseen stays so for good."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import as_documents, refusal
from structures.actions.register import append
from structures.actions.trench import (
    days_not_to_come,
    locked,
    locked_strip,
    why_nobody_goes_in,
)
from structures.errors import Finding, Refused
from structures.life.holds import NINE, covered_unseen, judge_cover
from structures.life.stages import DIGGING, RISING
from structures.life.strips import cut_strips
from structures.models import Strip
from structures.queries.drawn_wall import drawn_wall
from structures.queries.settings import settings_in_force
from structures.queries.trench_day import so_far

if TYPE_CHECKING:
    from datetime import date

    from structures.models import User

UNSEEN: Final = "covered unseen"
CUT: Final = "strips cut"
WHAT_MOST: Final = 200


@transaction.atomic
def cut_wall(*, structure_id: int, by: User) -> list[Strip]:
    """Cut the frozen drawing's wall into strips; again only while none of them was begun.

    Raises
    ------
    Refused
        If the user may not, no drawing is frozen, or work on a strip has begun.
    """
    structure = locked(structure_id)
    insist(by, Act.DRAW, structure)
    drawn = drawn_wall(structure)
    if drawn is None:
        raise Refused(
            "No drawing with a rock line is frozen here.",
            where=structure.site.code,
            remedy="Settle the rock line, draw the wall and have it checked first.",
        )
    if (
        structure.strips.filter(opened_on__isnull=False).exists()
        or structure.strips.filter(holds__isnull=False).exists()
    ):
        raise Refused(
            "Work on a strip has begun; the wall is not cut anew under it.",
            where=structure.site.code,
            remedy="Go on with the strips as they are.",
        )
    structure.strips.all().delete()
    district = structure.site.watershed.district
    length_m = settings_in_force(district)["strip_m"].value
    rows = []
    for one in cut_strips(drawn.wall.left_end_m, drawn.wall.right_end_m, length_m):
        line, low = drawn.lowest_m(one.from_m, one.to_m)
        rows.append(
            Strip(
                structure=structure,
                number=one.number,
                from_m=one.from_m,
                to_m=one.to_m,
                drawn_rock_m=round(line, 3),
                drawn_rock_low_m=round(low, 3),
            )
        )
    Strip.objects.bulk_create(rows)
    append(
        district=district,
        by=by,
        act=CUT,
        subject=f"{len(rows)} strips of {structure.site.code}",
        structure=structure,
        content={
            "design": drawn.design.digest,
            "strips": [[row.number, row.from_m, row.to_m, row.drawn_rock_m] for row in rows],
        },
    )
    return list(structure.strips.all())


@transaction.atomic
def open_strip(*, strip_id: int, on: date, by: User) -> Strip:
    """Write down that digging began on a strip.

    Raises
    ------
    Refused
        If the stage is not digging or rising, H1 was not seen, nobody looked that day or the look
        says stop (TR-01), or an alarm is set; with every reason.
    """
    strip = locked_strip(strip_id)
    structure = strip.structure
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, on)
    if strip.opened_on is not None:
        raise Refused(f"Strip {strip.number} was opened on {strip.opened_on}.", where=str(strip))
    against = _against_opening(strip, on)
    if against:
        raise refusal(against, "opening")
    strip.opened_on = on
    strip.save(update_fields=["opened_on"])
    return strip


@transaction.atomic
def cover_strip(*, strip_id: int, on: date, by: User, knows_unseen: bool) -> Strip:
    """Write down that a strip is backfilled; what nobody saw is marked, and stays marked.

    Parameters
    ----------
    knows_unseen
        Whether who covers has read what will be marked; asked for only where something will be.

    Raises
    ------
    Refused
        If it is not open, or the mark was not agreed to.
    """
    strip = locked_strip(strip_id)
    structure = strip.structure
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, on)
    if strip.opened_on is None or strip.covered_on is not None or on < strip.opened_on:
        what = "was not opened before that day" if strip.covered_on is None else "is covered"
        raise Refused(f"Strip {strip.number} {what}.", where=str(strip), remedy="Look at the day.")
    strip.covered_on = on
    judged = so_far(strip)
    unseen = covered_unseen(judged)
    if unseen and not knows_unseen:
        names = ", ".join(f"{hold} {NINE[hold].name}" for hold in unseen)
        raise Refused(
            f"Not seen: {names}. Covered now, strip {strip.number} is marked covered unseen for ever.",
            where="knows_unseen",
            remedy="Wait until it was seen, or say that you know it.",
        )
    strip.covered_unseen = bool(unseen)
    strip.unseen_what = ", ".join(f"{hold} {NINE[hold].name}" for hold in unseen)[:WHAT_MOST]
    strip.save(update_fields=["covered_on", "covered_unseen", "unseen_what"])
    if unseen:
        append(
            district=structure.site.watershed.district,
            by=by,
            act=UNSEEN,
            subject=f"strip {strip.number} of {structure.site.code}",
            structure=structure,
            content={
                "strip": strip.number,
                "covered_on": on.isoformat(),
                "unseen": list(unseen),
                "findings": as_documents(judge_cover(judged)),
            },
        )
    return strip


def _against_opening(strip: Strip, on: date) -> list[Finding]:
    structure, where = strip.structure, str(strip)
    found = []
    if structure.stage not in (DIGGING, RISING):
        what = (
            f"{structure.site.code} stands at {structure.stage}; a strip is opened while digging."
        )
        remedy = (
            "Move it to digging first: papers, season and the look of the day are judged there."
        )
        found.append(Finding(where, "stage", what, remedy, rule="SL-01"))
    if "H1" not in so_far(strip).seen():
        what = f"H1 of strip {strip.number} was not seen."
        remedy = "Have line and level pegs seen first."
        found.append(Finding(where, "hold", what, remedy, rule="HP-01"))
    return [*found, *why_nobody_goes_in(strip, on)]
