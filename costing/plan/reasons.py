"""Why each site that is left out cannot be added to a plan as it stands."""

from __future__ import annotations

from typing import TYPE_CHECKING

from costing.plan.season import SEASONAL, WEEKLY, LeftOut
from costing.plan.wording import (
    LABELS,
    NAMES_MOST,
    ONE_OF,
    amount_text,
    asked,
    at_hand,
    names_of,
    weeks_text,
)

if TYPE_CHECKING:
    from costing.plan.season import Season, SeasonSite
    from costing.plan.stock import Stock


def left_out(stock: Stock) -> tuple[LeftOut, ...]:
    """Give the sites without an opening, in the order of the season, each with what forbids it.

    Source: each reason is read off the plan: the window of the site alone, what is left of money
    and clay, the weeks in which too few gangs or pumps are free. All that holds is said.
    """
    return tuple(
        LeftOut(site.site, "; ".join(reasons(stock, site)))
        for site in stock.season.sites
        if site.site not in stock.opened
    )


def reasons(stock: Stock, site: SeasonSite) -> list[str]:
    """Say what forbids one site.

    Raises
    ------
    ValueError
        If nothing does: the plan was not filled up.
    """
    window = _window(stock.season, site)
    if window:
        return [window]
    said = [*_seasonal(stock, site), *_weekly(stock, site)]
    if not said and not site.benefit:
        said = ["benefit 0: it fits, and nothing is gained by it"]
    if not said:
        raise ValueError(f"{site.site} fits and is left out")
    return said


def _window(season: Season, site: SeasonSite) -> str:
    if season.openings(site):
        return ""
    end = min(site.latest_close_week, season.weeks)
    last = ", the last of the season" if end < site.latest_close_week else ""
    weeks = f"{site.duration_weeks} week{'s' if site.duration_weeks > 1 else ''}"
    return f"ready week {site.ready_week} + {weeks} passes week {end}{last}"


def _seasonal(stock: Stock, site: SeasonSite) -> list[str]:
    said = []
    for name in stock.short_of(site):
        left = amount_text(name, max(stock.seasonal[name], 0))
        need = amount_text(name, getattr(site, SEASONAL[name]))
        said.append(f"{LABELS[name]}: {left} left, {need} needed")
    return said


def _weekly(stock: Stock, site: SeasonSite) -> list[str]:
    """Say which gangs or pumps are not free; empty where the site finds its weeks."""
    season = stock.season
    weeks = season.openings(site)
    if any(stock.fits(site, week) for week in weeks):
        return []
    never = [
        f"needs {asked(name, getattr(site, WEEKLY[name]))} at once, {at_hand(name, limit)}"
        for name, limit in season.weekly.items()
        if getattr(site, WEEKLY[name]) > limit
    ]
    if never:
        return never
    alone = [
        name for name in season.weekly if not any(stock.fits(site, week, (name,)) for week in weeks)
    ]
    if alone:
        return [_taken(stock, site, [name]) for name in alone]
    return [_taken(stock, site, list(season.weekly))]


def _taken(stock: Stock, site: SeasonSite, names: list[str]) -> str:
    """Say in which weeks too few are free, and who has them."""
    end = min(site.latest_close_week, stock.season.weeks)
    span = f"between week {site.ready_week} and {end}"
    needs = {name: getattr(site, WEEKLY[name]) for name in names}
    tight = {
        name: [week for week in stock.tight_weeks(site, name) if site.ready_week <= week <= end]
        for name in names
    }
    first = names[0]
    if len(names) == 1 and len(tight[first]) == end - site.ready_week + 1:
        few = f"fewer than {asked(first, needs[first])}"
        lead = f"no {ONE_OF[first]}" if needs[first] == 1 else few
        return f"{lead} free {span}: taken by {_takers(stock, first, tight[first])}"
    wanted = names_of([asked(name, need) for name, need in needs.items()])
    few = "; ".join(
        f"too few {name} in {weeks_text(weeks)}, taken by {_takers(stock, name, weeks)}"
        for name, weeks in tight.items()
    )
    length = "week" if site.duration_weeks == 1 else f"{site.duration_weeks} weeks on end"
    return f"no {length} with {wanted} free {span}: {few}"


def _takers(stock: Stock, name: str, weeks: list[int]) -> str:
    codes = [
        opening.site
        for opening in stock.openings()
        if getattr(stock.by_code[opening.site], WEEKLY[name])
        and any(opening.open_week <= week <= opening.close_week for week in weeks)
    ]
    return names_of(codes, most=NAMES_MOST)
