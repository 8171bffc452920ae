"""The integer programme of a season: yes or no for each site, and for each week it may open.

Source: time-indexed formulation of project scheduling, with one variable a site beside those of its
weeks. The solver branches on whether a site is built at all before it asks when, which proves plans
of 200 sites in seconds; the weeks alone did not get there in a minute.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from math import gcd, inf
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.optimize import LinearConstraint
from scipy.sparse import coo_array

from costing.plan.season import SEASONAL, WEEKLY

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from numpy.typing import NDArray

    from costing.plan.season import Season, SeasonSite

GREATEST_GAIN: Final = 1e3  # gains are scaled to it: the solver stops within 1e-6 of its sum
ROW_LIMIT: Final = 1e3  # money and clay are scaled to it: the solver forgives 1e-6 of a row
FINEST_STEP: Final = 10**6  # benefits of more decimals have no step that would tighten a bound


@dataclass(slots=True)
class Programme:
    """The programme of one season; sites that no plan can hold have no variable.

    The first columns are `sites`, then `starts`, pairs of a site's place and a week. `covers` are
    sets of sites that exact arithmetic showed to exceed a limit together although the solver,
    within its tolerance, took them; each becomes a row that forbids the set.
    """

    season: Season
    covers: list[frozenset[str]] = field(default_factory=list)
    sites: list[SeasonSite] = field(init=False)
    starts: list[tuple[int, int]] = field(init=False)

    def __post_init__(self) -> None:
        self.sites = [site for site in self.season.sites if _may_be_chosen(self.season, site)]
        useful = left_packed_weeks(self.season, self.sites)
        self.starts = [
            (place, week)
            for place, site in enumerate(self.sites)
            for week in self.season.openings(site)
            if week in useful or site.open_week is not None
        ]

    def first_bound(self) -> float:
        """Bound before any solving: the least that no limit, or one limit alone, lets be gained.

        Source: relaxation to one limit, that of a week taken over the whole season; the sites that
        gain most for what they take fill it, the last of them in part.
        """
        bounds = [sum((site.gain for site in self.sites), Fraction(0))]
        for name, limit in self.season.seasonal.items():
            uses = [Fraction(getattr(site, SEASONAL[name])) for site in self.sites]
            bounds.append(self._filled(uses, Fraction(limit)))
        for name, limit in self.season.weekly.items():
            uses = [Fraction(getattr(one, WEEKLY[name]) * one.duration_weeks) for one in self.sites]
            bounds.append(self._filled(uses, Fraction(limit * self.season.weeks)))
        return float(min(bounds))

    def _filled(self, uses: list[Fraction], left: Fraction) -> Fraction:
        gained = Fraction(0)
        pairs = zip(self.sites, uses, strict=True)
        worth = [site.gain / use if use else inf for site, use in pairs]
        for place in sorted(range(len(uses)), key=lambda place: -worth[place]):
            share = min(Fraction(1), left / uses[place]) if uses[place] else Fraction(1)
            gained += share * self.sites[place].gain
            left -= share * uses[place]
        return gained

    @property
    def scale(self) -> float:
        """What benefits are multiplied by for the solver."""
        greatest = max((site.benefit for site in self.sites), default=0.0)
        return GREATEST_GAIN / (greatest or 1.0)

    def costs(self) -> NDArray[np.float64]:
        """Give what the solver makes small, shape (sites + starts,): scaled benefits, negative."""
        gains = [-site.benefit * self.scale for site in self.sites]
        return np.concatenate([gains, np.zeros(len(self.starts))])

    def sides(self, kept: Mapping[str, bool]) -> tuple[NDArray, NDArray]:
        """Give least and greatest values, shape (sites + starts,) each.

        Parameters
        ----------
        kept
            Sites that are settled for this solving, in or out; fixed openings are in anyway.
        """
        settled = {site.site: True for site in self.sites if site.open_week is not None}
        settled = {**kept, **settled}
        weeks = np.zeros(len(self.starts))
        least = [float(settled.get(site.site, False)) for site in self.sites]
        most = [float(settled.get(site.site, True)) for site in self.sites]
        return np.concatenate([least, weeks]), np.concatenate([most, weeks + 1.0])

    def rows(self) -> LinearConstraint:
        """Give the rows: one a site that joins it to its weeks, all equal to 0, then the limits."""
        entries, high = self._weekly_rows(len(self.sites))
        for name, limit in self.season.seasonal.items():
            if limit:  # at a limit of zero only sites that take nothing are left
                uses = (Fraction(getattr(site, SEASONAL[name])) for site in self.sites)
                share = Fraction(ROW_LIMIT) / Fraction(limit)
                row = len(self.sites) + len(high)
                entries += [(row, column, float(use * share)) for column, use in enumerate(uses)]
                high.append(ROW_LIMIT)
        for cover in self.covers:
            inside = [column for column, site in enumerate(self.sites) if site.site in cover]
            entries += [(len(self.sites) + len(high), column, 1.0) for column in inside]
            high.append(len(inside) - 1.0)
        count = len(self.sites)
        entries += [(row, row, -1.0) for row in range(count)]
        entries += [(place, count + n, 1.0) for n, (place, _) in enumerate(self.starts)]
        row, column, value = (np.array(part) for part in zip(*entries, strict=True))
        shape = (count + len(high), count + len(self.starts))
        matrix = coo_array((value, (row, column)), shape=shape).tocsr()
        return LinearConstraint(matrix, [0.0] * count + [-inf] * len(high), [0.0] * count + high)

    def _weekly_rows(self, top: int) -> tuple[list[tuple[int, int, float]], list[float]]:
        entries, high = [], []
        for name, limit in self.season.weekly.items():
            first = top + len(high) - 1
            for n, (place, week) in enumerate(self.starts):
                site = self.sites[place]
                if need := float(getattr(site, WEEKLY[name])):
                    column = len(self.sites) + n
                    rows = range(first + week, first + site.close_week(week) + 1)
                    entries += [(row, column, need) for row in rows]
            high += [float(limit)] * self.season.weeks
        return entries, high

    def forbid(self, cover: Iterable[str]) -> None:
        """Forbid a set of sites that exceeds a limit."""
        self.covers.append(frozenset(cover))

    def opened(self, values: NDArray) -> dict[str, int]:
        """Read a solution as opening weeks by site."""
        taken = np.flatnonzero(values[len(self.sites) :] > 0.5)
        return {self.sites[place].site: week for place, week in (self.starts[n] for n in taken)}


def left_packed_weeks(season: Season, sites: Iterable[SeasonSite]) -> set[int]:
    """Weeks in which a site opens in a plan where nothing can move to an earlier week.

    Source: such a plan reaches the best sum, and in it every site opens when it is ready or in the
    week after another closes; all other weeks are dominated.
    """
    useful = {site.ready_week for site in sites if site.open_week is None}
    useful |= {site.close_week(site.open_week) + 1 for site in sites if site.open_week is not None}
    free = [(season.openings(site), site) for site in sites if site.open_week is None]
    for week in range(1, season.weeks + 1):
        if week in useful:
            useful |= {site.close_week(week) + 1 for weeks, site in free if week in weeks}
    return useful


def benefit_step(gains: list[Fraction]) -> Fraction | None:
    """Greatest number of which every sum of gains is a multiple; None where it is too fine.

    Source: greatest common divisor.
    """
    if not any(gains) or any(FINEST_STEP % gain.denominator for gain in gains):
        return None
    return Fraction(gcd(*(int(gain * FINEST_STEP) for gain in gains)), FINEST_STEP)


def _may_be_chosen(season: Season, site: SeasonSite) -> bool:
    if site.open_week is not None:
        return True
    limits = [(WEEKLY[name], limit) for name, limit in season.weekly.items()]
    limits += [(SEASONAL[name], limit) for name, limit in season.seasonal.items()]
    fits = all(getattr(site, use) <= limit for use, limit in limits)
    return fits and site.benefit > 0.0 and bool(season.openings(site))
