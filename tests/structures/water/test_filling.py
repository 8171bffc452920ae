"""The end of the first rains. Oracle: the calendar of the year in field practice."""

from datetime import date

import pytest

from structures.water.filling import filling_until
from structures.water.rules import EffectRules


@pytest.mark.parametrize(
    ("completed", "starts", "until"),
    [
        (date(2024, 5, 20), (6, 1), date(2024, 10, 1)),
        (date(2024, 6, 1), (6, 1), date(2024, 10, 1)),
        (date(2024, 6, 2), (6, 1), date(2025, 10, 1)),
        (date(2024, 5, 20), (11, 1), date(2025, 3, 1)),
        (date(2024, 12, 31), (1, 1), date(2025, 5, 1)),
    ],
)
def test_the_rains_after_completion_end_four_months_into_a_water_year(completed, starts, until):
    assert filling_until(completed, EffectRules(year_starts=starts)) == until
