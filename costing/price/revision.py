"""What a later figure means: prices moved by an index, and excess over what was sanctioned."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import Final

from costing.price.money import HUNDRED, gated, to_cents
from structures.intake.defaults import OFFICE

TECHNICAL_EXCESS_PERCENT: Final = gated(OFFICE["excess_technical_percent"].value)
APPROVAL_EXCESS_PERCENT: Final = gated(OFFICE["excess_administrative_percent"].value)


@dataclass(frozen=True, slots=True)
class IndexPart:
    """One part of a price that follows an index: its share, the index then and now.

    Raises
    ------
    ValueError
        If the share is negative or an index is not above zero.
    """

    words: str
    share: Decimal
    index_then: Decimal
    index_now: Decimal

    def __post_init__(self) -> None:
        if self.share < 0 or self.index_then <= 0 or self.index_now <= 0:
            raise ValueError(f"{self.words}: share or index cannot be so")


def index_factor(fixed_share: Decimal, parts: tuple[IndexPart, ...]) -> Decimal:
    """Factor by which prices moved, not rounded. Source: handbook 8.7.

    Raises
    ------
    ValueError
        If the shares do not add up to exactly one.
    """
    whole = fixed_share + sum(part.share for part in parts)
    if fixed_share < 0 or whole != 1:
        raise ValueError(f"the shares add up to {whole}, not to 1")
    return fixed_share + sum(part.share * part.index_now / part.index_then for part in parts)


def index_amount(amount: Decimal, factor: Decimal) -> Decimal:
    """Amount at the prices of now, rounded once. Source: handbook 8.7 and 8.4."""
    return to_cents(amount * factor)


def exceeds(sanctioned: Decimal, expected: Decimal, percent: Decimal) -> bool:
    """Tell whether the expected figure is above the sanctioned one by strictly more than a percentage.

    Source: handbook 8.6.

    Raises
    ------
    ValueError
        If the sanctioned figure is not above zero.
    """
    if sanctioned <= 0:
        raise ValueError(f"{sanctioned} was never sanctioned")
    return expected * HUNDRED > sanctioned * (HUNDRED + percent)


def needs_revised_estimate(
    sanctioned: Decimal,
    expected: Decimal,
    percent: Decimal = TECHNICAL_EXCESS_PERCENT,
) -> bool:
    """Tell whether the excess over technical sanction asks for a revised estimate.

    Source: handbook 8.6.
    """
    return exceeds(sanctioned, expected, percent)


def needs_revised_approval(
    approved: Decimal,
    expected: Decimal,
    percent: Decimal = APPROVAL_EXCESS_PERCENT,
) -> bool:
    """Tell whether the excess asks for revised administrative approval.

    Source: handbook 8.6; up to the percentage it may be authorised within delegated powers.
    """
    return exceeds(approved, expected, percent)
