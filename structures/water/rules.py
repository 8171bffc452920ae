"""What the office sets for comparing wells: the defaults of handbook 12 unless changed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from structures.intake.defaults import EFFECT

if TYPE_CHECKING:
    from datetime import date


@dataclass(frozen=True, slots=True)
class EffectRules:
    """Settings of a comparison.

    `year_starts` is (month, day) of the water year; `serial_lag` the lag of the Bartlett check
    form, by the rule of handbook 12 where None.
    """

    least_full_years: int = int(EFFECT["effect_least_full_years"].value)
    least_effect_m: float = EFFECT["effect_least_m"].value
    confidence: float = EFFECT["effect_confidence"].value
    least_pairs: int = int(EFFECT["effect_least_pairs"].value)
    months_of_full_year: int = int(EFFECT["effect_months_of_full_year"].value)
    serial_lag: int | None = None
    year_starts: tuple[int, int] = (6, 1)  # handbook 12

    def __post_init__(self) -> None:
        if not 0.0 < self.confidence < 1.0 or self.least_effect_m <= 0.0:
            raise ValueError("confidence lies between 0 and 1, the least effect above 0")
        if min(self.least_full_years, self.least_pairs) < 1:
            raise ValueError("at least one year and one pair a side are needed")

    def water_year(self, day: date) -> int:
        """Give the year in which the water year of a day begins."""
        return day.year if (day.month, day.day) >= self.year_starts else day.year - 1
