"""Which gang works where."""

from dataclasses import replace
from itertools import pairwise

import pytest
from hypothesis import given, settings

from costing.plan.gangs import gang_sheets
from costing.plan.rounds import plan_season
from costing.plan.season import Opening
from tests.costing.plan.seasons import one_season, one_site, seasons


@settings(max_examples=100)
@given(seasons(most_sites=8, most_weeks=8, codes="ABCDEFGH"))
def test_every_site_has_its_gangs_and_no_gang_is_in_two_places(season):
    plan = plan_season(season)
    sheets = gang_sheets(season, plan)
    assert len(sheets) == season.gangs
    for sheet in sheets:
        for earlier, later in pairwise(sheet):
            assert earlier.close_week < later.open_week
    for site in season.sites:
        count = sum(site.site in {one.site for one in sheet} for sheet in sheets)
        assert count == (site.gangs if site.site in {one.site for one in plan.chosen} else 0)


def test_a_plan_beyond_the_gangs_is_no_plan():
    season = one_season(one_site("A"), one_site("B"), gangs=1)
    plan = replace(plan_season(season), chosen=(Opening("A", 1, 2), Opening("B", 2, 3)))
    with pytest.raises(ValueError, match="B needs 1 gangs, 0 are free"):
        gang_sheets(season, plan)
