"""Contingencies by steps: a smaller share of a large subtotal, never less than a fixed sum."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal

from costing.price.money import percentage, to_cents


@dataclass(frozen=True, slots=True)
class ContingencyStep:
    """The office's setting: above `limit`, `percent_above` of the subtotal, `least` at least.

    Source: handbook 8.5. Without a step the schedule's percentage serves every subtotal.
    """

    limit: Decimal = Decimal(10_000_000)  # handbook 8.5, one crore [P 9]
    percent_above: Decimal = Decimal(3)  # handbook 8.5 [P 9]
    least: Decimal = Decimal(500_000)  # handbook 8.5, five lakh [P 9]

    def of(self, subtotal: Decimal, percent: Decimal) -> Decimal:
        """Contingency on a rounded subtotal. Source: handbook 8.5; each rounded once, 8.4.

        Parameters
        ----------
        subtotal
            Sum of the lines.
        percent
            The schedule's percentage, for subtotals up to the limit.
        """
        if subtotal <= self.limit:
            return percentage(subtotal, percent)
        return max(percentage(subtotal, self.percent_above), to_cents(self.least))
