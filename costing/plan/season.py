"""What a season offers and what its sites ask for, and a plan that joins them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from decimal import Decimal

# Limit of the season -> what a site takes of it.
WEEKLY: Final = {"gangs": "gangs", "pumps": "pumps"}  # in each week in which the site is open
SEASONAL: Final = {"budget": "cost", "clay_m3": "clay_m3"}  # once, over the whole season
NO_OBJECTIVE: Final = 1e-9  # interface: the gap's denominator where nothing is gained
PROVEN_GAP: Final = 1e-9  # the solver stops that near to its bound, of the greatest benefit


@dataclass(frozen=True, slots=True)
class SeasonSite:
    """One site that asks for a place in the season; weeks count from 1.

    It may open from `ready_week` and must be closed by the end of `latest_close_week`. `pumps` are
    held in every week from opening to closing; `cost` and `clay_m3` are spent once. None says that
    it is not known, which only a season without that limit accepts. `open_week` fixes the opening:
    such a site is part of every plan.
    """

    site: str
    ready_week: int
    latest_close_week: int
    duration_weeks: int
    gangs: int
    cost: Decimal
    benefit: float
    pumps: int | None = None
    clay_m3: Decimal | None = None
    open_week: int | None = None

    def __post_init__(self) -> None:
        if min(self.ready_week, self.latest_close_week, self.duration_weeks, self.gangs) < 1:
            raise ValueError(f"{self.site}: weeks and gangs count from 1")
        if not (math.isfinite(self.benefit) and self.benefit >= 0.0):
            raise ValueError(f"{self.site}: a benefit of {self.benefit} cannot be summed")
        if any(use is not None and use < 0 for use in (self.cost, self.pumps, self.clay_m3)):
            raise ValueError(f"{self.site}: nothing takes less than nothing")

    @property
    def gain(self) -> Fraction:
        """The benefit as it is written, so that sums are exact."""
        return Fraction(repr(self.benefit))

    def close_week(self, open_week: int) -> int:
        """Last week of work where the site opens in a given week."""
        return open_week + self.duration_weeks - 1


@dataclass(frozen=True, slots=True)
class Season:
    """What there is: weeks, gangs and pumps in each week, money and clay for the whole season.

    `budget`, `pumps` and `clay_m3` are None where they set no limit.
    """

    weeks: int
    gangs: int
    budget: Decimal | None
    sites: tuple[SeasonSite, ...]
    pumps: int | None = None
    clay_m3: Decimal | None = None

    def __post_init__(self) -> None:
        if self.weeks < 1:
            raise ValueError(f"a season of {self.weeks} weeks has no room")
        if any(limit < 0 for limit in (*self.weekly.values(), *self.seasonal.values())):
            raise ValueError("a limit is below zero")
        if len({site.site for site in self.sites}) < len(self.sites):
            raise ValueError("a site stands twice in the season")
        uses = [WEEKLY[name] for name in self.weekly] + [SEASONAL[name] for name in self.seasonal]
        for site in self.sites:
            lacking = [use for use in uses if getattr(site, use) is None]
            if lacking:
                raise ValueError(f"{site.site} does not say its {', '.join(lacking)}")

    @property
    def weekly(self) -> dict[str, int]:
        """Limits of every week by name."""
        return {name: limit for name in WEEKLY if (limit := getattr(self, name)) is not None}

    @property
    def seasonal(self) -> dict[str, Decimal]:
        """Limits of the whole season by name."""
        return {name: limit for name in SEASONAL if (limit := getattr(self, name)) is not None}

    def last_opening(self, site: SeasonSite) -> int:
        """Last week in which a site may open to be closed in time; below `ready_week` if none."""
        return min(site.latest_close_week, self.weeks) - site.duration_weeks + 1

    def openings(self, site: SeasonSite) -> range:
        """Weeks in which a site may open, as far as it alone decides; empty where there are none."""
        weeks = range(site.ready_week, self.last_opening(site) + 1)
        if site.open_week is None:
            return weeks
        return range(site.open_week, site.open_week + (site.open_week in weeks))


@dataclass(frozen=True, slots=True)
class Opening:
    """A site that is chosen: first and last week of its work."""

    site: str
    open_week: int
    close_week: int


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A site that is not chosen, and why it cannot be added to this plan as it stands."""

    site: str
    why: str


@dataclass(frozen=True, slots=True)
class Plan:
    """One plan of a season, its sum of benefits, and what no plan can exceed.

    `chosen` is sorted by opening week; `bound` is proven for every plan of the season. `proven`
    says that no plan has more; `timed` that a round was cut short by the clock, so that another
    machine may come further.
    """

    chosen: tuple[Opening, ...]
    left_out: tuple[LeftOut, ...]
    objective: float
    bound: float
    timed: bool = False

    @property
    def gap(self) -> float:
        """Share by which the best plan could still be better. Source: interface, season plan."""
        return (self.bound - self.objective) / max(self.objective, NO_OBJECTIVE)

    @property
    def proven(self) -> bool:
        """Whether no plan of the season can have more."""
        return self.gap <= PROVEN_GAP
