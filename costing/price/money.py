"""Exact money: the one gate from computed numbers into decimals, and how amounts are rounded.

Nothing beyond the gate is a binary number; each line is rounded once, so printed lines add up.
"""

from __future__ import annotations

import math
from decimal import ROUND_CEILING, ROUND_HALF_UP, Decimal
from typing import Final

from structures.takeoff.quantity import GATE_DECIMALS

GATE: Final = Decimal(1).scaleb(-GATE_DECIMALS)
CENT: Final = Decimal("0.01")  # handbook 8.4: quantities, rates and amounts
HUNDRED: Final = Decimal(100)  # per cent; also the step of the figure for sanction, handbook 8.4
GREATEST: Final = (
    1e12  # project choice; a quantity beyond it is a slip, and its hundredths get lost
)


def gated(value: float) -> Decimal:
    """Take a computed number into decimal arithmetic, to six decimals.

    Source: handbook 8.4. The crossing is the shortest decimal text of the number, rounded half
    away from zero.

    Raises
    ------
    ValueError
        If the number is not finite, or too large to have hundredths.
    """
    number = float(value)
    if not math.isfinite(number) or abs(number) > GREATEST:
        raise ValueError(f"{number} has no exact hundredths")
    return _half_away(Decimal(repr(number)), GATE)


def measured(value: float) -> Decimal:
    """Take a computed quantity through the gate: to six decimals, then to two.

    Source: handbook 8.4, half away from zero both times.

    Raises
    ------
    ValueError
        If the number is not finite, or too large to have hundredths.
    """
    return to_cents(gated(value))


def to_cents(amount: Decimal) -> Decimal:
    """Round to hundredths, half away from zero. Source: handbook 8.4."""
    return _half_away(amount, CENT)


def line_amount(quantity: Decimal, rate: Decimal) -> Decimal:
    """Amount of one line: rounded quantity times rate, rounded once. Source: handbook 8.4."""
    return to_cents(quantity * rate)


def percentage(amount: Decimal, percent: Decimal) -> Decimal:
    """Share of a rounded amount, rounded once. Source: handbook 8.4."""
    return to_cents(amount * percent / HUNDRED)


def sanction_figure(total: Decimal) -> Decimal:
    """Smallest multiple of 100 not below a total. Source: handbook 8.4."""
    steps = (total / HUNDRED).to_integral_value(ROUND_CEILING)
    return to_cents(steps * HUNDRED)


def money_text(amount: Decimal) -> str:
    """Write an amount with two decimals, a point and no thousands marks.

    Raises
    ------
    ValueError
        If the amount is not one of whole hundredths; printing never rounds.
    """
    cents = to_cents(amount)
    if cents != amount:
        raise ValueError(f"{amount} is not an amount of whole hundredths")
    return f"{cents:f}"


def _half_away(amount: Decimal, step: Decimal) -> Decimal:
    """Round half away from zero; what rounds to nothing has no sign."""
    return amount.quantize(step, ROUND_HALF_UP) + Decimal(0)
