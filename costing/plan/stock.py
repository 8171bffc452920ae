"""What of a season is still free while a plan is put together; exact, in whole units and decimals."""

from __future__ import annotations

from typing import TYPE_CHECKING

from costing.plan.season import SEASONAL, WEEKLY, Opening

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from costing.plan.season import Season, SeasonSite


class Stock:
    """Free gangs and pumps by week, money and clay left, and the opening weeks given so far."""

    def __init__(self, season: Season, opened: Mapping[str, int] | None = None) -> None:
        self.season = season
        self.by_code = {site.site: site for site in season.sites}
        self.weekly = {name: [limit] * season.weeks for name, limit in season.weekly.items()}
        self.seasonal = dict(season.seasonal)
        self.opened: dict[str, int] = {}
        for code, week in (opened or {}).items():
            self.take(self.by_code[code], week)

    def take(self, site: SeasonSite, open_week: int) -> None:
        """Open a site in a week, whether or not it fits."""
        self._book(site, open_week, 1)
        self.opened[site.site] = open_week

    def give_back(self, site: SeasonSite) -> int:
        """Take a site out again; gives the week in which it opened."""
        open_week = self.opened.pop(site.site)
        self._book(site, open_week, -1)
        return open_week

    def earliest(self, site: SeasonSite) -> int | None:
        """First week in which a site can open beside all that is opened; None where it cannot."""
        if self.short_of(site):
            return None
        return next((week for week in self.season.openings(site) if self.fits(site, week)), None)

    def short_of(self, site: SeasonSite) -> list[str]:
        """Limits of the whole season of which too little is left for a site."""
        return [
            name for name, left in self.seasonal.items() if getattr(site, SEASONAL[name]) > left
        ]

    def fits(self, site: SeasonSite, open_week: int, names: Iterable[str] | None = None) -> bool:
        """Whether gangs and pumps, or the limits named, are free in every week of a site's work."""
        weeks = slice(open_week - 1, site.close_week(open_week))
        return all(
            min(self.weekly[name][weeks]) >= getattr(site, WEEKLY[name])
            for name in (self.weekly if names is None else names)
        )

    def tight_weeks(self, site: SeasonSite, name: str) -> list[int]:
        """Weeks in which a weekly limit leaves less than a site needs."""
        need = getattr(site, WEEKLY[name])
        return [week for week, free in enumerate(self.weekly[name], start=1) if free < need]

    def openings(self) -> tuple[Opening, ...]:
        """Give what is opened, by week and then by code."""
        return tuple(
            Opening(code, week, self.by_code[code].close_week(week))
            for code, week in sorted(self.opened.items(), key=lambda pair: (pair[1], pair[0]))
        )

    def _book(self, site: SeasonSite, open_week: int, sign: int) -> None:
        for name, free in self.weekly.items():
            need = sign * getattr(site, WEEKLY[name])
            for week in range(open_week - 1, site.close_week(open_week)):
                free[week] -= need
        for name in self.seasonal:
            self.seasonal[name] -= sign * getattr(site, SEASONAL[name])
