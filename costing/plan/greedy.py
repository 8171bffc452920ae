"""Plans in one pass: sites by what they bring for what they take, each as early as it fits."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Final

from costing.plan.season import SEASONAL, WEEKLY
from costing.plan.stock import Stock

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping

    from costing.plan.season import Season, SeasonSite

    Weight = Callable[[Season, SeasonSite], Fraction]

NOTHING: Final = Fraction(1, 10**12)  # what takes nothing comes first, by its benefit


def greedy_plans(season: Season) -> Iterator[Stock]:
    """Give plans by benefit per gang-week, per cost, and per share of all that is limited.

    Source: greedy rule for knapsacks, largest benefit per unit of what it takes first; fixed sites
    before all others, ties by code. The first plan is the one by gang-weeks.

    Parameters
    ----------
    season
        Its fixed openings do not clash.
    """
    for weight in (gang_weeks, _cost, share_of_limits):
        yield greedy_plan(season, weight)


def greedy_plan(season: Season, weight: Weight) -> Stock:
    """Give the plan of one rule; `weight` says what a site takes. Source: see `greedy_plans`."""
    stock = opened_as_fixed(season)
    free = [site for site in season.sites if site.open_week is None]
    order = sorted(
        free,
        key=lambda site: (-site.gain / max(weight(season, site), NOTHING), site.site),
    )
    add_what_fits(stock, order)
    return stock


def guided_plan(
    season: Season, share: Mapping[str, float], weeks: Mapping[str, list[int]]
) -> Stock:
    """Give a plan after parts of sites: the largest parts first, in the weeks of their parts.

    Source: rounding of a relaxed programme; equal parts by gain for the share of all limits.

    Parameters
    ----------
    season
        Its fixed openings do not clash.
    share
        Part of each site that is built, 0 to 1; sites without one are not looked at.
    weeks
        Opening weeks to try before the earliest.
    """
    stock = opened_as_fixed(season)
    sites = [one for one in season.sites if one.open_week is None and one.site in share]
    rank = {one.site: one.gain / max(share_of_limits(season, one), NOTHING) for one in sites}
    for site in sorted(sites, key=lambda one: (-round(share[one.site], 6), -rank[one.site])):
        if stock.short_of(site):
            continue
        tried = (week for week in weeks[site.site] if stock.fits(site, week))
        week = next(tried, None) or stock.earliest(site)
        if week is not None:
            stock.take(site, week)
    return stock


def opened_as_fixed(season: Season) -> Stock:
    """Give the plan that holds the fixed openings and nothing else."""
    fixed = {site.site: site.open_week for site in season.sites if site.open_week is not None}
    return Stock(season, fixed)


def add_what_fits(stock: Stock, order: list[SeasonSite]) -> None:
    """Open every site that brings something and fits, each in its earliest week."""
    for site in order:
        if site.benefit > 0.0 and (week := stock.earliest(site)) is not None:
            stock.take(site, week)


def gang_weeks(_: Season, site: SeasonSite) -> Fraction:
    """Gangs times weeks of work."""
    return Fraction(site.gangs * site.duration_weeks)


def share_of_limits(season: Season, site: SeasonSite) -> Fraction:
    """Sum over all limits of the share that a site takes of each."""
    return sum(
        (Fraction(getattr(site, SEASONAL[name])) / max(Fraction(limit), NOTHING))
        for name, limit in season.seasonal.items()
    ) + sum(
        Fraction(getattr(site, WEEKLY[name]) * site.duration_weeks, max(limit, 1) * season.weeks)
        for name, limit in season.weekly.items()
    )


def _cost(_: Season, site: SeasonSite) -> Fraction:
    return Fraction(site.cost)
