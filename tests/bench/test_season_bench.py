"""Season plans of 200 sites in 30 weeks: what the programme brings above the greedy plan, and when."""

from __future__ import annotations

from time import perf_counter

import numpy as np
import pytest

from costing.plan.rounds import plan_season
from tests.costing.plan.seasons import SITES, WEEKS, drawn_season

pytestmark = pytest.mark.benchmark


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
