"""Writing a bill from accepted entries, handing it in, and giving a draft up.

The structure's row locks its bills, entries and lines; behind that the database lets an entry stand
in one line that is not refused.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction

from costing.models import Bill, BillLine
from costing.price.billing import judge_lines
from costing.price.money import line_amount
from costing.price.payable import NOTHING
from costing.queries.bills import draft_of, judged_now, released_lines
from costing.queries.contracts import contract_in_force, terms_of
from costing.queries.measured import measured_book
from structures.access import Act, insist
from structures.actions.refusals import as_documents, refusal
from structures.actions.register import append
from structures.actions.stage import locked
from structures.errors import Finding, Refused
from structures.models import MeasurementEntry
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from datetime import date
    from decimal import Decimal

    from costing.models import Contract
    from costing.price.billing import BillLineAsked, JudgedLine
    from structures.models import Structure, User

HANDED_IN: Final = "bill handed in"
SENT_BACK: Final = "bill sent back"
GOING: Final = (Bill.State.DRAFT, Bill.State.HANDED_IN)


@dataclass(frozen=True, slots=True)
class BillGiven:
    """A bill; without `lines` everything accepted and not billed is in it.

    `total` is the bill's own figure, None where it states none.
    """

    number: str
    kind: str
    billed_on: date
    lines: tuple[BillLineAsked, ...] | None = None
    total: Decimal | None = None


@transaction.atomic
def write_bill(*, structure_id: int, given: BillGiven, by: User) -> Bill:
    """Write a bill as a draft; what a rule blocks is refused whole, what a rule holds is kept.

    Raises
    ------
    Refused
        If there is no contract, the account is closed, the number is taken, nothing is to be
        billed, or a line is blocked (BL-01, BL-02, BL-04, BL-05); every finding is told.
    """
    structure = locked(structure_id)
    insist(by, Act.WRITE_BILL, structure)
    contract = contract_in_force(structure)
    if contract is None:
        raise Refused(
            f"{structure.site.code} has no contract.",
            where=structure.site.code,
            remedy="Have the district office enter it first.",
        )
    found = list(_judge_bill(structure, given))
    if found:
        raise refusal(found, "bill")
    lines = (
        _own_lines(structure) if given.lines is None else _given_lines(structure, contract, given)
    )
    _judge_what_is_left(structure, given, lines)
    return _write(structure, contract, given, lines, by)


@transaction.atomic
def hand_in_bill(*, bill_id: int, by: User) -> Bill:
    """Hand a draft in to be decided; from then on its lines stand as they are.

    Raises
    ------
    Refused
        If it is no draft, or a rule blocks a line by now.
    """
    bill = locked_bill(bill_id)
    insist(by, Act.WRITE_BILL, bill.structure)
    _insist_state(bill, Bill.State.DRAFT)
    judged = judged_now(bill)
    against = [*judged.findings, *(one for line in judged.of("refused") for one in line.findings)]
    if against:
        raise refusal(against, "bill")
    Bill.objects.filter(pk=bill.pk).update(state=Bill.State.HANDED_IN)
    bill.state = Bill.State.HANDED_IN
    enter(bill, HANDED_IN, by, {"lines": told_lines(judged.lines)})
    return bill


@transaction.atomic
def send_bill_back(*, bill_id: int, why: str, by: User) -> Bill:
    """Give a bill back to whoever wrote it, with the reason.

    Raises
    ------
    Refused
        If it was not handed in, or no reason is given.
    """
    bill = locked_bill(bill_id)
    insist(by, Act.DECIDE_BILL, bill.structure)
    _insist_state(bill, Bill.State.HANDED_IN)
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write what is wrong with it.")
    Bill.objects.filter(pk=bill.pk).update(state=Bill.State.DRAFT)
    bill.state = Bill.State.DRAFT
    enter(bill, SENT_BACK, by, {"why": why.strip()})
    return bill


@transaction.atomic
def drop_draft(*, bill_id: int, by: User) -> str:
    """Give a draft up; nothing was handed in, and its entries can be billed again.

    Raises
    ------
    Refused
        If it is no draft.
    """
    bill = locked_bill(bill_id)
    insist(by, Act.WRITE_BILL, bill.structure)
    _insist_state(bill, Bill.State.DRAFT)
    number = bill.number
    bill.lines.all().delete()
    bill.delete()
    return number


def locked_bill(bill_id: int) -> Bill:
    """Lock a bill's structure and entries, and give the bill as it is under that lock."""
    owner = Bill.objects.values_list("structure_id", flat=True).get(pk=bill_id)
    structure = locked(owner)
    entries = MeasurementEntry.objects.filter(bill_lines__bill=bill_id).order_by("pk")
    list(entries.select_for_update(of=("self",)).values_list("pk", flat=True))
    bill = Bill.objects.select_related("contract").get(pk=bill_id)
    bill.structure = structure
    return bill


