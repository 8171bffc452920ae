"""Where a rate comes from: labour, plant, material, carriage; and extra steps of lead and lift."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import ROUND_CEILING, Decimal
from typing import Final, Literal

from costing.price.money import gated, line_amount, percentage
from structures.intake.defaults import RATES

OVERHEAD_PROFIT: Final = RATES["rate_overhead_profit_percent"]
OVERHEAD_PROFIT_PERCENT: Final = gated(OVERHEAD_PROFIT.value)
LEAD_STEP: Final = RATES["lead_step_m"]
LIFT_STEP: Final = RATES["lift_step_m"]

Kind = Literal["labour", "material", "machinery", "carriage", "water"]


@dataclass(frozen=True, slots=True)
class Component:
    """One part of a rate: how much of it goes into one unit, and its own rate.

    Raises
    ------
    ValueError
        If quantity or rate is negative.
    """

    words: str
    kind: Kind
    quantity: Decimal
    rate: Decimal

    def __post_init__(self) -> None:
        if self.quantity < 0 or self.rate < 0:
            raise ValueError(f"{self.words}: neither quantity nor rate is negative")

    @property
    def amount(self) -> Decimal:
        """Amount in the rate, rounded once; the quantity is taken as written, not to hundredths."""
        return line_amount(self.quantity, self.rate)


@dataclass(frozen=True, slots=True)
class Analysis:
    """A rate taken apart; taxes stand apart from it, with their percentage and date."""

    components: tuple[Component, ...]
    subtotal: Decimal
    overhead_profit: Decimal
    rate: Decimal

    def amount_of(self, kind: Kind) -> Decimal:
        """Sum of the components of one kind."""
        amounts = (one.amount for one in self.components if one.kind == kind)
        return sum(amounts, start=Decimal("0.00"))


def analyse_rate(
    components: tuple[Component, ...],
    *,
    overhead_profit_percent: Decimal = OVERHEAD_PROFIT_PERCENT,
) -> Analysis:
    """Build the rate of one unit from its components.

    Source: handbook 8.3; each component is rounded once, then one percentage on their sum.

    Raises
    ------
    ValueError
        If there is no component, or the percentage is outside its accepted range.
    """
    if not components:
        raise ValueError("a rate has one component at least")
    if not OVERHEAD_PROFIT.low <= overhead_profit_percent <= OVERHEAD_PROFIT.high:
        raise ValueError(f"{overhead_profit_percent} % overhead and profit is not accepted")
    subtotal = sum((one.amount for one in components), start=Decimal("0.00"))
    added = percentage(subtotal, overhead_profit_percent)
    return Analysis(components, subtotal, added, subtotal + added)


def lead_steps(lead_m: float, step_m: float = LEAD_STEP.value) -> int:
    """Count the steps of carriage beyond the first, which the base rate includes.

    Source: handbook 8.2.
    """
    return _extra_steps(lead_m, step_m)


def lift_steps(lift_m: float, step_m: float = LIFT_STEP.value) -> int:
    """Count the steps of lifting beyond the first, which the base rate includes.

    Source: handbook 8.2.
    """
    return _extra_steps(lift_m, step_m)


def _extra_steps(length_m: float, step_m: float) -> int:
    length, step = gated(length_m), gated(step_m)
    if length < 0 or step <= 0:
        raise ValueError(f"{length_m:g} m in steps of {step_m:g} m cannot be counted")
    return max(0, int(((length - step) / step).to_integral_value(ROUND_CEILING)))
