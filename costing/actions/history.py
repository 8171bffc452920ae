"""The history of a district with its money: sanctions and bills stored as they stand."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import asdict
from decimal import Decimal
from itertools import groupby
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction

from costing.models import Bill, BillLine, Sanction
from costing.price.billing import BillLineAsked, Measured, judge_lines
from costing.price.contract import ContractTerms
from costing.price.history_tables import MONEY_TABLES, PAID
from costing.price.payable import Payable, Step
from costing.price.rates import Rate
from costing.queries.measured import measured_book
from structures.actions.history import begin_taking, known_here, seal_history, take_over
from structures.actions.refusals import as_documents
from structures.intake.builder import refusal
from structures.intake.history import read_history
from structures.intake.tree import Ledger

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.actions.history import Taking
    from structures.errors import Finding
    from structures.intake.history import HistoryRow
    from structures.models import Structure, User

STATES: Final = {PAID: Bill.State.DECIDED}  # any other is handed in and open
LINES: Final = {PAID: BillLine.State.PAID}
OF_THE_RATE: Final = "BL-04"
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
    books: dict[str, dict[str, Measured]] = {}
    ordered = sorted(rows, key=lambda row: row.names(("billed_on", "bill_id", "line_no")))
    for number, group in groupby(ordered, key=lambda row: row["bill_id"]):
        lines = list(group)
        head = lines[0]
        structure = taking.structures[head["structure_id"]]
        if head["structure_id"] not in books:
            books[head["structure_id"]] = measured_book(structure)
        _take_bill(taking, structure, number, lines, books[head["structure_id"]])


def _take_bill(
    taking: Taking,
    structure: Structure,
    number: str,
    rows: Sequence[HistoryRow],
    book: dict[str, Measured],
) -> None:
    head = rows[0]
    total = sum((row["amount"] for row in rows), start=Decimal("0.00"))
    paid = head["status"] == PAID
    bill = Bill.objects.create(
        structure=structure,
        number=number,
        kind=head["kind"],
        state=STATES.get(head["status"], Bill.State.HANDED_IN),
        billed_on=head["billed_on"],
        currency=head["currency"],
        claimed=total,
        payable=total if paid else None,
        account=_account(head["currency"], total, len(rows)) if paid else None,
        made_by=taking.by,
    )
    said = _judge(number, rows, book)
    entries = {
        one.code: one
        for one in structure.measurements.filter(code__in=[row["entry_id"] for row in rows])
    }
    BillLine.objects.bulk_create(
        BillLine(
            bill=bill,
            order=row["line_no"],
            entry=entries[row["entry_id"]],
            quantity=row["quantity"],
            rate=row["rate"],
            amount=row["amount"],
            state=LINES.get(row["status"], BillLine.State.OPEN),
            findings=as_documents(said[row["line_no"]]),
        )
        for row in rows
    )


def _judge(
    number: str, rows: Sequence[HistoryRow], book: Mapping[str, Measured]
) -> dict[int, tuple[Finding, ...]]:
    """Judge lines against the measurement book; their rates are not judged, there is no contract."""
    own = {row["item"]: Rate(row["item"], row["unit"], row["rate"]) for row in rows}
    terms = ContractTerms(rows[0]["currency"], tuple(own.values()))
    asked = [
        BillLineAsked(*row.names(("line_no", "entry_id", "quantity", "rate", "amount")))
        for row in rows
    ]
    return {
        line.asked.line_no: tuple(one for one in line.findings if one.rule != OF_THE_RATE)
        for line in judge_lines(number, asked, book, terms)
    }


def _account(currency: str, total: Decimal, lines: int) -> dict[str, Any]:
    """Explain what was paid as the accounts of today do: one step, the lines as they stood."""
    step = Step("gross", "Lines paid", f"{lines} lines, taken over as they stood", total)
    whole = asdict(Payable(currency, (step,), total, WHY))
    whole["amount"] = f"{total:f}"
    whole["steps"] = [{**one, "amount": f"{one['amount']:f}"} for one in whole["steps"]]
    return whole
