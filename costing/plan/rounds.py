"""Better and better plans of one season: greedy at once, then the solver in rounds."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from time import monotonic
from typing import TYPE_CHECKING, Final

from costing.plan.clash import clashes
from costing.plan.deletion import smallest_excess
from costing.plan.greedy import add_what_fits, gang_weeks, greedy_plans
from costing.plan.programme import Programme
from costing.plan.reasons import left_out
from costing.plan.season import SEASONAL, Plan
from costing.plan.stock import Stock

if TYPE_CHECKING:
    from collections.abc import Callable

    from costing.plan.season import Season

# The solver takes no start plan and tells nothing on its way, so each round starts anew.
NODES: Final = (1, 100, 1000, 10_000, 1_000_000)
SECONDS: Final = 25.0  # of the solver in all; 200 sites in 30 weeks stay under 30 s with it
ROUND_SECONDS: Final = 12.0  # longest wait for an answer to `should_stop`


def plan_season(
    season: Season,
    *,
    on_better: Callable[[Plan], None] = lambda _: None,
    should_stop: Callable[[], bool] = lambda: False,
    seconds: float = SECONDS,
) -> Plan:
    """Choose sites and opening weeks so that the sum of benefits is as great as can be.

    Source: interface, season plan. The first plan is greedy by benefit per gang-week; every later
    one is better. Limits are kept exactly: a plan that exceeds one within the solver's tolerance is
    forbidden and solved again. The same season gives the same plan unless the clock ends a round,
    which `timed` says.

    Parameters
    ----------
    season
        Sites and limits.
    on_better
        Is handed the first plan and each better one, with the bound proven so far.
    should_stop
        Is asked between rounds; the best plan so far is given then.
    seconds
        Time for the solver, in all rounds together.

    Returns
    -------
    Plan
        Never worse than a greedy one.

    Raises
    ------
    ValueError
        If fixed openings clash; ask `clashes` first.
    """
    if found := clashes(season):
        raise ValueError(f"fixed openings clash: {found[0].what}")
    search = _Search(season, on_better)
    for stock in greedy_plans(season):
        search.offer(stock)
    end = monotonic() + seconds
    rounds = iter(NODES)
    nodes = next(rounds)
    while nodes and not search.done and not should_stop() and (left := end - monotonic()) > 0.0:
        if search.run_round(nodes, min(left, ROUND_SECONDS)):
            nodes = next(rounds, 0)
    return search.best


class _Search:
    """The best plan so far and the lowest bound."""

    def __init__(self, season: Season, on_better: Callable[[Plan], None]) -> None:
        self.season = season
        self.on_better = on_better
        self.programme = Programme(season)
        self.bound = self.programme.most
        self.gain = Fraction(-1)
        self.ended = False
        self.best: Plan | None = None

    @property
    def done(self) -> bool:
        """Whether no plan can be better, or the solver has nothing left to look at."""
        return self.ended or self.best.proven

    def run_round(self, nodes: int, seconds: float) -> bool:
        """Let the solver work once; false where its plan exceeds a limit and is now forbidden."""
        answer = self.programme.solve(nodes=nodes, seconds=seconds)
        self.bound = min(self.bound, answer.bound)
        bound = max(self.bound, self.best.objective)
        self.best = replace(self.best, bound=bound, timed=self.best.timed or answer.timed)
        if answer.opened is None:
            return True
        stock = Stock(self.season, answer.opened)
        if any(min(free) < 0 for free in stock.weekly.values()):
            return True  # whole numbers that only the solver's rounding exceeds; nothing is gained
        if cover := _cover(stock):
            self.programme.forbid(cover)
            return False
        self.offer(stock)
        self.ended = answer.ended
        return True

    def offer(self, stock: Stock) -> None:
        """Tidy a plan and keep it where it is better than the best."""
        _tidy(stock)
        gain = sum((stock.by_code[code].gain for code in stock.opened), Fraction(0))
        if gain <= self.gain:
            return
        self.gain = gain
        timed = self.best is not None and self.best.timed
        objective = float(gain)
        self.best = Plan(
            stock.openings(), left_out(stock), objective, max(self.bound, objective), timed
        )
        self.on_better(self.best)


def _tidy(stock: Stock) -> None:
    """Move every site to the earliest week it can have, and add what then fits.

    An early opening keeps more time before the rains, and equal plans come out alike.
    """
    moved = True
    while moved:
        moved = False
        for opening in stock.openings():
            site = stock.by_code[opening.site]
            before = stock.give_back(site)
            week = stock.earliest(site)
            stock.take(site, week)
            moved |= week < before
    rest = [site for site in stock.season.sites if site.site not in stock.opened]
    rest.sort(key=lambda site: (-site.gain / gang_weeks(stock.season, site), site.site))
    add_what_fits(stock, rest)


def _cover(stock: Stock) -> list[str]:
    """Give a smallest set of opened sites that exceeds a limit of the whole season; or none."""
    for name, left in stock.seasonal.items():
        if left < 0:
            limit = stock.season.seasonal[name]
            uses = {code: getattr(stock.by_code[code], SEASONAL[name]) for code in stock.opened}
            return smallest_excess(uses, limit)
    return []
