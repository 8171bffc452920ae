"""HiGHS on the programme of a season: without whole numbers for a bound, with them for a plan.

scipy's door to the solver takes no start plan and calls nobody back on its way.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import floor, isfinite
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.optimize import Bounds, linprog, milp

from costing.plan.programme import benefit_step

if TYPE_CHECKING:
    from collections.abc import Mapping

    from costing.plan.programme import Programme

SLACK: Final = 1e-6  # what the solver forgives in a row and in the sum, in its own units
SURE: Final = 1e-7  # of a sum: what its reduced costs are trusted to
# The solver's status; where its nodes ran out it has a number of its own that scipy does not know.
OPTIMAL, OUT_OF_TIME, NO_PLAN, NO_END = 0, 1, 2, 3


@dataclass(frozen=True, slots=True)
class Relaxed:
    """The best that parts of sites could bring.

    `optimum` is their sum and `bound` what it leaves to whole sites. `share` is the part of each
    site that is built, `weeks` in which weeks it opens, the largest part first; `price` is what the
    sum loses at least where a site is settled otherwise than `share` rounds to.
    """

    optimum: float
    bound: float
    share: dict[str, float]
    weeks: dict[str, list[int]]
    price: dict[str, float]

    def settled(self, *, above: float) -> dict[str, bool]:
        """Give the sites that are in, or out, of every plan that brings more than a given sum.

        Source: reduced cost fixing: settled otherwise, the price leaves no more than that sum.
        """
        top = self.optimum * (1.0 + SURE)
        return {
            code: self.share[code] > 0.5
            for code, price in self.price.items()
            if top - price <= above
        }


@dataclass(frozen=True, slots=True)
class Answer:
    """What a search for a plan gives: opening weeks by site or None, and a bound.

    The bound holds for plans that keep what was settled. `ended` says that the search came to its
    end, `timed` that the clock stopped it.
    """

    opened: dict[str, int] | None
    bound: float
    ended: bool
    timed: bool


def relax(programme: Programme, *, seconds: float) -> Relaxed | None:
    """Solve without whole numbers; None where the time is too short.

    Source: linear relaxation by scipy.optimize.linprog, with its reduced costs.
    """
    count = len(programme.sites)
    rows = programme.rows()
    least, most = programme.sides({})
    found = linprog(
        programme.costs(),
        A_eq=rows.A[:count],
        b_eq=np.zeros(count),
        A_ub=rows.A[count:],
        b_ub=np.asarray(rows.ub)[count:],
        bounds=np.column_stack([least, most]),
        method="highs",
        options={"time_limit": seconds},
    )
    if found.status != OPTIMAL:
        return None
    codes = [site.site for site in programme.sites]
    prices = np.abs(found.lower.marginals[:count]) + np.abs(found.upper.marginals[:count])
    weeks: dict[str, list[tuple[float, int]]] = {code: [] for code in codes}
    for part, (place, week) in zip(found.x[count:], programme.starts, strict=True):
        if part > SLACK:
            weeks[codes[place]].append((-part, week))
    return Relaxed(
        -found.fun / programme.scale,
        _bound(programme, found.fun),
        dict(zip(codes, found.x[:count].tolist(), strict=True)),
        {code: [week for _, week in sorted(parts)] for code, parts in weeks.items()},
        dict(zip(codes, (prices / programme.scale).tolist(), strict=True)),
    )


def search(programme: Programme, kept: Mapping[str, bool], *, nodes: int, seconds: float) -> Answer:
    """Search for a plan with at most so many nodes of the search tree, within so many seconds.

    Source: branch and bound by scipy.optimize.milp.

    Parameters
    ----------
    programme
        It has a site at least.
    kept
        Sites that are settled, in or out.
    nodes, seconds
        Where the search ends without having looked at everything.

    Returns
    -------
    Answer
        Without a plan and with a bound of 0 where none keeps what is settled.

    Raises
    ------
    RuntimeError
        If there is no plan although nothing is settled: fixed openings clash, or the programme is
        wrong.
    """
    found = milp(
        programme.costs(),
        constraints=programme.rows(),
        bounds=Bounds(*programme.sides(kept)),
        integrality=np.ones(len(programme.sites) + len(programme.starts)),
        options={"node_limit": nodes, "time_limit": seconds, "mip_rel_gap": 0.0},
    )
    if found.status == NO_PLAN and kept:
        return Answer(None, 0.0, ended=True, timed=False)
    if found.status in (NO_PLAN, NO_END):
        raise RuntimeError(f"the solver found no plan: {found.message}")
    return Answer(
        None if found.x is None else programme.opened(found.x),
        _bound(programme, found.mip_dual_bound),
        ended=found.status == OPTIMAL,
        timed=found.status == OUT_OF_TIME,
    )


def _bound(programme: Programme, value: float | None) -> float:
    """Give the solver's bound in benefits, lowered to the next sum that can be."""
    if value is None or not isfinite(value):
        return programme.first_bound()
    bound = -value / programme.scale
    step = benefit_step([site.gain for site in programme.sites])
    if step is not None:
        steps = floor((-value + SLACK) / programme.scale / float(step))
        bound = min(bound, float(steps * step))
    return bound
