"""Quantities times rates: the lines of an estimate, the percentages, the total."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final

from costing.price.money import line_amount, measured, percentage, sanction_figure
from costing.price.rates import BY_LIFTS
from structures.errors import Finding, Refused

if TYPE_CHECKING:
    from collections.abc import Iterable

    from costing.price.contingency import ContingencyStep
    from costing.price.rates import RateSchedule
    from structures.takeoff.quantity import Quantity


# What no line measures; it is stated on every estimate. Source: handbook 5.10.
NOT_INCLUDED: Final = (
    "Not in it: the end batters of the trench along the line, ramps, the step faces at the toes."
)


@dataclass(frozen=True, slots=True)
class Line:
    """One line: rounded quantity, rate, amount; None is "not known" and keeps its place."""

    item: str
    from_m: float | None
    to_m: float | None
    unit: str
    quantity: Decimal | None
    rate: Decimal | None
    amount: Decimal | None


@dataclass(frozen=True, slots=True)
class Abstract:
    """Lines in item order with their sums.

    With a line whose quantity or rate is not known `complete` is False, the sums are those of the
    known lines, `sanction` is None, and `unknown` names the lines with what is lacking.
    """

    currency: str
    complete: bool
    lines: tuple[Line, ...]
    subtotal: Decimal
    contingency: Decimal
    overhead: Decimal
    total: Decimal
    sanction: Decimal | None
    unknown: tuple[str, ...]


def make_abstract(
    quantities: Iterable[Quantity],
    schedule: RateSchedule,
    *,
    step: ContingencyStep | None = None,
) -> Abstract:
    """Price measured quantities.

    Source: handbook 8.4. Quantities pass the gate to hundredths, each amount is rounded once, the
    percentages are taken on the rounded subtotal and rounded each; so the printed lines add up.

    Parameters
    ----------
    quantities
        In item order, not rounded.
    schedule
        Rates and percentages.
    step
        The office's step of contingencies (handbook 8.5); without one the schedule's percentage.

    Raises
    ------
    Refused
        If a lift of the excavation has no rate; every such lift is named.
    """
    lines = tuple(_line(quantity, schedule) for quantity in quantities)
    _check_lifts(lines, schedule)
    subtotal = sum(
        (line.amount for line in lines if line.amount is not None), start=Decimal("0.00")
    )
    if step is None:
        contingency = percentage(subtotal, schedule.contingency_percent)
    else:
        contingency = step.of(subtotal, schedule.contingency_percent)
    overhead = percentage(subtotal, schedule.overhead_percent)
    total = subtotal + contingency + overhead
    unknown = tuple(_lacking(line) for line in lines if line.amount is None)
    return Abstract(
        currency=schedule.currency,
        complete=not unknown,
        lines=lines,
        subtotal=subtotal,
        contingency=contingency,
        overhead=overhead,
        total=total,
        sanction=None if unknown else sanction_figure(total),
        unknown=unknown,
    )


def _line(quantity: Quantity, schedule: RateSchedule) -> Line:
    amount = None
    volume = None if quantity.quantity is None else measured(quantity.quantity)
    rate = schedule.rate_of(quantity.item, quantity.from_m)
    if volume is not None and rate is not None:
        amount = line_amount(volume, rate)
    return Line(
        item=quantity.item,
        from_m=quantity.from_m,
        to_m=quantity.to_m,
        unit=quantity.unit,
        quantity=volume,
        rate=rate,
        amount=amount,
    )


def _check_lifts(lines: tuple[Line, ...], schedule: RateSchedule) -> None:
    """Refuse lifts without a rate: a deep lift left out would make the trench look cheap."""
    findings = tuple(
        Finding(
            where=f"rate schedule {schedule.schedule_id}",
            field=BY_LIFTS,
            what=f"The lift from {line.from_m:g} to {line.to_m:g} m below ground has no rate.",
            remedy=f"Give a row with from_m {line.from_m:g}, or one without from_m for all lifts.",
        )
        for line in lines
        if line.item == BY_LIFTS and line.rate is None
    )
    if findings:
        first = findings[0]
        raise Refused(first.what, where=first.where, remedy=first.remedy, findings=findings)


def _lacking(line: Line) -> str:
    lacks = [name for name in ("quantity", "rate") if getattr(line, name) is None]
    return f"{line.item} ({' and '.join(lacks)} not known)"
