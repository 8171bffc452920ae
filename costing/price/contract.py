"""What a contract states of money, and nothing it does not state: None is "the contract has none"."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING

from costing.price.money import HUNDRED, percentage, to_cents
from costing.price.rates import Rate, serving_rate
from costing.price.revision import IndexPart, index_factor

if TYPE_CHECKING:
    from collections.abc import Mapping


@dataclass(frozen=True, slots=True)
class Advance:
    """Money paid ahead, taken back as a percentage of the gross of each bill until it is back.

    Raises
    ------
    ValueError
        If the amount is not one of whole hundredths above zero, or the percentage not 0 to 100.
    """

    amount: Decimal
    recovery_percent: Decimal

    def __post_init__(self) -> None:
        _insist_amount(self.amount, "advance")
        _insist_percent(self.recovery_percent, "recovery of the advance")


@dataclass(frozen=True, slots=True)
class Deduction:
    """Something the contract takes off each bill: a percentage of its value, or a fixed amount.

    Raises
    ------
    ValueError
        If not exactly one of the two is given, or it cannot be so.
    """

    words: str
    percent: Decimal | None = None
    amount: Decimal | None = None

    def __post_init__(self) -> None:
        if (self.percent is None) == (self.amount is None):
            raise ValueError(f"{self.words}: a percentage or an amount, one of the two")
        if self.percent is not None:
            _insist_percent(self.percent, self.words)
        if self.amount is not None:
            _insist_amount(self.amount, self.words)

    def of(self, value: Decimal) -> Decimal:
        """Amount taken off a bill of this value, rounded once. Source: handbook 8.4."""
        return self.amount if self.percent is None else percentage(value, self.percent)


@dataclass(frozen=True, slots=True)
class IndexShare:
    """One part of the price that follows an index: its share and the index when it was agreed."""

    words: str
    share: Decimal
    index_then: Decimal


@dataclass(frozen=True, slots=True)
class PriceIndex:
    """How prices follow indices. Source: handbook 8.7.

    Raises
    ------
    ValueError
        If shares and indices cannot be so, two parts have one name, or the shares do not add up
        to one.
    """

    fixed_share: Decimal
    parts: tuple[IndexShare, ...]

    def __post_init__(self) -> None:
        if len({part.words for part in self.parts}) < len(self.parts):
            raise ValueError("two parts of the price index have one name")
        self.factor({part.words: part.index_then for part in self.parts})

    def lacking(self, indices_now: Mapping[str, Decimal]) -> tuple[str, ...]:
        """Name the indices of which today's value was not given."""
        return tuple(part.words for part in self.parts if part.words not in indices_now)

    def factor(self, indices_now: Mapping[str, Decimal]) -> Decimal:
        """Factor by which prices moved, not rounded. Source: handbook 8.7.

        Raises
        ------
        KeyError
            If an index has no value of today.
        ValueError
            If an index is not above zero.
        """
        moved = (
            IndexPart(part.words, part.share, part.index_then, indices_now[part.words])
            for part in self.parts
        )
        return index_factor(self.fixed_share, tuple(moved))


@dataclass(frozen=True, slots=True)
class ContractTerms:
    """Rates by item and lift with the terms of payment of one contract.

    Retention and the recovery of an advance are taken on the gross of the paid lines, deductions
    in per cent on that gross with the movement of the price index.

    Raises
    ------
    ValueError
        If an item, or a lift of it, has two rates, or the retention is not 0 to 100 per cent.
    """

    currency: str
    rates: tuple[Rate, ...]
    retention_percent: Decimal | None = None
    advance: Advance | None = None
    price_index: PriceIndex | None = None
    deductions: tuple[Deduction, ...] = ()

    def __post_init__(self) -> None:
        places = [(rate.item, rate.from_m) for rate in self.rates]
        if len(set(places)) < len(places):
            raise ValueError("an item, or a lift of it, has two rates")
        if self.retention_percent is not None:
            _insist_percent(self.retention_percent, "retention")

    def rate_of(self, item: str, from_m: float | None = None) -> Decimal | None:
        """Rate agreed for an item, or for the lift that begins at `from_m`; None where none is."""
        return serving_rate(self.rates, item, from_m)


def _insist_amount(amount: Decimal, words: str) -> None:
    if not amount > 0 or to_cents(amount) != amount:
        raise ValueError(f"{words}: {amount} is not an amount of whole hundredths above zero")


def _insist_percent(percent: Decimal, words: str) -> None:
    if not 0 <= percent <= HUNDRED:
        raise ValueError(f"{words}: {percent} % is not between 0 and 100")
