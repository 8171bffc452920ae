"""Readings of each well gathered by half months, as differences from its own mean before the wall."""

from __future__ import annotations

import calendar
from collections import Counter, defaultdict
from dataclasses import dataclass
from datetime import date, timedelta
from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from structures.intake.readings import WellReading
    from structures.water.rules import EffectRules

HALF: Final = 15  # a half month is 1 to 15 or 16 to the end (handbook 10.10)
MONTHS: Final = 12
ROUNDS: Final = 200  # of an additive fit that settles within some ten
NO_MEAN: Final = "well not read in enough months before completion"


@dataclass(frozen=True, slots=True, order=True)
class Stretch:
    """A half month, cut where the wall was completed; `first` and `last` day, both inside."""

    first: date
    last: date

    @property
    def middle_day(self) -> float:
        """The middle as a day number."""
        return (self.first.toordinal() + self.last.toordinal()) / 2.0


@dataclass(frozen=True, slots=True)
class WellHalf:
    """One well in one half month: mean departure from its own mean, readings, whether dry.

    Of a dry well the departure is that of its bottom: the water stands lower.
    """

    well: str
    departure_m: float
    count: int
    dry: bool


@dataclass(frozen=True, slots=True)
class Side:
    """The wells of one role: what each half month holds, and the readings that found no place."""

    wells: tuple[str, ...]
    halves: dict[Stretch, list[WellHalf]]
    left_out: Counter[str]


def stretch_of(day: date, completed: date) -> Stretch:
    """Give the half month of a day; the day of completion begins a stretch of its own.

    Source: handbook 10.10, a reading on the completion day counts as after.
    """
    end = calendar.monthrange(day.year, day.month)[1]
    first, last = (1, HALF) if day.day <= HALF else (HALF + 1, end)
    start, stop = day.replace(day=first), day.replace(day=last)
    if start < completed <= stop:
        if day < completed:
            stop = completed - timedelta(days=1)
        else:
            start = completed
    return Stretch(start, stop)


def gather_side(readings: Sequence[WellReading], completed: date, rules: EffectRules) -> Side:
    """Gather the readings of one role by half months.

    Source: handbook 10.10. A well enters with readings in enough months of one water year before
    completion; its mean is that of its twelve monthly means. Where a month is missing or dry the
    course of the year of the side's other wells stands in, so that the gap does not move the mean.

    Parameters
    ----------
    readings
        Readings of one role that may take part (`left_out` empty).
    """
    by_well: dict[str, list[WellReading]] = defaultdict(list)
    for reading in readings:
        by_well[reading.well].append(reading)
    enough = {
        well: rows for well, rows in by_well.items() if _enough_months(rows, completed, rules)
    }
    mean_m = own_means_m(enough, completed)
    left_out = Counter({NO_MEAN: sum(len(by_well[well]) for well in by_well if well not in mean_m)})
    halves: dict[Stretch, list[WellHalf]] = defaultdict(list)
    for well in sorted(mean_m):
        parts: dict[Stretch, list[WellReading]] = defaultdict(list)
        for reading in enough[well]:
            parts[stretch_of(reading.day, completed)].append(reading)
        for stretch, rows in parts.items():
            level_m = float(np.mean([row.level_m for row in rows]))
            dry = any(row.dry for row in rows)
            halves[stretch].append(WellHalf(well, level_m - mean_m[well], len(rows), dry))
    return Side(tuple(sorted(mean_m)), dict(halves), +left_out)


def _enough_months(rows: Iterable[WellReading], completed: date, rules: EffectRules) -> bool:
    months: dict[int, set[int]] = defaultdict(set)
    for row in rows:
        if row.day < completed:
            months[rules.water_year(row.day)].add(row.day.month)
    return any(len(read) >= rules.months_of_full_year for read in months.values())


def own_means_m(by_well: dict[str, list[WellReading]], completed: date) -> dict[str, float]:
    """Give each well's mean level before completion; a well that was always dry has none.

    Levels of wells and months are fitted as well + course of the year. With all twelve months in
    every well that is the plain mean of twelve monthly means.
    """
    wells = sorted(by_well)
    table = np.full((len(wells), MONTHS), np.nan)
    for place, well in enumerate(wells):
        for month in range(1, MONTHS + 1):
            levels = [
                row.level_m
                for row in by_well[well]
                if row.day < completed and row.day.month == month and not row.dry
            ]
            if levels:
                table[place, month - 1] = np.mean(levels)
    known = ~np.isnan(table)
    wells = [well for well, any_known in zip(wells, known.any(axis=1), strict=True) if any_known]
    table, known = table[known.any(axis=1)], known[known.any(axis=1)]
    if not wells:
        return {}
    filled = np.where(known, table, 0.0)
    mean = filled.sum(axis=1) / known.sum(axis=1)
    met = known.any(axis=0)
    for _ in range(ROUNDS):
        course = np.where(known, table - mean[:, None], 0.0).sum(axis=0) / np.maximum(
            known.sum(axis=0), 1
        )
        course -= course[met].mean()
        mean = np.where(known, table - course[None, :], 0.0).sum(axis=1) / known.sum(axis=1)
    return dict(zip(wells, mean.tolist(), strict=True))
