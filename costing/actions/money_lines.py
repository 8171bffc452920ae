"""Money lines: a sum that a funder gives to a district, entered by the programme manager."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.core.exceptions import ValidationError
from django.db import transaction

from costing.models import MoneyLine
from costing.queries.money_lines import promised_from
from structures.access import Act, insist
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.errors import Finding, Refused
from structures.models import District
from structures.validators import validate_currency

if TYPE_CHECKING:
    from datetime import date
    from decimal import Decimal

    from structures.models import User


@dataclass(frozen=True, slots=True)
class LineTerms:
    """What a funder signed; the funder stands here as a code."""

    code: str
    funder: str
    currency: str
    amount: Decimal
    valid_from: date
    valid_to: date | None = None


@transaction.atomic
def enter_money_line(*, district_id: int, terms: LineTerms, by: User) -> MoneyLine:
    """Enter a money line of a district.

    Raises
    ------
    Refused
        If the code is taken, the amount is nothing, or the days or the currency cannot be.
    """
    district = District.objects.select_for_update().get(pk=district_id)
    insist(by, Act.KEEP_MONEY_LINES, district)
    found = [*_judge(terms), *_judge_place(district, terms)]
    if found:
        raise refusal(found, "money line")
    line = MoneyLine.objects.create(
        district=district,
        code=terms.code.strip(),
        funder=terms.funder.strip(),
        currency=terms.currency,
        amount=terms.amount,
        valid_from=terms.valid_from,
        valid_to=terms.valid_to,
        by=by,
    )
    _enter(line, "money line entered", by)
    return line


@transaction.atomic
def change_money_line(
    *, line_id: int, amount: Decimal, valid_to: date | None, reason: str, by: User
) -> MoneyLine:
    """Raise or lower a line, or end it; never below what is promised from it.

    Raises
    ------
    Refused
        If more is promised from it, or no reason is given.
    """
    line = MoneyLine.objects.select_for_update().select_related("district").get(pk=line_id)
    insist(by, Act.KEEP_MONEY_LINES, line.district)
    if not reason.strip():
        raise Refused("The reason is missing.", where="reason", remedy="Write who signed what.")
    promised = promised_from(line)
    if amount < promised or amount <= 0:
        what = f"{promised:f} is promised from {line.code}; {amount:f} is less."
        raise Refused(what, where="amount", remedy="Have an approval revised first.")
    if valid_to is not None and valid_to < line.valid_from:
        what = f"The line would end on {valid_to}, before it begins on {line.valid_from}."
        raise Refused(what, where="valid_to", remedy="Look at the day.")
    line.amount, line.valid_to = amount, valid_to
    line.save(update_fields=["amount", "valid_to"])
    _enter(line, "money line changed", by, reason.strip())
    return line


def _judge(terms: LineTerms) -> list[Finding]:
    where, found = terms.code.strip() or "money line", []
    for field in ("code", "funder"):
        if not getattr(terms, field).strip():
            found.append(Finding(where, field, "This is missing.", "Give its code."))
    if terms.amount <= 0:
        found.append(Finding(where, "amount", "A line gives something.", "Look at the amount."))
    try:
        validate_currency(terms.currency)
    except ValidationError as error:
        found.append(Finding(where, "currency", error.messages[0], "Put it right."))
    if terms.valid_to is not None and terms.valid_to < terms.valid_from:
        what = f"It ends on {terms.valid_to}, before it begins on {terms.valid_from}."
        found.append(Finding(where, "valid_to", what, "Look at both days."))
    return found


def _judge_place(district: District, terms: LineTerms) -> list[Finding]:
    if not MoneyLine.objects.filter(district=district, code=terms.code.strip()).exists():
        return []
    what = f"{terms.code.strip()} is taken in {district.name}."
    return [Finding(terms.code, "code", what, "Take another code.")]


def _enter(line: MoneyLine, act: str, by: User, reason: str = "") -> None:
    append(
        district=line.district,
        by=by,
        act=act,
        subject=f"money line {line.code} of {line.funder}",
        content={
            "currency": line.currency,
            "amount": f"{line.amount:f}",
            "money_line": [line.code, line.funder],
            "valid_from": line.valid_from.isoformat(),
            "valid_to": None if line.valid_to is None else line.valid_to.isoformat(),
            "reason": reason,
        },
    )
