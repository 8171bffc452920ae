"""Four ways on when rock runs deeper, with the demo's halted wall OD-03."""

from dataclasses import replace
from datetime import date
from decimal import ROUND_HALF_UP, Decimal
from fractions import Fraction
from functools import cache
from itertools import pairwise
from math import ceil

import pytest

from costing.appraisal import appraise
from costing.forecast import Books, Drawn, forecast
from costing.options.site import OnSite, Season, season_on
from costing.options.ways import Asked, require_choice, weigh
from structures.errors import Refused
from structures.intake.pack import GroundWater, Works
from structures.life.first_flow import EarlyFlow
from structures.life.progress import Progress
from structures.life.season import Plan
from structures.water.leakage import slot_flow
from tests.costing.demo_works import by_hand, demo_rates, found, ranges, sums, survey
from tests.costing.documents.appraisals import example
from tests.structures.wall.exact import exact_wall
from tests.structures.wall.examples import Case

TODAY = date(2026, 4, 10)
SITE = OnSite(
    covered=tuple((round(8.68 + 6 * n, 2), round(14.68 + 6 * n, 2)) for n in range(5)),
    open=((38.68, 44.68),),
    spent=Decimal("250000.00"),
)
# Handbook 12, a gang and day.
RATES = {"excavation": 80.0, "rock_key": 1.5, "clay": 10.0, "film": 100.0, "backfill": 120.0}
SHELF_M = 408.96
REACH_M = 300.0


SEASON = Season(Progress(), days_left=120)


@cache
def halted():
    drawn = Drawn(survey("OD-03"), ranges("OD-03"))
    return forecast(drawn, found("OD-03"), Books(demo_rates(), sums("OD-03")), on=TODAY)


@cache
def drawn_wall():
    early = replace(survey("OD-03"), probes=survey("OD-03").probes[:13])
    return appraise(early, schedule=demo_rates(), on=TODAY)


def ways(asked=None, *, site=SITE, season=SEASON):
    options = weigh(halted(), drawn_wall(), site, season, asked or Asked(SHELF_M, REACH_M))
    return {one.way: one for one in options}


def blocks(option):
    return [one.rule for one in option.findings if one.level == "block"]


def test_all_four_ways_are_weighed_in_their_order():
    assert list(ways()) == ["go on", "step", "shift", "close"]
    assert [one.words for one in ways().values()] == [
        "Dig to the rock as found.",
        "End the wall higher, on a shelf.",
        "Fill the trench and build on another line.",
        "Fill the trench and stop.",
    ]


def test_going_on_costs_the_forecast_and_is_too_deep_without_a_design():
    """Oracle: the forecast of test_forecast; 414.19 - 404.54 + 0.15 = 9.80 m, over 6.1 m."""
    way = ways()["go on"]
    assert way.total == Decimal("1079062.22")
    assert way.to_complete == Decimal("829062.22")
    assert (way.over_technical_percent, way.over_administrative_percent) == (
        Decimal("28.66"),
        Decimal("28.46"),
    )
    assert way.depth_m == pytest.approx(9.80)
    assert blocks(way) == ["DW-03"]
    assert not way.may_be_chosen
    (deep,) = (one for one in way.findings if one.level == "block")
    assert deep.what == "Trench 9.8 m deep with the key."
    assert "288 pump hours were planned for the drawn depth." in " ".join(
        one.what for one in way.findings
    )
    with_design = ways(Asked(licensed_design="SD-14, licence 2231"))["go on"]
    assert with_design.may_be_chosen


STEPPED = (
    *((0.0, 416.59), (6.0, 414.84)),
    *((8.68, 414.23), (11.68, 413.42), (14.68, 412.61), (17.68, 411.76), (20.68, 410.96)),
    *((23.68, 410.36), (26.68, 409.83), (29.68, 409.53), (32.68, 409.28), (35.68, 409.18)),
    *((38.68, 409.08), (41.68, 409.01)),
    # The line falls 3.57 m in 2.32 m, and rises 1.00 m in 6 m: so it meets the shelf.
    (Fraction("41.68") + Fraction("2.32") * Fraction("0.05") / Fraction("3.57"), SHELF_M),
    (Fraction(54) + 6 * Fraction("0.14"), SHELF_M),
    *((60.0, 409.82), (66.0, 411.16), (72.0, 412.65), (78.0, 413.9), (84.0, 415.37), (88.0, 416.7)),
)


