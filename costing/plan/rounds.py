"""Better and better plans of one season: greedy at once, then the solver in rounds."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from time import monotonic
from typing import TYPE_CHECKING, Final

from costing.plan import solver
from costing.plan.clash import clashes
from costing.plan.deletion import smallest_excess
from costing.plan.greedy import add_what_fits, gang_weeks, greedy_plans, guided_plan
from costing.plan.programme import Programme
from costing.plan.reasons import left_out
from costing.plan.season import SEASONAL, Plan
from costing.plan.stock import Stock

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from costing.plan.season import Season

SECONDS: Final = 25.0  # of the solver in all; 200 sites in 30 weeks stay under 30 s with it
NARROW_NODES: Final = 50
NARROW_SECONDS: Final = 6.0
ALL_NODES: Final = 100_000_000
WHOLE: Final = 1e-6  # a share that near to 0 or 1 is one


def plan_season(
    season: Season,
    *,
    on_better: Callable[[Plan], None] = lambda _: None,
    should_stop: Callable[[], bool] = lambda: False,
    seconds: float = SECONDS,
) -> Plan:
    """Choose sites and opening weeks so that the sum of benefits is as great as can be.

    Source: interface, season plan. The first plan is greedy by benefit per gang-week; every later
    one is better. Rounds: the programme without whole numbers, which gives a bound and guides a
    plan; a narrow search in which all sites stay settled on which that and the best plan agree; the
    whole search, less what the bound rules out. Limits are kept exactly: a plan that exceeds one
    within the solver's tolerance is forbidden and looked for again. The same season gives the same
    plan unless the clock ends a round, which `timed` says.

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
    rounds = _Rounds(season, on_better, end=monotonic() + seconds)
    for stock in greedy_plans(season):
        rounds.offer(stock)
    for one in (rounds.relax, rounds.narrow, rounds.whole):
        if rounds.best.proven or should_stop():
            break
        if rounds.seconds_left <= 0.0:
            rounds.tell(rounds.bound, timed=True)
            break
        one()
    return rounds.best


class _Rounds:
    """The best plan so far, the lowest bound, and the ways to better them."""

    def __init__(self, season: Season, on_better: Callable[[Plan], None], *, end: float) -> None:
        self.season = season
        self.on_better = on_better
        self.end = end
        self.programme = Programme(season)
        self.bound = self.programme.first_bound()
        self.guide: solver.Relaxed | None = None
        self.gain = Fraction(-1)
        self.timed = False
        self.best: Plan | None = None

    @property
    def seconds_left(self) -> float:
        return self.end - monotonic()

    def relax(self) -> None:
        """Lower the bound by the programme without whole numbers and let it guide a plan."""
        self.guide = solver.relax(self.programme, seconds=self.seconds_left)
        if self.guide is None:
            self.tell(self.bound, timed=True)
            return
        self.tell(self.guide.bound)
        self.offer(guided_plan(self.season, self.guide.share, self.guide.weeks))

    def narrow(self) -> None:
        """Search among the sites on which the guide and the best plan do not agree.

        Source: relaxation induced neighbourhood search.
        """
        if self.guide is None:
            return
        inside = {one.site for one in self.best.chosen}
        kept = {
            code: code in inside
            for code, share in self.guide.share.items()
            if abs(share - (code in inside)) <= WHOLE
        }
        self._search(kept, nodes=NARROW_NODES, seconds=NARROW_SECONDS)

    def whole(self) -> None:
        """Search among all sites, less those that a better plan must settle as the guide does."""
        kept = {} if self.guide is None else self.guide.settled(above=self.best.objective)
        answer = self._search(kept, nodes=ALL_NODES, seconds=self.seconds_left)
        if answer is not None:
            self.tell(answer.bound, timed=answer.timed)

    def _search(
        self, kept: Mapping[str, bool], *, nodes: int, seconds: float
    ) -> solver.Answer | None:
        """Let the solver search until its plan keeps all limits; None where time runs out first."""
        while (left := min(seconds, self.seconds_left)) > 0.0:
            answer = solver.search(self.programme, kept, nodes=nodes, seconds=left)
            self.timed |= answer.timed
            if answer.opened is None:
                return answer
            stock = Stock(self.season, answer.opened)
            if cover := _cover(stock):
                self.programme.forbid(cover)
                continue
            # Gangs and pumps are whole; only rounding of very many could exceed them.
            if all(min(free) >= 0 for free in stock.weekly.values()):
                self.offer(stock)
            return answer
        return None

    def tell(self, bound: float, *, timed: bool = False) -> None:
        """Keep the lowest bound of all plans."""
        self.bound = min(self.bound, bound)
        self.timed |= timed
        self.best = self._plan(self.best)

    def _plan(self, plan: Plan) -> Plan:
        return replace(plan, bound=max(self.bound, plan.objective), timed=self.timed)

    def offer(self, stock: Stock) -> None:
        """Tidy a plan and keep it where it is better than the best."""
        _tidy(stock)
        gain = sum((stock.by_code[code].gain for code in stock.opened), Fraction(0))
        if gain <= self.gain:
            return
        self.gain = gain
        plan = Plan(stock.openings(), left_out(stock), float(gain), self.bound)
        self.best = self._plan(plan)
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
