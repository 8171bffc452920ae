"""Contracts as they were signed: their terms as records, and the rates that are there to be agreed."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING

from costing.models import Bill, Contract, Estimate
from costing.price.contract import Advance, ContractTerms, Deduction, IndexShare, PriceIndex
from costing.price.money import line_amount
from costing.price.rate_cells import BY_LIFTS
from costing.price.rates import Rate
from structures import access
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import Structure, User


@dataclass(frozen=True, slots=True)
class OfferedRate:
    """One line of the estimate that a contract agrees a rate for; `rate` is the one offered."""

    item: str
    from_m: float | None
    unit: str
    quantity: Decimal | None
    rate: Decimal | None
    estimated: Decimal | None


def visible_contracts(user: User) -> QuerySet[Contract]:
    """Contracts of all sites where the user may see money, newest version first."""
    found = Contract.objects.filter(structure__site__in=access.sites(user, access.Act.SEE_MONEY))
    return (
        found.select_related("structure__site__watershed__district", "by", "entry")
        .prefetch_related("rates")
        .order_by("structure__site__code", "-version")
    )


def contract_in_force(structure: Structure) -> Contract | None:
    return structure.contracts.prefetch_related("rates").order_by("-version").first()


def terms_of_bill(bill: Bill) -> ContractTerms:
    """Give the terms by which a bill is judged.

    One that was taken over from before has no contract here: its own rates stand, and nothing is
    kept back, recovered or deducted that nobody stated.
    """
    if bill.contract is not None:
        return terms_of(bill.contract)
    rates: dict[tuple[str, float | None], Rate] = {}
    for line in bill.lines.select_related("entry").order_by("order"):
        entry = line.entry
        from_m = entry.from_m if entry.item == BY_LIFTS else None
        rates.setdefault((entry.item, from_m), Rate(entry.item, entry.unit, line.rate, from_m))
    return ContractTerms(bill.currency, tuple(rates.values()))


def terms_of(contract: Contract) -> ContractTerms:
    """Give the terms as records; what the contract does not state is None."""
    return ContractTerms(
        currency=contract.currency,
        rates=tuple(
            Rate(item=one.item, unit=one.unit, rate=one.rate, from_m=one.from_m)
            for one in contract.rates.all()
        ),
        retention_percent=contract.retention_percent,
        advance=None
        if contract.advance is None
        else Advance(contract.advance, contract.advance_recovery_percent),
        price_index=index_of(contract.price_index),
        deductions=tuple(deduction_of(one) for one in contract.deductions),
    )


def index_of(document: dict | None) -> PriceIndex | None:
    """Read a price index as the table keeps it."""
    if document is None:
        return None
    parts = (
        IndexShare(one["what"], Decimal(one["share"]), Decimal(one["base"]))
        for one in document["parts"]
    )
    return PriceIndex(Decimal(document["fixed"]), tuple(parts))


def deduction_of(document: dict) -> Deduction:
    """Read a deduction as the table keeps it."""
    percent, amount = document.get("percent"), document.get("amount")
    return Deduction(
        document["what"],
        None if percent is None else Decimal(percent),
        None if amount is None else Decimal(amount),
    )


def value_of(contract: Contract) -> Decimal | None:
    """Give the sum of agreed quantities at agreed rates; None where a quantity is not stated."""
    lines = list(contract.rates.all())
    if not lines or any(one.quantity is None for one in lines):
        return None
    return sum((line_amount(one.quantity, one.rate) for one in lines), start=Decimal("0.00"))


def offered_rates(structure: Structure) -> tuple[OfferedRate, ...]:
    """List the lines of the newest estimate, at the contract's rates once there is one.

    What neither holds stands below them, blank.
    """
    estimate = Estimate.objects.filter(site=structure.site_id).order_by("-version").first()
    contract = contract_in_force(structure)
    agreed = {} if contract is None else {(r.item, r.from_m): r for r in contract.rates.all()}
    lines = () if estimate is None else estimate.lines.order_by("order")
    found = []
    for line in lines:
        own = agreed.get((line.item, line.from_m))
        found.append(
            OfferedRate(
                line.item,
                line.from_m,
                line.unit,
                line.quantity if own is None else own.quantity,
                line.rate if contract is None else own and own.rate,
                line.rate,
            )
        )
    listed = {(one.item, one.from_m) for one in found}
    found += [
        OfferedRate(one.item, one.from_m, one.unit, one.quantity, one.rate, None)
        for place, one in agreed.items()
        if place not in listed
    ]
    there = {one.item for one in found}
    found += [
        OfferedRate(item, None, unit, None, None, None)
        for item, unit in ITEMS.items()
        if item not in there
    ]
    return tuple(found)