def test_a_step_costs_what_the_raised_wall_costs():
    """Oracle: the line raised to 408.96 m by hand, the wall of it in exact fractions, priced by the
    demo's conventions. Depth: ground at 54.84 m is 414.1956, less 408.96, and the key 0.15.
    """
    drawn = survey("OD-03")
    x, z = zip(*STEPPED, strict=True)
    wall = exact_wall(Case(drawn.ground, drawn.toes, x, z, drawn.wall))
    way = ways()["step"]
    assert way.total == by_hand(wall, drawn.wall, hours=288)
    assert way.total < ways()["go on"].total
    assert way.depth_m == pytest.approx(414.1956 - 408.96 + 0.15)
    assert (blocks(way), way.may_be_chosen) == ([], True)


def test_a_step_says_how_much_leaks_beside_its_reach():
    """Oracle: handbook 9.4 (b) and 9.6. In plan the water at 412.40 m is as wide as the rock lies
    under it: from 15.421 m (412.61 to 411.76 in 3 m) to 70.993 m (411.16 to 412.65 in 6 m); open
    from 41.712 to 54.84 m. The slices by the middle rule of 20,000 strips.
    """
    leak = ways()["step"].leak
    rock = halted().appraisal.pack.rock_line
    points = [(one.offset_m, one.level_m) for one in rock]
    whole = passing = 0.0
    n = 20000
    for k in range(n):
        at = 14.0 + 60.0 * (k + 0.5) / n
        level = next(
            za + (zb - za) * (at - a) / (b - a)
            for (a, za), (b, zb) in pairwise(points)
            if a <= at <= b
        )
        layer = 412.40 - level
        if layer <= 0.0:
            continue
        whole += layer
        if level < SHELF_M:
            passing += layer * slot_flow(layer, 412.40 - SHELF_M, REACH_M).passing_share
    assert leak.share.least_share == pytest.approx(passing / whole, rel=1e-3)
    left = 14.68 + 3.0 * (412.61 - 412.40) / (412.61 - 411.76)
    right = 66.0 + 6.0 * (412.40 - 411.16) / (412.65 - 411.16)
    wide, gap = right - left, 54.84 - 41.712493
    in_plan = slot_flow(wide / 2, (wide - gap) / 2, REACH_M).passing_share
    assert leak.share.most_share == pytest.approx(in_plan, rel=1e-5)
    flow = halted().appraisal.water.underflow_m3_per_day
    assert leak.least_m3_per_day == pytest.approx(flow * leak.share.least_share)
    assert leak.most_m3_per_day == pytest.approx(flow * leak.share.most_share)
    assert f"L/T {REACH_M / (412.40 - 404.54):.1f} under the shelf" in leak.words


def test_without_the_reach_no_leak_is_said():
    leak = ways(Asked(SHELF_M))["step"].leak
    assert (leak.least_m3_per_day, leak.most_m3_per_day, leak.share) == (None, None, None)
    assert leak.words == ("The leak cannot be said: the reach over which the head drops not given.")


def test_where_no_wet_rock_is_left_no_leak_is_said():
    """The water stands at 412.40 m; what is left beyond 72 m has rock at 412.65 m and more."""
    site = OnSite(covered=((8.68, 72.0),), open=(), spent=None)
    leak = ways(Asked(412.9, REACH_M), site=site)["step"].leak
    assert leak.words == "The leak cannot be said: no rock under the water is left to close."


