"""What is sanctioned, promised, done and paid of one structure, and exact sums over many.

A sum always says of how many it is the sum and of how many nothing is known: what is not known is
never counted as zero.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from decimal import Decimal
from typing import TYPE_CHECKING, Final

from costing.price.money import to_cents
from structures.errors import Refused

if TYPE_CHECKING:
    from collections.abc import Iterable


@dataclass(frozen=True, slots=True)
class Commitment:
    """Money of one structure; None is "not known", zero is "nothing so far".

    `sanctioned` is the technical sanction in force, `approved` the administrative approval,
    `committed` the contracts signed, `measured` the worth of the measurement book at contract
    rates, `billed` what bills ask for, refused lines left out, `held` of it what waits for a
    decision, `paid` what was paid, `forecast` the cost at the end with the rock as found.

    Raises
    ------
    ValueError
        If an amount is negative or not one of whole hundredths, or more is held than billed.
    """

    structure: str
    currency: str
    sanctioned: Decimal | None = None
    approved: Decimal | None = None
    committed: Decimal | None = None
    measured: Decimal | None = None
    billed: Decimal | None = None
    held: Decimal | None = None
    paid: Decimal | None = None
    forecast: Decimal | None = None

    def __post_init__(self) -> None:
        for name in KEYS:
            amount = getattr(self, name)
            if amount is not None and (amount < 0 or to_cents(amount) != amount):
                raise ValueError(f"{self.structure}: {name} {amount} is no amount")
        if self.held is not None and (self.billed is None or self.held > self.billed):
            raise ValueError(f"{self.structure}: more is held than billed")

    @property
    def exposed(self) -> Decimal | None:
        """How far the forecast goes over the approval; zero where it does not, None if unknown."""
        if self.forecast is None or self.approved is None:
            return None
        return max(self.forecast - self.approved, Decimal("0.00"))


KEYS: Final = tuple(
    one.name for one in fields(Commitment) if one.name not in ("structure", "currency")
)


@dataclass(frozen=True, slots=True)
class Sum:
    """Sum of the amounts that are known, of how many, and of how many nothing is known."""

    amount: Decimal
    known: int
    not_known: int

    @property
    def complete(self) -> bool:
        """Is nothing missing from it."""
        return not self.not_known


@dataclass(frozen=True, slots=True)
class Commitments:
    """Sums over structures of one currency, by the names of `Commitment`, and `exposed`."""

    currency: str
    structures: int
    sums: dict[str, Sum]


def sum_up(records: Iterable[Commitment]) -> tuple[Commitments, ...]:
    """Add up by currency, in the order of their codes; nothing is converted.

    Raises
    ------
    Refused
        If a structure is given twice in one currency.
    """
    by_currency: dict[str, list[Commitment]] = {}
    for one in records:
        by_currency.setdefault(one.currency, []).append(one)
    for currency, ours in by_currency.items():
        names = [one.structure for one in ours]
        twice = sorted({name for name in names if names.count(name) > 1})
        if twice:
            raise Refused(
                f"{', '.join(twice)} would be counted twice in {currency}.",
                where="money of structures",
                remedy="Give each structure once.",
            )
    return tuple(
        Commitments(
            currency,
            len(ours),
            {key: _sum(getattr(one, key) for one in ours) for key in (*KEYS, "exposed")},
        )
        for currency, ours in sorted(by_currency.items())
    )


def _sum(amounts: Iterable[Decimal | None]) -> Sum:
    listed = list(amounts)
    known = [amount for amount in listed if amount is not None]
    return Sum(sum(known, start=Decimal("0.00")), len(known), len(listed) - len(known))
