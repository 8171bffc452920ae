"""Deciding a bill line by line, releasing what was held, and noting that it was paid out."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.utils import timezone

from costing.actions.bills import enter, locked_bill, told_lines
from costing.models import Bill, BillLine, LineDecision
from costing.price.payable import explain
from costing.queries.bills import (
    Said,
    is_released,
    judged_now,
    lines_of,
    released_lines,
    settlement_of,
)
from costing.queries.contracts import terms_of_bill
from structures.access import Act, insist
from structures.actions.refusals import as_documents, refusal
from structures.actions.second_factor import insist_given
from structures.errors import Refused
from structures.queries.delegation import delegator_of
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import date, datetime
    from decimal import Decimal

    from costing.price.billing import JudgedLine
    from costing.price.payable import JudgedBill, Payable
    from structures.models import User

DECIDED: Final = "bill decided"
RELEASED: Final = "hold released"
REFUSED: Final = "held line refused"
PAID_OUT: Final = "bill paid out"
State = BillLine.State


@transaction.atomic
def decide_bill(
    *,
    bill_id: int,
    said: Mapping[int, Said],
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
    indices: Mapping[str, Decimal] | None = None,
) -> Bill:
    """Decide every line of a bill; a hold keeps its line apart and the rest is paid.

    Parameters
    ----------
    said
        What is said of lines by number; the rules decide where nothing is said. A line that a rule
        holds is paid only with a reason, one that a rule blocks never.
    signed_in_at
        When the person signed in; None for a device's token, which decides nothing.
    factor_given_at
        When a one-time code was last given in that session; None where none was.
    indices
        Today's values of the contract's price index.

    Raises
    ------
    Refused
        If it was not handed in, is one's own, does not add up, a line kept back has no reason, or
        the amount payable is not known or below zero.
    """
    bill = locked_bill(bill_id)
    _insist_person(bill, by, signed_in_at)
    _insist_factor(bill, by, factor_given_at)
    if bill.state != Bill.State.HANDED_IN:
        raise Refused(
            f"Bill {bill.number} is {bill.get_state_display()}.",
            where=bill.number,
            remedy="Look at the bill again.",
        )
    if bill.made_by_id == by.pk:
        raise Refused(
            f"You wrote bill {bill.number}.",
            where=bill.number,
            remedy="Another person must decide.",
        )
    freed = released_lines(bill.structure)
    judged = judged_now(bill, said=said, indices=indices, by=by)
    if judged.findings:
        raise refusal(judged.findings, "bill")
    lines = tuple(_as_said(line, said.get(line.asked.line_no, Said())) for line in judged.lines)
    payable = explain(judged.asked, lines, terms_of_bill(bill))
    _insist_payable(bill, payable)
    _keep_lines(bill, lines, said)
    for line in freed:
        LineDecision.objects.create(
            line=line, state=State.PAID, why=f"Paid with bill {bill.number}.", by=by, paid_with=bill
        )
        BillLine.objects.filter(pk=line.pk).update(state=State.PAID)
    account = _account(judged, payable, [line.pk for line in freed])
    Bill.objects.filter(pk=bill.pk).update(
        state=Bill.State.DECIDED,
        payable=payable.amount,
        account=account,
        decided_by=by,
        decided_at=timezone.now(),
    )
    bill.refresh_from_db(fields=["state", "payable", "account", "decided_by", "decided_at"])
    if bill.kind == Bill.Kind.FINAL:
        account["unsettled"] = list(settlement_of(bill).sentences)
    content = {
        "lines": told_lines(lines),
        "payable": f"{payable.amount:f}",
        "account": account,
        **_given(bill, by, signed_in_at),
    }
    entry = enter(bill, DECIDED, by, content)
    Bill.objects.filter(pk=bill.pk).update(account=account, entry=entry)
    bill.refresh_from_db(fields=["account", "entry"])
    return bill


@transaction.atomic
def decide_held_line(
    *,
    line_id: int,
    state: str,
    why: str,
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
) -> LineDecision:
    """Release a line that its bill held, to be paid with the next, or refuse it for good.

    Raises
    ------
    Refused
        If it is not held, was released before, no reason is given, or the user measured or
        checked it.
    """
    owner = BillLine.objects.values_list("bill_id", flat=True).get(pk=line_id)
    bill = locked_bill(owner)
    _insist_person(bill, by, signed_in_at)
    _insist_factor(bill, by, factor_given_at)
    line = next(one for one in lines_of(bill) if one.pk == line_id)
    where = f"line {line.order} of bill {bill.number}"
    if bill.state != Bill.State.DECIDED or line.state != State.HELD or is_released(line):
        said = "released" if line.state == State.HELD and is_released(line) else line.state
        raise Refused(f"It is {said}, not held.", where=where, remedy="Look at the bill again.")
    if state not in (State.PAID, State.REFUSED):
        raise Refused(f"{state!r} is no decision.", where=where, remedy="Release or refuse it.")
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write why.")
    if by.pk in (line.entry.measured_by_id, line.entry.checked_by_id):
        what = f"You measured or checked entry {line.entry.code}."
        raise Refused(what, where=where, remedy="Another person must decide.")
    content = {
        "line": line.order,
        "entry": line.entry.code,
        "amount": f"{line.amount:f}",
        "why_held": line.why,
        "why": why.strip(),
        **_given(bill, by, signed_in_at),
    }
    entry = enter(bill, RELEASED if state == State.PAID else REFUSED, by, content)
    decision = LineDecision.objects.create(
        line=line, state=state, why=why.strip(), by=by, entry=entry
    )
    if state == State.REFUSED:
        BillLine.objects.filter(pk=line.pk).update(state=state, why=why.strip())
    return decision


@transaction.atomic
def mark_paid(
    *, bill_id: int, paid_on: date, reference: str, by: User, signed_in_at: datetime | None
) -> Bill:
    """Note that a decided bill was paid out, once.

    Raises
    ------
    Refused
        If it is not decided, was paid before, or day or reference cannot be.
    """
    bill = locked_bill(bill_id)
    _insist_person(bill, by, signed_in_at)
    if bill.state != Bill.State.DECIDED or bill.paid_on is not None:
        said = "not decided" if bill.paid_on is None else f"paid on {bill.paid_on}"
        raise Refused(f"Bill {bill.number} is {said}.", where=bill.number, remedy="Look again.")
    if not bill.billed_on <= paid_on <= today_of(bill.structure.site.watershed.district):
        raise Refused(
            f"It cannot have been paid on {paid_on}.", where="paid_on", remedy="Look at the day."
        )
    if not reference.strip():
        what = "The reference of the payment is missing."
        raise Refused(what, where="reference", remedy="Give the number of the order to the bank.")
    bill.paid_on, bill.paid_reference = paid_on, reference.strip()
    bill.save(update_fields=["paid_on", "paid_reference"])
    told = {"payable": f"{bill.payable:f}", "paid_on": paid_on.isoformat()}
    enter(bill, PAID_OUT, by, {**told, "reference": bill.paid_reference})
    return bill


def _insist_person(bill: Bill, by: User, signed_in_at: datetime | None) -> None:
    if signed_in_at is None:
        raise Refused(
            "A device's token decides nothing.", remedy="Sign in on the page and decide there."
        )
    insist(by, Act.DECIDE_BILL, bill.structure)


def _insist_factor(bill: Bill, by: User, given_at: datetime | None) -> None:
    district = bill.structure.site.watershed.district
    insist_given(by=by, district=district, given_at=given_at)


def _as_said(line: JudgedLine, said: Said) -> JudgedLine:
    """Keep a line back that the rules would pay; what they block or hold stands."""
    keeps_back = said.state in (State.HELD, State.REFUSED) and line.status != "refused"
    if keeps_back and not said.why.strip():
        raise Refused(
            f"Line {line.asked.line_no} is kept back without a reason.",
            where=f"line {line.asked.line_no}",
            remedy="Write why.",
        )
    if said.state == State.PAID and line.status != "paid":
        blocked = line.status == "refused"
        why = line.why if blocked or said.why.strip() else "It is held: say why it is paid."
        raise Refused(
            f"Line {line.asked.line_no} cannot be paid. {why}",
            where=f"line {line.asked.line_no}",
            remedy="Leave it refused." if blocked else "Leave it held, or write the reason.",
        )
    return replace(line, status=said.state) if keeps_back else line


def _insist_payable(bill: Bill, payable: Payable) -> None:
    if payable.amount is None:
        what = f"The amount payable is not known: {payable.why}."
        raise Refused(what, where="indices", remedy="Give what is missing.")
    if payable.amount < 0:
        what = f"{-payable.amount:f} {bill.currency} would be owed back by this bill."
        remedy = "Send it back and bill it together with later work."
        raise Refused(what, where=bill.number, remedy=remedy)


def _keep_lines(bill: Bill, lines: tuple[JudgedLine, ...], said: Mapping[int, Said]) -> None:
    for line in lines:
        number = line.asked.line_no
        own = said.get(number, Said()).why.strip()
        why = own if line.status == "paid" else " ".join(filter(None, (own, line.why)))
        BillLine.objects.filter(bill=bill, order=number).update(
            state=line.status, why=why, findings=as_documents(line.findings)
        )


def _account(judged: JudgedBill, payable: Payable, freed: list[int]) -> dict[str, Any]:
    """Give the amount payable step by step, as it is frozen with the bill."""
    return {
        "steps": [
            {
                "code": step.code,
                "words": step.words,
                "working": step.working,
                "amount": None if step.amount is None else f"{step.amount:f}",
                "apart": step.apart,
            }
            for step in payable.steps
        ],
        "indices": {what: f"{value:f}" for what, value in judged.asked.indices_now.items()},
        "released": freed,
    }


def _given(bill: Bill, by: User, signed_in_at: datetime) -> dict[str, Any]:
    said = {"signed_in_at": signed_in_at.isoformat(timespec="seconds")}
    instead_of = delegator_of(by, Act.DECIDE_BILL, bill.structure)
    return said if instead_of is None else said | {"instead_of": instead_of.username}
