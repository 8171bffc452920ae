"""The integer programme of a season: yes or no for each site, and for each week it may open.

Source: time-indexed formulation of project scheduling, with one variable a site beside those of its
weeks. The solver branches on whether a site is built at all before it asks when, which proves plans
of 200 sites in seconds; the weeks alone did not get there in a minute.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from math import gcd, inf, isfinite
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp
from scipy.sparse import coo_array

from costing.plan.season import SEASONAL, WEEKLY

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from costing.plan.season import Season, SeasonSite

GREATEST_BENEFIT: Final = 1e3  # benefits are scaled to it: the solver stops within 1e-6 of its sum
SOLVER_SLACK: Final = 1e-6  # what the solver forgives in a row and in the sum, in its own units
FINEST_STEP: Final = 10**6  # benefits of more decimals have no step that would tighten a bound
ROW_LIMIT: Final = (
    1e3  # a money row is scaled to it, so that the slack is a thousandth of a millionth
)
# The solver's status; where its nodes ran out it has a number of its own that scipy does not know.
OPTIMAL, OUT_OF_TIME, NO_PLAN, NO_END = 0, 1, 2, 3


@dataclass(frozen=True, slots=True)
class Answer:
    """What one round of the solver gives: a plan as weeks by site or None, and a bound.

    `ended` says that the search came to its end, `timed` that the clock stopped it.
    """

    opened: dict[str, int] | None
    bound: float
    ended: bool
    timed: bool


@dataclass(slots=True)
class Programme:
    """The programme of one season; sites that no plan can hold have no variable.

    `covers` are sets of sites that exact arithmetic showed to exceed a limit together although the
    solver, within its tolerance, took them; each becomes a row that forbids the set.
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

    @property
    def most(self) -> float:
        """Sum of the benefits of all sites that have a variable, a bound before any solving."""
        return float(sum(site.gain for site in self.sites))

    def solve(self, *, nodes: int, seconds: float) -> Answer:
        """Solve with at most so many nodes of the search tree, within so many seconds.

        Source: HiGHS by scipy.optimize.milp.

        Raises
        ------
        RuntimeError
            If the solver says that there is no plan or no bound; the fixed openings clash then, or
            the programme is wrong.
        """
        if not self.sites:
            return Answer({}, 0.0, ended=True, timed=False)
        scale = GREATEST_BENEFIT / (max(site.benefit for site in self.sites) or 1.0)
        found = milp(
            np.concatenate(
                [[-site.benefit * scale for site in self.sites], np.zeros(len(self.starts))]
            ),
            constraints=self._rows(),
            bounds=self._bounds(),
            integrality=np.ones(len(self.sites) + len(self.starts)),
            options={"node_limit": nodes, "time_limit": seconds, "mip_rel_gap": 0.0},
        )
        if found.status in (NO_PLAN, NO_END):
            raise RuntimeError(f"the solver found no plan: {found.message}")
        return Answer(
            self._opened(found.x),
            self._bound(found.mip_dual_bound, scale),
            ended=found.status == OPTIMAL,
            timed=found.status == OUT_OF_TIME,
        )

    def forbid(self, cover: Iterable[str]) -> None:
        """Forbid a set of sites that exceeds a limit."""
        self.covers.append(frozenset(cover))

    def _rows(self) -> LinearConstraint:
        """Rows: site and its weeks agree; gangs and pumps by week; money, clay; forbidden sets."""
        count = len(self.sites)
        entries: list[tuple[int, int, float]] = [(row, row, -1.0) for row in range(count)]
        entries += [(place, count + n, 1.0) for n, (place, _) in enumerate(self.starts)]
        low, high = [0.0] * count, [0.0] * count
        for name, limit in self.season.weekly.items():
            top = len(high)
            for n, (place, week) in enumerate(self.starts):
                site = self.sites[place]
                need = getattr(site, WEEKLY[name])
                rows = range(top + week - 1, top + site.close_week(week)) if need else ()
                entries += [(row, count + n, float(need)) for row in rows]
            high += [float(limit)] * self.season.weeks
        for name, limit in self.season.seasonal.items():
            if limit:  # at a limit of zero only sites that take nothing are left
                uses = enumerate(Fraction(getattr(site, SEASONAL[name])) for site in self.sites)
                share = Fraction(ROW_LIMIT) / Fraction(limit)
                entries += [(len(high), column, float(use * share)) for column, use in uses]
                high.append(ROW_LIMIT)
        for cover in self.covers:
            inside = [column for column, site in enumerate(self.sites) if site.site in cover]
            entries += [(len(high), column, 1.0) for column in inside]
            high.append(len(inside) - 1.0)
        low += [-inf] * (len(high) - count)
        row, column, value = (np.array(part) for part in zip(*entries, strict=True))
        shape = (len(high), count + len(self.starts))
        return LinearConstraint(coo_array((value, (row, column)), shape=shape).tocsr(), low, high)

    def _bounds(self) -> Bounds:
        least = np.zeros(len(self.sites) + len(self.starts))
        least[: len(self.sites)] = [site.open_week is not None for site in self.sites]
        return Bounds(least, 1.0)

    def _opened(self, values: NDArray | None) -> dict[str, int] | None:
        if values is None:
            return None
        weeks = values[len(self.sites) :] > 0.5
        return {
            self.sites[place].site: week
            for (place, week), taken in zip(self.starts, weeks, strict=True)
            if taken
        }

    def _bound(self, value: float | None, scale: float) -> float:
        """Give the solver's bound in benefits, lowered to the next sum that can be."""
        if value is None or not isfinite(value):
            return self.most
        bound = -value / scale
        step = benefit_step([site.gain for site in self.sites])
        if step is not None:
            steps = (-value + SOLVER_SLACK) / scale / float(step)
            bound = min(bound, float(int(np.floor(steps)) * step))
        return min(bound, self.most)


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