@pytest.mark.parametrize(
    ("shelf_m", "words"),
    [
        (None, "No level of a shelf is given."),
        (413.90, "A shelf at 413.90 m leaves no wall under the crest at 413.86 m."),
        (404.00, "Where nothing is covered, rock lies nowhere deeper than 404.00 m."),
    ],
)
def test_a_shelf_that_cannot_be_so_blocks_its_way(shelf_m, words):
    way = ways(Asked(shelf_m, REACH_M))["step"]
    assert (way.total, way.days, way.leak) == (None, None, None)
    assert way.reasons == (words,)
    assert not way.may_be_chosen


def test_what_is_covered_is_not_raised():
    """Law: a shelf over the rock of covered strips costs what it costs from strip 6 on."""
    high = ways(Asked(410.5, REACH_M))["step"]
    everything = ways(Asked(410.5, REACH_M), site=OnSite(covered=(), open=(), spent=Decimal(0)))[
        "step"
    ]
    assert everything.total < high.total < ways()["step"].total


def test_shift_cannot_be_said_without_a_survey_of_the_other_line():
    way = ways()["shift"]
    assert (way.total, way.to_complete, way.days, way.leak) == (None, None, None, None)
    assert not way.may_be_chosen
    assert "cost, days and leak cannot be said" in way.findings[0].what


def filling():
    """Filling strip 6 by hand: Simpson on its four pieces, at 64.00, with 5 and 2 % on it."""
    ground = {
        x: Fraction("414.2") - (Fraction(x) - 36) * Fraction("0.04") / 6 for x in ("38.68", "41.68")
    }
    ground |= {
        x: Fraction("414.16") + (Fraction(x) - 42) * Fraction("0.03") / 6
        for x in ("42", "44", "44.68")
    }
    fall = Fraction("3.57") / Fraction("2.32")
    rock = {
        "38.68": Fraction("409.08"),
        "41.68": Fraction("409.01"),
        "42": Fraction("409.01") - Fraction("0.32") * fall,
        "44": Fraction("405.44"),
        "44.68": Fraction("405.29"),
    }

    def area(depth):
        return Fraction("1.2") * depth + Fraction("1.5") * depth**2

    volume = Fraction(0)
    for a, b in pairwise(rock):
        d1, d2 = ground[a] - rock[a], ground[b] - rock[b]
        mean = area(d1) + 4 * area((d1 + d2) / 2) + area(d2)
        volume += (Fraction(b) - Fraction(a)) * mean / 6
    cent = Decimal("0.01")
    quantity = (Decimal(volume.numerator) / volume.denominator).quantize(cent, ROUND_HALF_UP)
    amount = (quantity * 64).quantize(cent, ROUND_HALF_UP)
    added = [(amount * p / 100).quantize(cent, ROUND_HALF_UP) for p in (5, 2)]
    return quantity, amount + sum(added)


def test_closing_costs_the_filling_and_what_was_spent():
    """Oracle: the trench of strip 6 by hand, 64.00 a m3, contingency and overhead on it."""
    quantity, cost = filling()
    way = ways()["close"]
    assert way.to_complete == cost
    assert way.total == cost + Decimal("250000.00")
    assert way.days == ceil(quantity / 120)
    flow = halted().appraisal.water.underflow_m3_per_day
    assert (way.leak.least_m3_per_day, way.leak.most_m3_per_day) == (flow, flow)
    assert way.may_be_chosen


def test_another_line_is_built_after_the_trench_is_filled():
    """Oracle: filling as above, and 693762.60 of example B (handbook 13) in its place."""
    other = example("B")
    way = ways(Asked(other=other))["shift"]
    assert way.to_complete == filling()[1] + Decimal("693762.60")
    assert way.total == way.to_complete + Decimal("250000.00")
    # Its own depth is judged: 6.20 m to the bottom of the key, over 6.1 m (handbook 13).
    assert blocks(way) == ["DW-03"]
    assert ways(Asked(other=other, licensed_design="SD-14"))["shift"].may_be_chosen


def test_an_open_flank_of_the_other_line_blocks_it():
    way = ways(Asked(other=example("C")))["shift"]
    assert "DW-05" in blocks(way)
    assert way.total is None


