"""A season plan as JSON and as text for a terminal: what opens when, who works where, what waits."""

from __future__ import annotations

from decimal import Decimal
from textwrap import wrap
from typing import TYPE_CHECKING, Any, Final

from costing.plan.gangs import gang_sheets
from costing.plan.wording import names_of, weeks_text
from costing.price.money import money_text

if TYPE_CHECKING:
    from costing.plan.season import Opening, Plan, Season

WIDTH: Final = 88  # characters a line, as on the other sheets of the terminal
CLOSING: Final = (
    "Weeks are planned, not promised: permits, the daily look at the trench and the watch upstream "
    "still decide. A place that is left out may get room when another one moves."
)


def plan_json(plan: Plan) -> dict[str, Any]:
    """Give the JSON document of a plan. Source: interface, season plan."""
    return {
        "chosen": [
            {"site": one.site, "open_week": one.open_week, "close_week": one.close_week}
            for one in plan.chosen
        ],
        "left_out": [{"site": one.site, "why": one.why} for one in plan.left_out],
        "objective": plan.objective,
        "bound": plan.bound,
        "gap": plan.gap,
    }


def plan_text(season: Season, plan: Plan) -> str:
    """Give the text of a plan.

    Parameters
    ----------
    season
        The season that was planned.
    plan
        A plan of it.
    """
    blocks = [_head(season, plan), _weeks(season, plan), _gangs(season, plan), _left_out(plan)]
    blocks.append(wrap(CLOSING, WIDTH))
    return "\n\n".join("\n".join(block) for block in blocks if block) + "\n"


def _head(season: Season, plan: Plan) -> list[str]:
    by_code = {site.site: site for site in season.sites}
    chosen = [by_code[one.site] for one in plan.chosen]
    spent = money_text(sum((site.cost for site in chosen), start=Decimal(0)))
    budget = "no limit given" if season.budget is None else f"of {money_text(season.budget)}"
    lines = [
        f"SEASON PLAN: {_count(season.weeks, 'week')}, {_count(season.gangs, 'gang')}",
        f"  {len(chosen)} of {_count(len(season.sites), 'site')} can be closed in time",
        f"  sum of benefits {plan.objective:.10g}; {_proof(plan)}",
        f"  money {spent}, {budget}",
    ]
    if plan.timed and not plan.proven:
        lines.insert(3, "  time ran out before the best was proven; the plan itself is sound")
    if season.clay_m3 is not None:
        lines.append(f"  clay {sum(site.clay_m3 for site in chosen)} of {season.clay_m3} m3")
    return lines


def _proof(plan: Plan) -> str:
    if plan.proven:
        return "proven: no plan brings more"
    return f"no plan brings more than {plan.bound:.10g} (gap {100 * plan.gap:.2g} %)"


def _weeks(season: Season, plan: Plan) -> list[str]:
    """Week by week: gangs and pumps at work, what opens, what closes."""
    if not plan.chosen:
        return []
    by_code = {site.site: site for site in season.sites}
    pumps = f"{'PUMPS':>10}" if season.pumps is not None else ""
    lead = 4 + 12 + len(pumps)
    lines = [f"{'WEEK':<4}{'GANGS':>12}{pumps}  OPENS AND CLOSES"]
    for week in range(1, season.weeks + 1):
        at_work = [one for one in plan.chosen if one.open_week <= week <= one.close_week]
        gangs = sum(by_code[one.site].gangs for one in at_work)
        head = f"{week:>4}{f'{gangs} of {season.gangs}':>12}"
        if season.pumps is not None:
            held = sum(by_code[one.site].pumps for one in at_work)
            head += f"{f'{held} of {season.pumps}':>10}"
        said = _said(
            [one.site for one in at_work if one.open_week == week],
            [one.site for one in at_work if one.close_week == week],
        )
        indent = " " * (lead + 2)
        lines += wrap(said, WIDTH, initial_indent=f"{head}  ", subsequent_indent=indent) or [head]
    return lines


def _said(opens: list[str], closes: list[str]) -> str:
    parts = [("opens", opens), ("closes", closes)]
    return "; ".join(f"{verb} {names_of(sites)}" for verb, sites in parts if sites)


def _gangs(season: Season, plan: Plan) -> list[str]:
    """Gang by gang: where it works in which weeks."""
    if not plan.chosen:
        return []
    lines = ["GANG BY GANG"]
    width = len(str(season.gangs))
    for number, sheet in enumerate(gang_sheets(season, plan), start=1):
        places = [f"{one.site} {_span(one)}" for one in sheet]
        head = f"  gang {number:>{width}}  "
        text = "; ".join(places) or "free all season"
        lines += wrap(text, WIDTH, initial_indent=head, subsequent_indent=" " * len(head))
    return lines


def _span(one: Opening) -> str:
    return weeks_text(range(one.open_week, one.close_week + 1))


def _left_out(plan: Plan) -> list[str]:
    lines = ["LEFT OUT"] if plan.left_out else []
    for one in plan.left_out:
        lines += wrap(
            f"{one.site}: {one.why}", WIDTH, initial_indent="  ", subsequent_indent="    "
        )
    return lines


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}{'' if number == 1 else 's'}"
