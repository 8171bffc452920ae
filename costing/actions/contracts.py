"""Entering a contract as it was signed, and varying it with a reason: what it does not state stays unknown."""

from __future__ import annotations

from dataclasses import dataclass, field
from decimal import Decimal
from typing import TYPE_CHECKING, Any, Final

from django.core.exceptions import ValidationError
from django.db import transaction

from costing.models import Contract, ContractRate
from costing.price.money import to_cents
from costing.queries.contracts import contract_in_force, deduction_of, index_of
from costing.queries.standing import standing_of
from costing.validators import validate_priced_item
from structures.access import Act, insist
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.actions.stage import locked
from structures.errors import Finding, Refused
from structures.life.stages import HALTED, LINE, before
from structures.models import Photo
from structures.queries.districts import today_of
from structures.validators import validate_currency

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date
    from uuid import UUID

    from structures.models import Structure, User

SIGNED: Final = "contract signed"
VARIED: Final = "contract varied"
PERCENT: Final = Decimal(100)


@dataclass(frozen=True, slots=True)
class AgreedRate:
    """One rate of a contract; `quantity` is None where only the rate was agreed."""

    item: str
    unit: str
    rate: Decimal
    from_m: float | None = None
    quantity: Decimal | None = None


@dataclass(frozen=True, slots=True)
class Deal:
    """What was signed. None, or empty, is "the contract does not state it", never zero.

    `deductions` are {"what", "percent" or "amount"}, `price_index` {"fixed", "parts": [{"what",
    "share", "base"}]}, their numbers as text.
    """

    number: str
    contractor: str
    signed_on: date
    starts_on: date
    currency: str
    rates: tuple[AgreedRate, ...]
    ends_on: date | None = None
    safety_terms: str = ""
    signatories: str = ""
    retention_percent: Decimal | None = None
    advance: Decimal | None = None
    advance_recovery_percent: Decimal | None = None
    deductions: tuple[dict[str, Any], ...] = ()
    price_index: dict[str, Any] | None = field(default=None)
    authority_paper: UUID | None = None
    signed_sheet: UUID | None = None


@transaction.atomic
def enter_contract(*, structure_id: int, deal: Deal, by: User) -> Contract:
    """Enter the first contract of a structure, or its muster.

    Raises
    ------
    Refused
        With all that is wrong; or if there is one already: that one is varied.
    """
    structure = locked(structure_id)
    insist(by, Act.SIGN_CONTRACT, structure)
    there = contract_in_force(structure)
    if there is not None:
        raise Refused(
            f"Contract {there.number} is in force here.",
            where=structure.site.code,
            remedy="Vary it, and say why.",
        )
    return _write(structure, deal, by, replaces=None, why="")


@transaction.atomic
def vary_contract(*, contract_id: int, deal: Deal, why: str, by: User) -> Contract:
    """Put another version in a contract's place; bills written before keep the one they rest on.

    Raises
    ------
    Refused
        If it is not the version in force, no reason is given, or something is wrong with it.
    """
    owner = Contract.objects.values_list("structure_id", flat=True).get(pk=contract_id)
    structure = locked(owner)
    insist(by, Act.SIGN_CONTRACT, structure)
    newest = contract_in_force(structure)
    if newest.pk != contract_id:
        raise Refused(
            f"Version {newest.version} is in force since.",
            where=structure.site.code,
            remedy="Look at it and vary that one.",
        )
    if not why.strip():
        raise Refused("The reason is missing.", where="why", remedy="Write why it is varied.")
    return _write(structure, deal, by, replaces=newest, why=why.strip())


def _write(
    structure: Structure, deal: Deal, by: User, *, replaces: Contract | None, why: str
) -> Contract:
    found = list(_judge(structure, deal))
    if found:
        raise refusal(found, "contract")
    papers = {
        key: None
        if getattr(deal, key) is None
        else Photo.objects.get(pk=getattr(deal, key), site=structure.site_id)
        for key in ("authority_paper", "signed_sheet")
    }
    version = 1 if replaces is None else replaces.version + 1
    plain = {
        "number": deal.number.strip(),
        "contractor": deal.contractor.strip(),
        "signed_on": deal.signed_on,
        "starts_on": deal.starts_on,
        "ends_on": deal.ends_on,
        "currency": deal.currency,
        "safety_terms": deal.safety_terms.strip(),
        "signatories": deal.signatories.strip(),
        "retention_percent": deal.retention_percent,
        "advance": deal.advance,
        "advance_recovery_percent": deal.advance_recovery_percent,
        "deductions": list(deal.deductions),
        "price_index": deal.price_index,
        "why_varied": why,
    }
    entry = append(
        district=structure.site.watershed.district,
        by=by,
        act=SIGNED if replaces is None else VARIED,
        subject=f"contract {plain['number']} of {structure.site.code}, version {version}",
        structure=structure,
        content={
            **{key: _told(value) for key, value in plain.items()},
            "version": version,
            "rates": [
                [one.item, one.from_m, one.unit, f"{one.rate:f}", _told(one.quantity)]
                for one in deal.rates
            ],
            **{key: None if row is None else row.sha256 for key, row in papers.items()},
        },
        corrects=None,
    )
    contract = Contract.objects.create(
        structure=structure,
        version=version,
        replaces=replaces,
        by=by,
        entry=entry,
        **plain,
        **papers,
    )
    ContractRate.objects.bulk_create(
        ContractRate(
            contract=contract,
            item=one.item,
            from_m=one.from_m,
            unit=one.unit,
            rate=one.rate,
            quantity=one.quantity,
        )
        for one in deal.rates
    )
    return contract


