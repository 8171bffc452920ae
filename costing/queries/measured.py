"""The measurement book as bills and forecasts reckon with it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from costing.models import BillLine
from costing.price.billing import Billed, Measured
from structures.models import MeasurementEntry
from structures.queries.measurements import covered_on, holds_seen

if TYPE_CHECKING:
    from structures.models import Structure


def measured_book(structure: Structure) -> dict[str, Measured]:
    """Give every entry that was not sent back by its code, with the line that bills it, if any."""
    seen = holds_seen(structure)
    billed = {
        line.entry_id: Billed(line.bill.number, line.order)
        for line in BillLine.objects.filter(bill__structure=structure)
        .exclude(state=BillLine.State.REFUSED)
        .select_related("bill")
    }
    rows = (
        MeasurementEntry.objects.filter(structure=structure, sent_back_why="")
        .select_related("strip", "measured_by", "checked_by", "corrects")
        .order_by("strip__number", "measured_on", "code")
    )
    return {
        row.code: Measured(
            entry_id=row.code,
            strip=None if row.strip is None else row.strip.number,
            item=row.item,
            from_m=row.from_m,
            to_m=row.to_m,
            quantity=row.quantity,
            unit=row.unit,
            measured_on=row.measured_on,
            covered_on=covered_on(row),
            measured_by=row.measured_by.username,
            checked_by=None if row.checked_by is None else row.checked_by.username,
            relies_on=tuple(row.relies_on),
            holds=seen.get(row.strip_id, ()),
            billed_in=billed.get(row.pk),
            corrects=None if row.corrects is None else row.corrects.code,
        )
        for row in rows
    }


def accepted(book: dict[str, Measured]) -> tuple[Measured, ...]:
    """Entries that another person checked."""
    return tuple(one for one in book.values() if one.checked_by is not None)
