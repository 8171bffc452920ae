"""The history of a district with its money: sanctions and bills stored as they stand."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import asdict
from decimal import Decimal
from itertools import groupby
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction

from costing.models import Bill, BillLine, Sanction
from costing.price.history_tables import MONEY_TABLES, PAID
from costing.price.payable import Payable, Step
from costing.queries.bills import judged_now
from structures.actions.history import begin_taking, known_here, seal_history, take_over
from structures.actions.refusals import as_documents
from structures.intake.builder import refusal
from structures.intake.history import read_history
from structures.intake.tree import Ledger

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.actions.history import Taking
    from structures.intake.history import HistoryRow
    from structures.models import User

WHY: Final = "Taken over: paid before the district was kept here, with no contract to judge it by."


@transaction.atomic
def take_over_all(*, district_id: int, files: Mapping[str, bytes], by: User) -> int:
    """Take over works, wells and money of a district, and enter each structure in the register.

    Returns
    -------
    int
        How many structures were entered.

    Raises
    ------
    Refused
        If a cell cannot be read or a row names what is nowhere; nothing is kept.
    """
    history = take_over(district_id=district_id, files=files, by=by)
    taking = begin_taking(district_id, by)
    known = {**known_here(taking), "currencies": {taking.district.currency}}
    ledger = Ledger()
    history = read_history(files, MONEY_TABLES, known, taking.zone, ledger, before=history)
    if ledger.blocks:
        raise refusal(ledger, "history")
    _take_sanctions(taking, history["sanctions"])
    _take_bills(taking, history["bills"])
    return len(seal_history(district_id=district_id, history=history, by=by))


def _take_sanctions(taking: Taking, rows: Sequence[HistoryRow]) -> None:
    """Keep sanctions and approvals in the order of their days; the first of a kind is no revision."""
    counted: dict[tuple[str, str], int] = defaultdict(int)
    sanctions = []
    for row in sorted(rows, key=lambda row: row["dated"]):
        place = row.names(("site_id", "kind"))
        sanctions.append(
            Sanction(
                structure=taking.structures[row["site_id"]],
                kind=row["kind"],
                revision=counted[place],
                number=row["number"],
                day=row["dated"],
                currency=row["currency"],
                amount=row["amount"],
                by=taking.people[row["given_by"]],
            )
        )
        counted[place] += 1
    Sanction.objects.bulk_create(sanctions)


def _take_bills(taking: Taking, rows: Sequence[HistoryRow]) -> None:
    """Keep the bills. The tables do not say who wrote one: it stands under who took it over."""
    ordered = sorted(rows, key=lambda row: row.names(("billed_on", "bill_id", "line_no")))
    for number, group in groupby(ordered, key=lambda row: row["bill_id"]):
        lines = list(group)
        bill = _take_bill(taking, number, lines)
        _take_lines(bill, lines)
        # The rules of today speak beside each line; what was paid stays paid.
        findings = {one.asked.line_no: one.findings for one in judged_now(bill).lines}
        kept = list(bill.lines.all())
        for line in kept:
            line.findings = as_documents(findings[line.order])
        BillLine.objects.bulk_update(kept, ["findings"])


def _take_bill(taking: Taking, number: str, rows: Sequence[HistoryRow]) -> Bill:
    head = rows[0]
    total = sum((row["amount"] for row in rows), start=Decimal("0.00"))
    paid = head["status"] == PAID
    return Bill.objects.create(
        structure=taking.structures[head["structure_id"]],
        number=number,
        kind=head["kind"],
        state=Bill.State.DECIDED if paid else Bill.State.HANDED_IN,
        billed_on=head["billed_on"],
        currency=head["currency"],
        claimed=total,
        payable=total if paid else None,
        account=_account(head["currency"], total, len(rows)) if paid else None,
        made_by=taking.by,
    )


def _take_lines(bill: Bill, rows: Sequence[HistoryRow]) -> None:
    codes = [row["entry_id"] for row in rows]
    entries = {one.code: one for one in bill.structure.measurements.filter(code__in=codes)}
    BillLine.objects.bulk_create(
        BillLine(
            bill=bill,
            order=row["line_no"],
            entry=entries[row["entry_id"]],
            quantity=row["quantity"],
            rate=row["rate"],
            amount=row["amount"],
            state=BillLine.State.PAID if row["status"] == PAID else BillLine.State.OPEN,
        )
        for row in rows
    )


def _account(currency: str, total: Decimal, lines: int) -> dict[str, Any]:
    """Explain what was paid as the accounts of today do: one step, the lines as they stood."""
    step = Step("gross", "Lines paid", f"{lines} lines, taken over as they stood", total)
    whole = asdict(Payable(currency, (step,), total, WHY))
    whole["amount"] = f"{total:f}"
    whole["steps"] = [{**one, "amount": f"{one['amount']:f}"} for one in whole["steps"]]
    return whole
