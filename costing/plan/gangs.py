"""Which gang works where: the gangs of a plan by number."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from costing.plan.season import Opening, Plan, Season


def gang_sheets(season: Season, plan: Plan) -> tuple[tuple[Opening, ...], ...]:
    """Give for each gang what it works on, in the order of the weeks.

    Source: colouring of intervals in the order of their beginnings: whoever opens takes the free
    gangs of the lowest numbers, and these are enough wherever the weekly sums are.

    Raises
    ------
    ValueError
        If the plan needs more gangs than the season has.
    """
    needs = {site.site: site.gangs for site in season.sites}
    sheets: list[list[Opening]] = [[] for _ in range(season.gangs)]
    for opening in plan.chosen:
        free = [sheet for sheet in sheets if not sheet or sheet[-1].close_week < opening.open_week]
        need = needs[opening.site]
        if len(free) < need:
            raise ValueError(f"{opening.site} needs {need} gangs, {len(free)} are free")
        for sheet in free[:need]:
            sheet.append(opening)
    return tuple(map(tuple, sheets))
