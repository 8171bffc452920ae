"""What every write at a trench begins with: its structure locked, its strip found, its day judged."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.errors import Refused
from structures.models import Strip, Structure
from structures.queries.districts import today_of
from structures.queries.trench_day import against_entering, look_that_counts

if TYPE_CHECKING:
    from datetime import date

    from structures.errors import Finding


def locked(structure_id: int) -> Structure:
    """Lock a structure: its row orders all that is written at its trench.

    Raises
    ------
    Structure.DoesNotExist
        If there is none.
    """
    return (
        Structure.objects.select_for_update(of=("self",))
        .select_related("site__watershed__district")
        .get(pk=structure_id)
    )


def locked_strip(strip_id: int) -> Strip:
    """Lock the structure of a strip and give the strip as it is under that lock.

    Raises
    ------
    Strip.DoesNotExist
        If there is none.
    """
    owner = Strip.objects.values_list("structure_id", flat=True).get(pk=strip_id)
    structure = locked(owner)
    strip = Strip.objects.prefetch_related("holds__asked_by", "holds__seen_by").get(pk=strip_id)
    strip.structure = structure
    return strip


def days_not_to_come(structure: Structure, *days: date) -> None:
    """Refuse days after the district's own today.

    Raises
    ------
    Refused
        With the day, and today.
    """
    today = today_of(structure.site.watershed.district)
    for day in days:
        if day > today:
            raise Refused(
                f"{day.isoformat()} is still to come; today is {today.isoformat()}.",
                where="day",
                remedy="Look at the day, and at the clock of the phone.",
            )


def why_nobody_goes_in(strip: Strip, day: date) -> tuple[Finding, ...]:
    """Say what stands against going into a strip on a day; () is no promise of safety."""
    structure = strip.structure
    look = look_that_counts(structure, day, strip)
    return against_entering(look, structure.alarms.all(), structure, str(strip))
