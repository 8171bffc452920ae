"""Benefit over cost, brought to the year of building; always shown with what it rests on."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import Final

from costing.price.money import HUNDRED, gated
from structures.intake.defaults import RATES

DISCOUNT: Final = RATES["discount_rate_percent"]
DISCOUNT_PERCENT: Final = gated(DISCOUNT.value)
LIFE: Final = RATES["life_years"]


@dataclass(frozen=True, slots=True)
class BenefitCost:
    """Ratio with its two present values and all that goes into it.

    `capital` is spent in year 0, `benefit` and `upkeep` come in every year from 1 to `years`.

    Raises
    ------
    ValueError
        If a figure cannot be so, or rate or life is outside its accepted range.
    """

    capital: Decimal
    benefit: Decimal
    upkeep: Decimal
    discount_percent: Decimal = DISCOUNT_PERCENT
    years: int = int(LIFE.value)

    def __post_init__(self) -> None:
        if self.capital <= 0 or self.benefit < 0 or self.upkeep < 0:
            raise ValueError("capital is above zero, benefit and upkeep are not negative")
        if not DISCOUNT.low <= self.discount_percent <= DISCOUNT.high:
            raise ValueError(f"a discount rate of {self.discount_percent} % is not accepted")
        if not LIFE.low <= self.years <= LIFE.high:
            raise ValueError(f"a life of {self.years} years is not accepted")

    @property
    def present_benefit(self) -> Decimal:
        """Benefit of all years, brought to year 0. Source: handbook 8.8."""
        return self.benefit * self._annuity

    @property
    def present_cost(self) -> Decimal:
        """Capital and upkeep of all years, brought to year 0. Source: handbook 8.8."""
        return self.capital + self.upkeep * self._annuity

    @property
    def ratio(self) -> Decimal:
        """Present benefit over present cost, not rounded. Source: handbook 8.8."""
        return self.present_benefit / self.present_cost

    @property
    def _annuity(self) -> Decimal:
        growth = 1 + self.discount_percent / HUNDRED
        return sum((growth**-year for year in range(1, self.years + 1)), start=Decimal(0))
