"""Pairs of half months: affected wells against control wells, before and after the wall."""

from __future__ import annotations

from collections import Counter, defaultdict
from dataclasses import dataclass
from datetime import date
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.units import DAYS_PER_YEAR
from structures.water.half_months import gather_side

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from numpy.typing import NDArray

    from structures.intake.readings import WellReading
    from structures.water.half_months import Side, Stretch, WellHalf
    from structures.water.rules import EffectRules

SEASON_FROM: Final = 2  # full water years a side for annual terms (handbook 10.5)
NO_PARTNER: Final = "no well of the other kind read in that half month"
BOTH_DRY: Final = "dry on both sides"
OTHER_SEASON: Final = "month without a pair on the other side of completion"
# A dry well may stand anywhere below its bottom; no level is as low as this.
FAR_BELOW_M: Final = -1e6


@dataclass(frozen=True, slots=True, eq=False)
class Pairs:
    """Departures from the wells' own means before completion, one row a pair; shapes (n,).

    `below`: affected wells were dry, the true difference lies lower; `above`: control wells were,
    it lies higher. `after` counts the day of completion. `full_before` and `full_after` are the
    starting years of full water years; `readings` how many stand behind a pair, `left_out` why the
    others do not.
    """

    days: tuple[date, ...]
    middle_day: NDArray[np.float64]
    after: NDArray[np.bool_]
    affected_m: NDArray[np.float64]
    control_m: NDArray[np.float64]
    below: NDArray[np.bool_]
    above: NDArray[np.bool_]
    affected_wells: tuple[str, ...]
    control_wells: tuple[str, ...]
    full_before: tuple[int, ...]
    full_after: tuple[int, ...]
    readings: NDArray[np.int_]
    left_out: tuple[tuple[str, int], ...]

    def __post_init__(self) -> None:
        for name in ("middle_day", "affected_m", "control_m"):
            object.__setattr__(self, name, frozen(getattr(self, name)))

    @property
    def difference_m(self) -> NDArray[np.float64]:
        """Affected less control."""
        return self.affected_m - self.control_m

    @property
    def bounded(self) -> NDArray[np.bool_]:
        """Whether a pair is only a bound."""
        return self.below | self.above

    @property
    def dry_share(self) -> float:
        """Share of pairs that are only bounds."""
        return float(self.bounded.mean()) if self.bounded.size else 0.0

    def season(self) -> NDArray[np.float64]:
        """Annual cosine and sine at the pairs; shape (n, 2)."""
        angle = 2.0 * np.pi * self.middle_day / DAYS_PER_YEAR
        return np.column_stack([np.cos(angle), np.sin(angle)])

    def annual_terms(self) -> NDArray[np.float64]:
        """Give the season where both sides are long enough to tell it, else no column.

        Source: handbook 10.5.
        """
        long = min(len(self.full_before), len(self.full_after)) >= SEASON_FROM
        return self.season() if long else np.empty((len(self.days), 0))


def make_pairs(readings: Sequence[WellReading], completed: date, rules: EffectRules) -> Pairs:
    """Pair affected with control wells by half months.

    Source: handbook 10.1 and 10.10: the median over the wells of each side, static readings only;
    months that have no pair on the other side of completion are left out (like seasons only).
    Every reading is either taken or counted under a reason.
    """
    left_out = Counter(reading.left_out for reading in readings if reading.left_out)
    sides = [
        gather_side(
            [one for one in readings if one.role == role and not one.left_out], completed, rules
        )
        for role in ("affected", "control")
    ]
    for side in sides:
        left_out += side.left_out
    affected, control = sides
    both = sorted(affected.halves.keys() & control.halves.keys())
    for one, other in ((affected, control), (control, affected)):
        lone = one.halves.keys() - other.halves.keys()
        left_out[NO_PARTNER] += sum(_count(one, stretch) for stretch in lone)
    full = [
        full_years(
            (stretch.first for stretch in both if (stretch.first >= completed) == after), rules
        )
        for after in (False, True)
    ]
    rows = []
    for stretch in _like_seasons(both, completed):
        level, bottom = _median_m(affected.halves[stretch]), _median_m(control.halves[stretch])
        rows.append((stretch, *level, *bottom))
    kept = [row for row in rows if not (row[2] and row[4])]
    used = {row[0] for row in kept}
    doubly = {row[0] for row in rows} - used
    left_out[BOTH_DRY] += sum(_count(side, one) for side in sides for one in doubly)
    others = set(both) - used - doubly
    left_out[OTHER_SEASON] += sum(_count(side, one) for side in sides for one in others)
    return Pairs(
        days=tuple(row[0].first for row in kept),
        middle_day=np.array([row[0].middle_day for row in kept]),
        after=np.array([row[0].first >= completed for row in kept], dtype=bool),
        affected_m=np.array([row[1] for row in kept]),
        below=np.array([row[2] for row in kept], dtype=bool),
        control_m=np.array([row[3] for row in kept]),
        above=np.array([row[4] for row in kept], dtype=bool),
        affected_wells=affected.wells,
        control_wells=control.wells,
        full_before=full[0],
        full_after=full[1],
        readings=np.array([sum(_count(side, row[0]) for side in sides) for row in kept], dtype=int),
        left_out=tuple(sorted((+left_out).items(), key=lambda item: (-item[1], item[0]))),
    )


def full_years(days: Iterable[date], rules: EffectRules) -> tuple[int, ...]:
    """Give the water years, by the year in which they begin, with pairs in enough months."""
    months: dict[int, set[int]] = defaultdict(set)
    for day in days:
        months[rules.water_year(day)].add(day.month)
    return tuple(
        sorted(year for year, read in months.items() if len(read) >= rules.months_of_full_year)
    )


def _like_seasons(stretches: Sequence[Stretch], completed: date) -> list[Stretch]:
    months = [
        {one.first.month for one in stretches if (one.first >= completed) == after}
        for after in (False, True)
    ]
    common = months[0] & months[1]
    return [one for one in stretches if one.first.month in common]


def _median_m(halves: Sequence[WellHalf]) -> tuple[float, bool]:
    """Give the median departure, and whether dry wells could move it down."""
    high = float(np.median([one.departure_m for one in halves]))
    low = float(np.median([FAR_BELOW_M if one.dry else one.departure_m for one in halves]))
    return high, low < high


def _count(side: Side, stretch: Stretch) -> int:
    return sum(one.count for one in side.halves.get(stretch, ()))
