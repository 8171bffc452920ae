"""The measurement book: measured by one person, checked by another; a mistake is mended by a new entry."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist
from structures.actions.refusals import as_documents, refusal
from structures.actions.register import append
from structures.actions.trench import days_not_to_come, locked
from structures.errors import Finding, Refused
from structures.life.measuring import RELIES_ON
from structures.models import MeasurementEntry
from structures.queries.measurements import BookLine, holds_seen, line_of, places_taken
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from datetime import date
    from uuid import UUID

    from structures.models import Structure, User

CHECKED: Final = "measurement checked"
SENT_BACK: Final = "measurement sent back"
CORRECTED: Final = "correction"
CENT: Final = Decimal("0.01")
GREATEST: Final = Decimal("9999999999999.99")  # what the table keeps exactly


@dataclass(frozen=True, slots=True)
class Work:
    """What was measured where; without a strip it belongs to the whole wall.

    `working` says how the quantity came about: readings, dimensions, the offer of the drawing.
    """

    strip_id: int | None
    item: str
    quantity: Decimal
    measured_on: date
    from_m: float | None = None
    to_m: float | None = None
    working: str = ""


@transaction.atomic
def enter_measurement(*, structure_id: int, work: Work, by: User) -> MeasurementEntry:
    """Enter one item of one strip, or of the whole wall; a piece of work is entered once.

    Raises
    ------
    Refused
        With all that is wrong: role, item, quantity, day, or that it was measured before.
    """
    structure = locked(structure_id)
    insist(by, Act.MEASURE, structure)
    days_not_to_come(structure, work.measured_on)
    strip = structure.strips.filter(pk=work.strip_id).first()
    found = _judge(work) or _judge_place(structure, work, strip)
    if found:
        raise refusal(found, "entry")
    return MeasurementEntry.objects.create(
        structure=structure,
        strip=strip,
        code=_code(structure, work.item, work.from_m, strip and strip.number),
        item=work.item,
        from_m=work.from_m,
        to_m=work.to_m,
        unit=ITEMS[work.item],
        quantity=work.quantity,
        working=work.working.strip(),
        relies_on=[] if strip is None else list(RELIES_ON.get(work.item, ())),
        measured_on=work.measured_on,
        covered_on=strip and strip.covered_on,
        measured_by=by,
    )


@transaction.atomic
def correct_measurement(
    *, entry_id: UUID, difference: Decimal, why: str, measured_on: date, by: User
) -> MeasurementEntry:
    """Mend an accepted entry by another with the difference; the first stays as it is.

    Raises
    ------
    Refused
        If it is not accepted, more would be taken back than there is, or no reason is given.
    """
    entry, structure = _found(entry_id, by)
    days_not_to_come(structure, measured_on)
    if entry.corrects_id is not None or not entry.accepted:
        raise Refused(
            f"{entry.code} is not accepted, or is a correction itself.",
            where="entry",
            remedy="Send back what waits; correct the entry that was accepted.",
        )
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write what was mistaken.")
    before = sum(
        (one.quantity for one in entry.corrections.filter(sent_back_why="")), entry.quantity
    )
    if not difference or difference != difference.quantize(CENT) or before + difference < 0:
        raise Refused(
            f"{before:f} {entry.unit} stand; a difference of {difference:f} cannot be.",
            where="difference",
            remedy="Give what is added, or with a minus what is taken back, in hundredths.",
        )
    row = MeasurementEntry.objects.create(
        structure=structure,
        strip=entry.strip,
        code=_code(structure, entry.item, entry.from_m, entry.strip and entry.strip.number),
        item=entry.item,
        from_m=entry.from_m,
        to_m=entry.to_m,
        unit=entry.unit,
        quantity=difference,
        working=why.strip(),
        relies_on=entry.relies_on,
        measured_on=measured_on,
        covered_on=entry.strip and entry.strip.covered_on,
        measured_by=by,
        corrects=entry,
    )
    _enter(row, CORRECTED, by, why.strip())
    return row


@transaction.atomic
def check_measurement(*, entry_id: UUID, by: User) -> BookLine:
    """Accept an entry that another person measured; give it with what holds its line (BL-03, BL-06).

    Raises
    ------
    Refused
        If it is one's own (BL-02), or was checked before.
    """
    entry = _to_check(entry_id, by)
    _checked(entry, by)
    line = line_of(entry, holds_seen(entry.structure))
    _enter(entry, CHECKED, by, findings=line.findings)
    return line


@transaction.atomic
def send_back_measurement(*, entry_id: UUID, why: str, by: User) -> MeasurementEntry:
    """Send an entry back; it stays in the book with the reason, and its work is measured anew.

    Raises
    ------
    Refused
        If no reason is given, it is one's own, or it was checked before.
    """
    entry = _to_check(entry_id, by)
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write what is wrong with it.")
    entry.sent_back_why = why.strip()
    _checked(entry, by)
    _enter(entry, SENT_BACK, by, why.strip())
    return entry


def _found(entry_id: UUID, by: User) -> tuple[MeasurementEntry, Structure]:
    owner = MeasurementEntry.objects.values_list("structure_id", flat=True).get(pk=entry_id)
    structure = locked(owner)
    insist(by, Act.MEASURE, structure)
    entry = MeasurementEntry.objects.select_related("strip", "measured_by").get(pk=entry_id)
    entry.structure = structure
    return entry, structure


def _to_check(entry_id: UUID, by: User) -> MeasurementEntry:
    entry, _ = _found(entry_id, by)
    if entry.measured_by_id == by.pk:
        raise Refused(
            f"You measured entry {entry.code}.", where="entry", remedy="Another person must check."
        )
    if entry.checked_by_id is not None:
        said = "sent back" if entry.sent_back_why else "checked"
        raise Refused(
            f"Entry {entry.code} was {said} before.",
            where="entry",
            remedy="Correct it by another entry, or measure anew what was sent back.",
        )
    return entry


def _checked(entry: MeasurementEntry, by: User) -> None:
    entry.checked_by, entry.checked_at = by, timezone.now()
    entry.save(update_fields=["checked_by", "checked_at", "sent_back_why"])


def _judge(work: Work) -> list[Finding]:
    where, found, quantity = "entry", [], work.quantity
    if work.item not in ITEMS:
        what = f"There is no item {work.item}."
        found.append(Finding(where, "item", what, f"Known: {', '.join(ITEMS)}."))
    if not 0 < quantity <= GREATEST or quantity != quantity.quantize(CENT):
        what = f"A quantity of {quantity:f} cannot be."
        found.append(
            Finding(
                where,
                "quantity",
                what,
                "Give whole hundredths above zero; take back by a correction.",
            )
        )
    lift = (work.from_m, work.to_m)
    if work.item == "excavation":
        if None in lift or work.to_m <= work.from_m:
            what = "Excavation is measured by lifts, and this one is not said."
            found.append(Finding(where, "from_m", what, "Say from which depth to which."))
    elif lift != (None, None):
        what = f"{work.item} has no lifts."
        found.append(Finding(where, "from_m", what, "Leave both depths blank."))
    return found


def _judge_place(structure: Structure, work: Work, strip: Any) -> list[Finding]:
    if work.strip_id is not None and strip is None:
        return [
            Finding("entry", "strip", "There is no such strip here.", "Choose one of the list.")
        ]
    if strip is None and work.item in RELIES_ON:
        what = f"{work.item.replace('_', ' ').capitalize()} is measured strip by strip."
        return [Finding("entry", "strip", what, "Say which strip.")]
    if strip is not None and strip.opened_on is None:
        what = f"Strip {strip.number} was not opened."
        return [Finding("entry", "strip", what, "Nothing was done there; choose another strip.")]
    if strip is not None and work.measured_on < strip.opened_on:
        what = f"Strip {strip.number} was opened on {strip.opened_on}, after {work.measured_on}."
        return [Finding("entry", "measured_on", what, "Look at the day.")]
    if strip is not None and work.item not in RELIES_ON:
        what = f"{work.item.replace('_', ' ').capitalize()} is measured for the whole wall."
        return [Finding("entry", "strip", what, "Leave the strip blank.")]
    before = places_taken(structure.measurements.all()).get(
        (strip and strip.pk, work.item, work.from_m)
    )
    if before is None:
        return []
    what = f"This work stands in entry {before.code} already: {before.quantity:f} {before.unit}."
    remedy = "Enter the difference as a correction of it."
    return [Finding("entry", "item", what, remedy)]


def _code(structure: Structure, item: str, from_m: float | None, strip: int | None) -> str:
    """Name an entry by place and item; under the structure's lock no other takes the name."""
    place = "wall" if strip is None else f"M{strip:02d}"
    lift = "" if from_m is None else f"-{from_m:.1f}"
    name = f"{structure.site.code}-{place}-{item}{lift}"
    taken = set(structure.measurements.filter(code__startswith=name).values_list("code", flat=True))
    if name not in taken:
        return name
    return next(one for n in range(2, len(taken) + 3) if (one := f"{name}-{n}") not in taken)


def _enter(
    entry: MeasurementEntry,
    act: str,
    by: User,
    why: str = "",
    findings: tuple[Finding, ...] = (),
) -> None:
    structure = entry.structure
    append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"entry {entry.code} of {structure.site.code}",
        structure=structure,
        content={
            "entry": entry.code,
            "item": entry.item,
            "lift": [entry.from_m, entry.to_m],
            "quantity": f"{entry.quantity:f}",
            "unit": entry.unit,
            "measured_on": entry.measured_on.isoformat(),
            "measured_by": entry.measured_by.username,
            "corrects": "" if entry.corrects is None else entry.corrects.code,
            "why": why,
            "findings": as_documents(findings),
        },
    )
