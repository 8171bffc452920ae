"""Small seasons, and the plans of them by trying everything: no solver, no shared arithmetic."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import numpy as np
from hypothesis import strategies as st

from costing.plan.season import Season, SeasonSite

SITES, WEEKS = 200, 30  # of a large season


def one_site(code, ready=1, latest=9, weeks=2, gangs=1, cost="1.00", benefit=1.0, **more):
    return SeasonSite(code, ready, latest, weeks, gangs, Decimal(cost), benefit, **more)


def one_season(*sites, weeks=9, gangs=2, budget="1000000.00", **more):
    money = None if budget is None else Decimal(budget)
    return Season(weeks, gangs, money, sites, **more)


@st.composite
def seasons(draw, most_sites=6, most_weeks=5, fixed=False, codes="ABCDEF"):
    """Draw seasons in which limits bite: few gangs, little money, windows that may be empty."""
    weeks = draw(st.integers(1, most_weeks))
    pumps = draw(st.none() | st.integers(0, 3))
    clay = draw(st.none() | st.decimals(0, 60, places=1))
    sites = []
    for code in codes[: draw(st.integers(0, most_sites))]:
        ready = draw(st.integers(1, weeks))
        sites.append(
            SeasonSite(
                site=code,
                ready_week=ready,
                latest_close_week=draw(st.integers(max(1, ready - 1), weeks + 1)),
                duration_weeks=draw(st.integers(1, 3)),
                gangs=draw(st.integers(1, 3)),
                cost=draw(st.decimals("0", "100", places=2)),
                benefit=draw(st.integers(0, 30)) / 10,
                pumps=None if pumps is None else draw(st.integers(0, 2)),
                clay_m3=None if clay is None else draw(st.decimals(0, 40, places=1)),
                open_week=draw(st.none() | st.integers(1, weeks)) if fixed else None,
            )
        )
    budget = draw(st.none() | st.decimals("0", "300", places=2))
    return Season(weeks, draw(st.integers(0, 4)), budget, tuple(sites), pumps, clay)


def keeps_limits(season, opened):
    """Whether opening weeks by site keep every limit and date; read off the definition."""
    works = [(site, opened[site.site]) for site in season.sites if site.site in opened]
    for site, week in works:
        end = week + site.duration_weeks - 1
        if week < site.ready_week or end > site.latest_close_week or end > season.weeks:
            return False
    for week in range(1, season.weeks + 1):
        on = [site for site, first in works if first <= week < first + site.duration_weeks]
        if sum(site.gangs for site in on) > season.gangs:
            return False
        if season.pumps is not None and sum(site.pumps for site in on) > season.pumps:
            return False
    if season.budget is not None and sum(site.cost for site, _ in works) > season.budget:
        return False
    return season.clay_m3 is None or sum(site.clay_m3 for site, _ in works) <= season.clay_m3


def benefit_of(season, opened):
    return sum((Fraction(str(s.benefit)) for s in season.sites if s.site in opened), Fraction(0))


def every_plan(season):
    """Every plan that keeps all limits and the fixed openings, as opening weeks by site."""
    partial = [{}]
    for site in season.sites:
        weeks = range(1, season.weeks + 1) if site.open_week is None else [site.open_week]
        grown = [] if site.open_week is not None else list(partial)
        grown += [
            more
            for opened in partial
            for week in weeks
            if keeps_limits(season, more := opened | {site.site: week})
        ]
        partial = grown
    return partial


def best_benefit(season):
    """Greatest sum of benefits by trying everything; None where no plan keeps the fixed ones."""
    return max((benefit_of(season, opened) for opened in every_plan(season)), default=None)


def drawn_season(rng, *, gangs, money_share):
    """Draw works of 2 to 8 weeks for 1 to 3 gangs whose windows end up to 15 weeks late."""
    lengths = rng.integers(2, 9, SITES)
    ready = rng.integers(1, 12, SITES)
    latest = np.minimum(WEEKS, ready + lengths - 1 + rng.integers(0, 16, SITES))
    costs = [Decimal(f"{cost:.2f}") for cost in rng.lognormal(13.0, 0.5, SITES)]
    benefits = np.round(np.array(costs, float) / 1e5 * rng.lognormal(0.0, 0.4, SITES), 1)
    crews = rng.choice([1, 1, 1, 2, 3], SITES)
    columns = zip(ready, latest, lengths, crews, costs, benefits, strict=True)
    sites = tuple(
        SeasonSite(f"S-{n:03d}", *map(int, whole), cost, float(benefit))
        for n, (*whole, cost, benefit) in enumerate(columns)
    )
    budget = round(sum(costs) * Decimal(money_share), 2)
    return Season(WEEKS, gangs, budget, sites)