def _insist_state(bill: Bill, state: str) -> None:
    if bill.state == state:
        return
    raise Refused(
        f"Bill {bill.number} is {bill.get_state_display()}.",
        where=bill.number,
        remedy="Look at the bill again.",
    )


def enter(bill: Bill, act: str, by: User, content: dict[str, Any]) -> Any:
    """Write what became of a bill into the register."""
    structure = bill.structure
    return append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"bill {bill.number} of {structure.site.code}",
        structure=structure,
        content={
            "bill": bill.number,
            "kind": bill.kind,
            "currency": bill.currency,
            "claimed": f"{bill.claimed:f}",
            **content,
        },
    )


def told_lines(lines: Iterable[JudgedLine]) -> list[list[Any]]:
    """Give judged lines as the register keeps them."""
    return [
        [
            line.asked.line_no,
            line.asked.entry_id,
            f"{line.asked.quantity:f}",
            f"{line.asked.rate:f}",
            f"{line.amount:f}",
            line.status,
        ]
        for line in lines
    ]


def _judge_bill(structure: Structure, given: BillGiven) -> Iterable[Finding]:
    number = given.number.strip()
    if not number:
        yield Finding("bill", "number", "The number is missing.", "Give it its number.")
    elif structure.bills.filter(number=number).exists():
        what = f"Bill {number} was written before."
        yield Finding("bill", "number", what, "Take the next number.")
    if given.kind not in Bill.Kind.values:
        yield Finding("bill", "kind", f"{given.kind!r} is no kind of bill.", "running or final.")
    if given.billed_on > today_of(structure.site.watershed.district):
        what = f"{given.billed_on} is still to come."
        yield Finding("bill", "billed_on", what, "Look at the day.")
    going = structure.bills.filter(state__in=GOING).first()
    if going is not None:
        what = f"Bill {going.number} is {going.get_state_display()}."
        remedy = "Have it decided first: what it holds or refuses changes the next."
        yield Finding("bill", "state", what, remedy)


def _judge_what_is_left(
    structure: Structure, given: BillGiven, lines: Sequence[JudgedLine]
) -> None:
    final = structure.bills.filter(kind=Bill.Kind.FINAL).first()
    freed = released_lines(structure)
    if final is not None and (lines or not freed or given.kind == Bill.Kind.FINAL):
        raise Refused(
            f"The account was closed by final bill {final.number}.",
            where="kind",
            remedy="Only lines that were held and released are paid after it.",
        )
    if not lines and not freed and given.kind != Bill.Kind.FINAL:
        raise Refused(
            "Nothing is accepted that was not billed, and no held line was released.",
            where="bill",
            remedy="Have what waits in the measurement book checked first.",
        )


def _own_lines(structure: Structure) -> tuple[JudgedLine, ...]:
    return draft_of(structure).lines


def _given_lines(
    structure: Structure, contract: Contract, given: BillGiven
) -> tuple[JudgedLine, ...]:
    """Judge the lines of a contractor's own bill; one that is blocked refuses all of it."""
    numbers = [one.line_no for one in given.lines]
    twice = sorted({one for one in numbers if numbers.count(one) > 1})
    if twice:
        what = f"Line {twice[0]} stands there twice."
        raise Refused(what, where="line", remedy="Give each line a number of its own.")
    book, terms = measured_book(structure), terms_of(contract)
    judged = judge_lines(given.number.strip(), given.lines, book, terms)
    against = [one for line in judged if line.status == "refused" for one in line.findings]
    if against:
        raise refusal(against, "bill")
    return tuple(
        replace(line, asked=replace(line.asked, line_no=number))
        for number, line in enumerate(judged, start=1)
    )


def _write(
    structure: Structure,
    contract: Contract,
    given: BillGiven,
    lines: Sequence[JudgedLine],
    by: User,
) -> Bill:
    amounts = sum((line.amount for line in lines), start=NOTHING)
    claimed = amounts if given.total is None else given.total
    if claimed != amounts:
        what = f"Lines add to {amounts:f}, bill says {claimed:f}."
        found = Finding("bill", "total", what, "Have it added up again.", rule="BL-07")
        raise refusal([found], "bill")
    bill = Bill.objects.create(
        structure=structure,
        contract=contract,
        number=given.number.strip(),
        kind=given.kind,
        billed_on=given.billed_on,
        currency=contract.currency,
        claimed=claimed,
        made_by=by,
    )
    codes = {one.code: one for one in structure.measurements.all()}
    BillLine.objects.bulk_create(
        BillLine(
            bill=bill,
            order=line.asked.line_no,
            entry=codes[line.asked.entry_id],
            quantity=line.asked.quantity,
            rate=line.asked.rate,
            amount=line_amount(line.asked.quantity, line.asked.rate),
            findings=as_documents(line.findings),
        )
        for line in lines
    )
    return bill
