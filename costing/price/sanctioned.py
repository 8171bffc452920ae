"""A total beside what was sanctioned and approved, and what an excess asks for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from costing.price.money import HUNDRED, to_cents
from costing.price.revision import (
    APPROVAL_EXCESS_PERCENT,
    TECHNICAL_EXCESS_PERCENT,
    needs_revised_approval,
    needs_revised_estimate,
)
from structures.errors import Finding

if TYPE_CHECKING:
    from decimal import Decimal


@dataclass(frozen=True, slots=True)
class Sums:
    """What was sanctioned and approved, None where nothing was, and the office's two limits."""

    technical: Decimal | None = None
    administrative: Decimal | None = None
    technical_percent: Decimal = TECHNICAL_EXCESS_PERCENT
    administrative_percent: Decimal = APPROVAL_EXCESS_PERCENT

    def over_technical(self, total: Decimal | None) -> Decimal | None:
        """Excess of a total over technical sanction in per cent; below zero where it is less."""
        return _over(self.technical, total)

    def over_administrative(self, total: Decimal | None) -> Decimal | None:
        """Excess of a total over administrative approval in per cent."""
        return _over(self.administrative, total)

    def findings(self, total: Decimal | None) -> tuple[Finding, ...]:
        """Say which sum a total exceeds by strictly more than its limit.

        Source: rules ES-03 and ES-04, handbook 8.6. A total that is not known exceeds nothing.
        """
        found = []
        sanctioned, approved = self.technical, self.administrative
        if None not in (total, sanctioned) and needs_revised_estimate(
            sanctioned, total, self.technical_percent
        ):
            what = f"New cost is {_words(sanctioned, total)} over technical sanction."
            remedy = "Revised technical sanction needed before going on."
            found.append(Finding("forecast", "technical", what, remedy, "block", "ES-03"))
        if None not in (total, approved) and needs_revised_approval(
            approved, total, self.administrative_percent
        ):
            what = f"New cost is {_words(approved, total)} over administrative approval."
            remedy = "Revised approval needed."
            found.append(Finding("forecast", "administrative", what, remedy, "block", "ES-04"))
        return tuple(found)

    @property
    def lacking(self) -> tuple[str, ...]:
        """Say which comparison cannot be made."""
        said = []
        if self.technical is None:
            said.append("No technical sanction to compare with.")
        if self.administrative is None:
            said.append("No administrative approval to compare with.")
        return tuple(said)


def _over(sanctioned: Decimal | None, total: Decimal | None) -> Decimal | None:
    if sanctioned is None or total is None:
        return None
    return to_cents((total - sanctioned) * HUNDRED / sanctioned)


def _words(sanctioned: Decimal, total: Decimal) -> str:
    return f"{_over(sanctioned, total):f} % ({total - sanctioned:f})"
