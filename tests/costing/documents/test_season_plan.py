"""A season plan as JSON and as a sheet for a terminal."""

from decimal import Decimal

from hypothesis import given, settings

from costing.documents.season_plan import WIDTH, plan_json, plan_text
from costing.plan.rounds import plan_season
from tests.costing.plan.seasons import one_season, one_site, seasons

SEASON = one_season(
    one_site("KE-04", latest=5, weeks=3, benefit=4.5, cost="60.00", pumps=1, clay_m3=Decimal(20)),
    one_site("KE-07", latest=5, weeks=2, benefit=3.0, cost="40.00", pumps=0, clay_m3=Decimal(10)),
    one_site("KE-09", latest=5, weeks=2, benefit=1.0, cost="50.00", pumps=0, clay_m3=Decimal(10)),
    one_site("KE-11", latest=1, weeks=2, benefit=1.0, cost="1.00", pumps=0, clay_m3=Decimal(1)),
    weeks=5,
    gangs=1,
    budget="120.00",
    pumps=2,
    clay_m3=Decimal(50),
)
SHEET = """\
SEASON PLAN: 5 weeks, 1 gang
  2 of 4 sites can be closed in time
  sum of benefits 7.5; proven: no plan brings more
  money 100.00, of 120.00
  clay 30 of 50 m3

WEEK       GANGS     PUMPS  OPENS AND CLOSES
   1      1 of 1    1 of 2  opens KE-04
   2      1 of 1    1 of 2
   3      1 of 1    1 of 2  closes KE-04
   4      1 of 1    0 of 2  opens KE-07
   5      1 of 1    0 of 2  closes KE-07

GANG BY GANG
  gang 1  KE-04 weeks 1 to 3; KE-07 weeks 4 to 5

LEFT OUT
  KE-09: budget: 20.00 left, 50.00 needed; no gang free between week 1 and 5: taken by
    KE-04 and KE-07
  KE-11: ready week 1 + 2 weeks passes week 1

Weeks are planned, not promised: permits, the daily look at the trench and the watch
upstream still decide. A place that is left out may get room when another one moves.
"""


def test_the_sheet_of_a_plan():
    """Oracle: written by hand; one gang has 5 weeks, KE-04 and KE-07 take them and bring most."""
    assert plan_text(SEASON, plan_season(SEASON)) == SHEET


def test_the_document_has_the_keys_of_the_interface():
    document = plan_json(plan_season(SEASON))
    assert document == {
        "chosen": [
            {"site": "KE-04", "open_week": 1, "close_week": 3},
            {"site": "KE-07", "open_week": 4, "close_week": 5},
        ],
        "left_out": [
            {
                "site": "KE-09",
                "why": (
                    "budget: 20.00 left, 50.00 needed; no gang free between week 1 and 5: "
                    "taken by KE-04 and KE-07"
                ),
            },
            {"site": "KE-11", "why": "ready week 1 + 2 weeks passes week 1"},
        ],
        "objective": 7.5,
        "bound": 7.5,
        "gap": 0.0,
    }


def test_a_plan_that_is_not_proven_says_by_how_much_it_may_fall_short():
    season = one_season(*(one_site(code, latest=2) for code in "ABC"), budget=None)
    text = plan_text(season, plan_season(season, seconds=0.0))
    assert text.splitlines()[2:4] == [
        "  sum of benefits 2; no plan brings more than 3 (gap 50 %)",
        "  time ran out before the best was proven; the plan itself is sound",
    ]
    assert "money 2.00, no limit given" in text


def test_a_season_in_which_nothing_can_be_done():
    season = one_season(gangs=0)
    text = plan_text(season, plan_season(season))
    assert text.startswith("SEASON PLAN: 9 weeks, 0 gangs\n  0 of 0 sites can be closed in time\n")
    assert "WEEK" not in text


@settings(max_examples=50)
@given(seasons(most_sites=8, most_weeks=8, codes="ABCDEFGH"))
def test_no_line_is_wider_than_a_terminal_and_none_ends_in_blanks(season):
    lines = plan_text(season, plan_season(season)).splitlines()
    assert all(len(line) <= WIDTH and line == line.rstrip() for line in lines)
