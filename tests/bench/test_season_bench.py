"""Season plans of 200 sites in 30 weeks: what the programme brings above the greedy plan, and when."""

from __future__ import annotations

from decimal import Decimal
from time import perf_counter

import numpy as np
import pytest

from costing.plan.rounds import plan_season
from costing.plan.season import Season, SeasonSite

pytestmark = pytest.mark.benchmark

SITES, WEEKS = 200, 30


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


@pytest.mark.parametrize(
    ("gangs", "money_share"), [(6, "0.5"), (20, "0.5"), (40, "0.5"), (20, "0.2"), (40, "1")]
)
def test_plan_against_greedy(gangs, money_share, capsys):
    season = drawn_season(np.random.default_rng(7), gangs=gangs, money_share=money_share)
    start = perf_counter()
    better = []
    plan = plan_season(
        season, on_better=lambda one: better.append((perf_counter() - start, one.objective))
    )
    whole_s = perf_counter() - start
    (first_s, greedy), *_ = better
    near_s = next(at for at, objective in better if objective >= 0.995 * plan.bound)
    assert greedy <= plan.objective <= plan.bound
    with capsys.disabled():
        print(  # noqa: T201 -- what a benchmark is read for
            f"\n{SITES} sites, {WEEKS} weeks, {gangs} gangs, {money_share} of the money: greedy "
            f"{greedy:.1f} in {first_s:.2f} s; plan {plan.objective:.1f} in {whole_s:.1f} s, "
            f"{100 * (plan.objective / greedy - 1):.1f} % more, gap {100 * plan.gap:.3f} %; "
            f"within 0.5 % of the bound after {near_s:.1f} s"
        )
