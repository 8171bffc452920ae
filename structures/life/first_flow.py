"""The early date of first flow: the date before which the stream ran in one year of ten.

Source: the office's practice, "the dry-season clock"; the lower tenth of the days listed, taken
from the list itself: as many of them lie before it as one in ten years allows, and none more.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, timedelta
from itertools import pairwise
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Iterable

YEARS_LEAST: Final = 10  # fewer years known: the earliest day counts
ONE_OF: Final = 10  # years in which the stream may come before the date once
RUNS_DAYS: Final = 122  # June to September: so long after its first flow a season is still this one
LEAP_YEAR: Final = 2000  # days of the year are counted in a year that has all of them
YEAR_DAYS: Final = 366


@dataclass(frozen=True, slots=True)
class EarlyFlow:
    """The date for one season, and from how many years it is known."""

    on: date
    years: int

    @property
    def too_few(self) -> bool:
        """Whether so few years are known that the earliest one counts."""
        return self.years < YEARS_LEAST


def early_first_flow(first_runs: Iterable[date], today: date) -> EarlyFlow | None:
    """Give the early date of the season that a day belongs to; None where no year is known.

    The season is this one until four months after its date, then the next. A list across the turn
    of the year is in order as well: days are counted from the middle of the longest time in which
    the stream never began to run.
    """
    days = sorted(_day_of_year(run) for run in first_runs)
    if not days:
        return None
    start = _start(days)
    ordered = sorted((day - start) % YEAR_DAYS for day in days)
    place = 0 if len(days) < YEARS_LEAST else len(days) // ONE_OF
    month_day = date(LEAP_YEAR, 1, 1) + timedelta(days=(ordered[place] + start) % YEAR_DAYS)
    return EarlyFlow(_coming(month_day, today), len(days))


def years_known(count: int) -> str:
    """Say how many years are known: "1 year is known", "7 years are known"."""
    return "1 year is known" if count == 1 else f"{count} years are known"


def _day_of_year(day: date) -> int:
    return (date(LEAP_YEAR, day.month, day.day) - date(LEAP_YEAR, 1, 1)).days


def _start(days: list[int]) -> int:
    """Give the day in the middle of the longest gap between days of first flow."""
    around = [*days, days[0] + YEAR_DAYS]
    gap, before = max((later - one, one) for one, later in pairwise(around))
    return (before + (gap + 1) // 2) % YEAR_DAYS


def _coming(month_day: date, today: date) -> date:
    """Give the first occurrence of a month and day that is not long past."""
    years = range(today.year - 1, today.year + 2)  # one of the three: a day comes round in a year
    long_past = today - timedelta(days=RUNS_DAYS)
    return next(day for year in years if (day := _in_year(month_day, year)) >= long_past)


def _in_year(month_day: date, year: int) -> date:
    try:
        return month_day.replace(year=year)
    except ValueError:  # 29 February: the day before, so that nothing is late
        return date(year, 2, 28)
