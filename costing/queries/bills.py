"""Bills: judged by the rules of today, explained to the amount payable, and what is left unsettled."""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal
from typing import TYPE_CHECKING, Any

from django.db.models import Count, Prefetch, Q, Sum

from costing.models import Bill, BillLine, LineDecision
from costing.price.billing import BillLineAsked, JudgedLine, Release, judge_lines
from costing.price.payable import NOTHING, BillAsked, JudgedBill, judge_bill
from costing.price.settlement import Settlement, settle
from costing.queries.contracts import contract_in_force, terms_of, terms_of_bill
from costing.queries.measured import measured_book
from structures import access

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from django.db.models import QuerySet

    from costing.price.billing import Measured
    from structures.models import Structure, User

State = BillLine.State


@dataclass(frozen=True, slots=True)
class Draft:
    """Accepted entries that no bill has: as lines of a bill, and those that cannot be billed yet."""

    lines: tuple[JudgedLine, ...]
    left_out: tuple[JudgedLine, ...]

    @property
    def total(self) -> Decimal:
        return sum((line.amount for line in self.lines), start=NOTHING)

    @property
    def held(self) -> tuple[JudgedLine, ...]:
        return tuple(line for line in self.lines if line.status == "held")


@dataclass(frozen=True, slots=True)
class Said:
    """What the district office says of one line: "" leaves it to the rules."""

    state: str = ""
    why: str = ""


def visible_bills(user: User) -> QuerySet[Bill]:
    """Bills of all sites where the user may see money, newest first."""
    found = Bill.objects.filter(structure__site__in=access.sites(user, access.Act.SEE_MONEY))
    return (
        found.select_related(
            "structure__site__watershed__district", "contract", "made_by", "decided_by", "entry"
        )
        .annotate(
            line_count=Count("lines"),
            held_count=Count("lines", filter=Q(lines__state=State.HELD)),
            held_sum=Sum("lines__amount", filter=Q(lines__state=State.HELD)),
        )
        .order_by("-billed_on", "-pk")
    )


def visible_lines(user: User) -> QuerySet[BillLine]:
    """Lines of bills of all sites where the user may see money."""
    seen = access.sites(user, access.Act.SEE_MONEY)
    return BillLine.objects.filter(bill__structure__site__in=seen).select_related("bill")


def lines_of(bill: Bill) -> list[BillLine]:
    """Lines of a bill with what was decided on them since, held ones first."""
    rows = bill.lines.select_related("entry__strip", "entry__measured_by", "entry__checked_by")
    since = LineDecision.objects.select_related("by", "paid_with").order_by("at", "pk")
    found = list(rows.prefetch_related(Prefetch("decisions", since)))
    order = {State.HELD: 0, State.REFUSED: 1}
    return sorted(found, key=lambda one: (order.get(one.state, 2), one.order))


def draft_of(structure: Structure) -> Draft | None:
    """Put every accepted entry that was not billed into lines at the contract's rates.

    None where there is no contract. What a rule blocks is left out and said.
    """
    contract = contract_in_force(structure)
    if contract is None:
        return None
    terms, book = terms_of(contract), measured_book(structure)
    wanted = [one for one in book.values() if one.billed_in is None and one.checked_by is not None]
    asked = tuple(
        BillLineAsked(
            number, one.entry_id, one.quantity, terms.rate_of(one.item, one.from_m) or NOTHING
        )
        for number, one in enumerate(wanted, start=1)
    )
    judged = judge_lines("the next bill", asked, book, terms)
    kept = [line for line in judged if line.status != "refused"]
    numbered = tuple(
        replace(line, asked=replace(line.asked, line_no=number))
        for number, line in enumerate(kept, start=1)
    )
    return Draft(numbered, tuple(line for line in judged if line.status == "refused"))


def judged_now(
    bill: Bill,
    *,
    said: Mapping[int, Said] | None = None,
    indices: Mapping[str, Decimal] | None = None,
    by: User | None = None,
) -> JudgedBill:
    """Judge a bill of the office as it would be decided now.

    Parameters
    ----------
    said
        What is said of lines by their number; a held line said to be paid is released by `by`.
    indices
        Today's values of the contract's price index.
    """
    said = said or {}
    structure, terms = bill.structure, terms_of_bill(bill)
    lines = tuple(
        _asked(line, said.get(line.order, Said()), by)
        for line in bill.lines.select_related("entry").order_by("order")
    )
    asked = BillAsked(
        bill_id=bill.number,
        kind=bill.kind,
        currency=bill.currency,
        lines=lines,
        total=bill.claimed,
        indices_now=indices or {},
        recovered_before=-_taken(structure, "advance"),
        released=tuple(_judged(line, "paid") for line in released_lines(structure)),
    )
    return judge_bill(asked, measured_book(structure), terms)


def released_lines(structure: Structure) -> list[BillLine]:
    """Held lines that were released by decision and wait to be paid with a bill."""
    held = (
        BillLine.objects.filter(bill__structure=structure, state=State.HELD)
        .select_related("bill", "entry")
        .prefetch_related(Prefetch("decisions", LineDecision.objects.order_by("at", "pk")))
        .order_by("bill__billed_on", "order")
    )
    return [line for line in held if is_released(line)]


def is_released(line: BillLine) -> bool:
    last = list(line.decisions.all())[-1:]
    return bool(last) and last[0].state == State.PAID and last[0].paid_with_id is None


def settlement_of(bill: Bill, book: Mapping[str, Measured] | None = None) -> Settlement:
    """Say what is open once this bill is decided."""
    structure = bill.structure
    rows = (
        BillLine.objects.filter(bill__structure=structure)
        .exclude(state=State.REFUSED)
        .select_related("entry", "bill")
        .order_by("bill__billed_on", "order")
    )
    return settle(
        measured_book(structure) if book is None else book,
        [_judged(row, "paid" if row.state == State.OPEN else row.state) for row in rows],
        terms_of_bill(bill),
        retention_kept=-_taken(structure, "retention"),
        advance_recovered=-_taken(structure, "advance"),
    )


def _taken(structure: Structure, code: str) -> Decimal:
    """Sum of the steps of one code over all decided bills, as they stand in their accounts."""
    accounts = structure.bills.filter(state=Bill.State.DECIDED).values_list("account", flat=True)
    return sum(
        (
            Decimal(step["amount"])
            for account in accounts
            for step in steps_in(account)
            if step["code"] == code
        ),
        start=NOTHING,
    )


def steps_in(account: Any) -> Iterable[Mapping[str, Any]]:
    """Give the steps of an account; one taken over from before may have none."""
    return account.get("steps", ()) if isinstance(account, dict) else ()


def _asked(line: BillLine, said: Said, by: User | None) -> BillLineAsked:
    release = None
    if said.state == State.PAID and said.why.strip() and by is not None:
        release = Release(by.username, line.bill.billed_on, said.why.strip())
    return BillLineAsked(
        line.order, line.entry.code, line.quantity, line.rate, line.amount, release
    )


def _judged(line: BillLine, status: str) -> JudgedLine:
    asked = BillLineAsked(line.order, line.entry.code, line.quantity, line.rate, line.amount)
    return JudgedLine(asked, None, status, line.amount)