def _judge(structure: Structure, deal: Deal) -> Iterable[Finding]:
    yield from _judge_stage(structure)
    for key, remedy in (("number", "Give its number."), ("contractor", "Give a code, no name.")):
        if not getattr(deal, key).strip():
            yield _wrong(key, "This is missing.", remedy)
    if deal.signed_on > today_of(structure.site.watershed.district):
        yield _wrong("signed_on", f"{deal.signed_on} is still to come.", "Look at the day.")
    if deal.ends_on is not None and deal.ends_on < deal.starts_on:
        what = f"It ends on {deal.ends_on}, before it begins on {deal.starts_on}."
        yield _wrong("ends_on", what, "Look at both days.")
    yield from _judge_currency(structure, deal)
    yield from _judge_rates(deal)
    yield from _judge_terms(deal)


def _judge_stage(structure: Structure) -> Iterable[Finding]:
    stage = structure.stage
    if stage != HALTED and (stage not in LINE or before(stage, "approved")):
        what = f"{structure.site.code} is {stage}: nothing is approved that could be agreed on."
        yield _wrong("stage", what, "Have it sanctioned and approved first.")


def _judge_currency(structure: Structure, deal: Deal) -> Iterable[Finding]:
    try:
        validate_currency(deal.currency)
    except ValidationError as error:
        yield _wrong("currency", error.messages[0], "Put it right.")
        return
    estimate = standing_of(structure).estimate
    if estimate is not None and estimate.currency != deal.currency:
        what = f"The estimate is in {estimate.currency}, this contract in {deal.currency}."
        yield Finding("contract", "currency", what, "One currency a structure.", rule="ES-05")


def _judge_rates(deal: Deal) -> Iterable[Finding]:
    if not deal.rates:
        yield _wrong("rates", "No rate is agreed.", "Give a rate for what is to be paid.")
    places = [(one.item, one.from_m) for one in deal.rates]
    for item, from_m in {place for place in places if places.count(place) > 1}:
        lift = "" if from_m is None else f" from {from_m:g} m"
        yield _wrong("rates", f"{item}{lift} has two rates.", "Leave one out.")
    for one in deal.rates:
        try:
            validate_priced_item(one.item, one.unit)
        except ValidationError as error:
            yield _wrong("rates", error.messages[0], "Put it right.")
        if not one.rate > 0 or to_cents(one.rate) != one.rate:
            what = f"{one.item}: a rate is above zero, with two decimals, not {one.rate:f}."
            yield _wrong("rates", what, "Put it right.")
        if one.quantity is not None and (
            one.quantity < 0 or to_cents(one.quantity) != one.quantity
        ):
            what = f"{one.item}: a quantity of {one.quantity:f} cannot be."
            yield _wrong("rates", what, "Give hundredths, or leave it blank.")


def _judge_terms(deal: Deal) -> Iterable[Finding]:
    for key in ("retention_percent", "advance_recovery_percent"):
        value = getattr(deal, key)
        if value is not None and not 0 <= value <= PERCENT:
            yield _wrong(key, f"{value:f} % is not between 0 and 100.", "Look at it again.")
    if (deal.advance is None) != (deal.advance_recovery_percent is None):
        what = "An advance and how it is recovered are stated together, or neither."
        yield _wrong("advance", what, "Give what the contract says of both.")
    if deal.advance is not None and (deal.advance <= 0 or to_cents(deal.advance) != deal.advance):
        yield _wrong("advance", f"An advance of {deal.advance:f} cannot be.", "Look at it again.")
    for one in deal.deductions:
        try:
            deduction_of(one)
        except (ValueError, ArithmeticError) as error:
            yield _wrong("deductions", f"{error}.", "Give a percentage or an amount.")
    try:
        index_of(deal.price_index)
    except (ValueError, ArithmeticError, KeyError) as error:
        yield _wrong("price_index", f"{error}.", "Fixed share and parts add up to 1.")


def _wrong(name: str, what: str, remedy: str) -> Finding:
    return Finding("contract", name, what, remedy)


def _told(value: Any) -> Any:
    """Give a value as the register keeps it: days and decimals as text."""
    if isinstance(value, Decimal):
        return f"{value:f}"
    return value.isoformat() if hasattr(value, "isoformat") else value