def test_days_are_those_of_what_is_not_covered():
    """Law: strips that are covered need no more days; a wall all open needs the days of all."""
    bare = OnSite(covered=(), open=((38.68, 44.68),), spent=None)
    assert ways()["go on"].days < ways(site=bare)["go on"].days
    walk = halted().appraisal
    whole = {one.item: 0.0 for one in walk.design.quantities}
    for one in walk.design.quantities:
        whole[one.item] += one.quantity
    assert ways(site=bare)["go on"].days == ceil(sum(whole[i] / rate for i, rate in RATES.items()))


def test_a_way_that_takes_longer_than_the_season_is_blocked():
    way = ways(season=Season(Progress(), days_left=20))["step"]
    assert blocks(way) == ["SG-01"]
    assert way.findings[-1].what == (
        f"It needs {way.days} days and 20 are left: too late by {way.days - 20} days."
    )
    assert way.days > 20


def test_a_season_that_cannot_be_computed_blocks_all_digging():
    season = season_on(Plan(None, None, 10), TODAY, Progress())
    told = ways(season=season)
    assert [way for way, one in told.items() if one.may_be_chosen] == ["close"]
    words = "The season cannot be computed: the days of first flow are not known."
    assert told["step"].findings[-1].what == words
    assert [(one.what, one.level) for one in told["close"].findings] == [(words, "warn")]


def test_an_open_trench_may_always_be_filled():
    """Nothing stands against it, however late it is."""
    way = ways(season=Season(Progress(), days_left=-6))["close"]
    assert way.may_be_chosen
    assert way.findings[0].remedy == "Fill it at once."
    assert way.findings[0].what == "It needs 4 days and 0 are left: too late by 10 days."


def test_days_left_are_those_before_the_early_flow_less_the_reserve():
    """Oracle: the dry-season clock by hand. An early flow on 5 June is 56 days from 10 April, less
    10 in reserve; two gangs need half the days, in whole days.
    """
    season = season_on(Plan(EarlyFlow(date(2026, 6, 5), 12), 30, 10), TODAY, Progress(), gangs=2)
    assert (season.days_left, season.why, season.gangs) == (46, "", 2)
    assert ways(season=season)["step"].days in (
        ways()["step"].days // 2,
        ways()["step"].days // 2 + 1,
    )


def test_what_was_spent_stays_not_known():
    way = ways(site=replace(SITE, spent=None))["close"]
    assert (way.total, way.to_complete) == (None, filling()[1])
    assert "What was spent so far is not known." in way.reasons
    assert ways(site=replace(SITE, spent=None))["go on"].to_complete is None


def test_a_blocked_way_cannot_be_chosen():
    options = weigh(halted(), drawn_wall(), SITE, SEASON, Asked(SHELF_M, REACH_M))
    assert require_choice(options, "close").way == "close"
    with pytest.raises(Refused) as refusal:
        require_choice(options, "go on")
    assert refusal.value.sentence() == (
        'option paper: "go on" cannot be chosen: Trench 9.8 m deep with the key. '
        "Attach the design of a licensed engineer."
    )


def test_pump_hours_nobody_planned_block_the_digging():
    walk = halted()
    bare = replace(
        walk.appraisal.pack,
        works=Works(),
        ground_water=GroundWater(),
        probes=(),
        rock_line=walk.appraisal.pack.rock_line,
    )
    dry = replace(walk, appraisal=appraise(bare, schedule=demo_rates(), on=TODAY), total=None)
    go_on, *_ = weigh(dry, drawn_wall(), SITE, SEASON, Asked(licensed_design="SD-14"))
    assert [one.field for one in go_on.findings if one.level == "block"] == ["pump_hours"]


def test_strips_that_overlap_are_no_record():
    with pytest.raises(ValueError, match="overlap"):
        OnSite(covered=((0.0, 6.0),), open=((5.0, 11.0),), spent=None)
    with pytest.raises(ValueError, match="before it begins"):
        OnSite(covered=((6.0, 6.0),), open=(), spent=None)
