"""The cost with the rock as found, against sanction and approval."""

from dataclasses import replace
from datetime import date
from decimal import Decimal

import pytest

from costing.forecast import Books, Drawn, Surprise, forecast
from costing.price.sanctioned import Sums
from structures.ground.found import FoundLevel
from structures.ground.found_lines import DrawnRange
from structures.intake.pack import Works
from tests.costing.demo_works import book, by_hand, demo_rates, found, ranges, sums, survey
from tests.costing.documents.appraisals import ON, estimated, pack, rates
from tests.structures.wall.exact import exact_wall
from tests.structures.wall.examples import Case

TODAY = date(2026, 4, 10)
SANCTIONED = Decimal("693762.60")  # example B, handbook 13


def shifted(by_m, strip=1):
    """Rock found at every point of example B, all of it so much higher than drawn."""
    return [FoundLevel(one.offset_m, one.level_m + by_m, strip) for one in pack("B").rock_line]


def of_b(by_m, **changes):
    books = {"schedule": rates(), "sums": Sums(SANCTIONED, SANCTIONED)} | changes
    return forecast(Drawn(pack("B")), shifted(by_m), Books(**books), on=ON)


@pytest.mark.parametrize(
    ("by_m", "total"),
    [(-0.640776, "897602.41"), (0.0, "693762.60"), (0.640776, "524177.63")],
)
def test_rock_found_elsewhere_moves_the_total(by_m, total):
    """Oracle: check value 8.h, example B with the whole rock line shifted."""
    assert of_b(by_m).total == Decimal(total)


def test_the_excess_and_what_it_asks_for():
    """Oracle: 897602.41 - 693762.60 = 203839.81, which is 29.38 % of 693762.60."""
    found_deep = of_b(-0.640776)
    assert found_deep.over_technical_percent == Decimal("29.38")
    assert [(one.rule, one.level, one.what, one.remedy) for one in found_deep.findings] == [
        (
            "ES-03",
            "block",
            "New cost is 29.38 % (203839.81) over technical sanction.",
            "Revised technical sanction needed before going on.",
        ),
        (
            "ES-04",
            "block",
            "New cost is 29.38 % (203839.81) over administrative approval.",
            "Revised approval needed.",
        ),
    ]
    assert found_deep.asks_for_paper
    assert of_b(0.640776).over_technical_percent == Decimal("-24.44")
    assert not of_b(0.0).asks_for_paper


def test_limits_are_passed_only_by_more():
    """Oracle: handbook 8.6 and check value 8.g, strictly greater. The total is 693762.60; sums
    below it by exactly 5 % and 10 % of themselves are not exceeded, by a hundredth less they are.
    """
    whole = SANCTIONED * 20
    five = Decimal("660726.29")  # 1.05 x 660726.29 = 693762.6045, above the total
    ten = Decimal("630693.27")  # 1.10 x 630693.27 = 693762.597, below it
    assert whole == Decimal("13875252.00")
    assert five * Decimal("1.05") > SANCTIONED > ten * Decimal("1.10")
    rules = [one.rule for one in of_b(0.0, sums=Sums(five, ten)).findings]
    assert rules == ["ES-04"]
    exact = replace(Sums(Decimal("660726.28"), ten), administrative_percent=Decimal(11))
    assert [one.rule for one in of_b(0.0, sums=exact).findings] == ["ES-03"]


def test_without_sums_nothing_is_compared_and_it_is_said():
    found_deep = of_b(-0.640776, sums=Sums())
    assert found_deep.findings == ()
    assert found_deep.over_technical_percent is None
    assert found_deep.reasons == (
        "No range was recorded with the drawn line: there is no P10 and no P90.",
        "No technical sanction to compare with.",
        "No administrative approval to compare with.",
        "Rock was found and nothing stands in the measurement book: what is done is not known.",
    )


def test_an_open_flank_leaves_the_total_not_known():
    """Oracle: handbook 5.5; rock found to the right end lies below the bed at 249.70 m."""
    levels = [FoundLevel(60.0, 249.0, 9), FoundLevel(68.0, 249.5, 9)]
    found_open = forecast(
        Drawn(pack("B")), levels, Books(rates(), Sums(SANCTIONED, SANCTIONED)), on=ON
    )
    assert (found_open.total, found_open.to_complete) == (None, None)
    assert found_open.findings == ()
    assert found_open.reasons[0].startswith("The total is not known. OPEN right flank: at 68.00 m")


def test_lines_that_nobody_can_measure_leave_the_total_not_known():
    survey_b = replace(pack("B"), works=Works())
    found_b = forecast(Drawn(survey_b), shifted(0.0), Books(rates()), on=ON)
    assert found_b.total is None
    assert "The estimate is incomplete: dewatering" in found_b.reasons[0]


def test_without_a_settled_line_levels_found_narrow_the_estimate():
    """Law: more rock seen, less range; and the price is that of the survey with these pits."""
    drawn = Drawn(estimated().pack)
    before = forecast(drawn, (), Books(rates()), on=ON)
    rock = before.appraisal.rock
    line = dict(zip(rock.offset_m, rock.level_m, strict=True))
    seen = [FoundLevel(x, float(line[x]), 3) for x in (33.0, 36.0, 40.0)]
    after = forecast(drawn, seen, Books(rates()), on=ON)
    assert before.total == estimated().estimate.total
    assert after.spread.p90 - after.spread.p10 < before.spread.p90 - before.spread.p10
    assert float(after.total) == pytest.approx(float(before.total), rel=0.01)


def test_rock_runs_deeper_in_the_demo():
    """Oracle: strip 6 of OD-03, found at 405.29 where 408.61 to 409.21 was drawn. The new line is
    written out from the tables: the drawn points outside strips 1 to 6, the levels of H2, and the
    feet of the three long rods of the day after (414.17 - 8.73, 414.19 - 9.65, 414.19 - 8.85). The
    wall of that line in exact fractions, priced by the demo's conventions, costs 1079062.22:
    240341.11 or 28.66 % over 838721.11, and 239062.22 or 28.46 % over 840000.00.
    """
    line = (
        *((0.0, 416.59), (6.0, 414.84)),
        *((8.68, 414.23), (11.68, 413.42), (14.68, 412.61), (17.68, 411.76), (20.68, 410.96)),
        *((23.68, 410.36), (26.68, 409.83), (29.68, 409.53), (32.68, 409.28), (35.68, 409.18)),
        *((38.68, 409.08), (41.68, 409.01), (44.0, 405.44), (44.68, 405.29), (48.0, 404.54)),
        *((52.0, 405.34), (54.0, 408.82), (60.0, 409.82), (66.0, 411.16), (72.0, 412.65)),
        *((78.0, 413.9), (84.0, 415.37), (88.0, 416.7)),
    )
    drawn = survey("OD-03")
    wall = exact_wall(
        Case(
            ground=drawn.ground,
            toes=drawn.toes,
            rock_x=[x for x, _ in line],
            rock_z=[z for _, z in line],
            wall=drawn.wall,
        )
    )
    hand = by_hand(wall, drawn.wall, hours=288)
    assert hand == Decimal("1079062.22")

    told = forecast(
        Drawn(drawn, ranges("OD-03")),
        found("OD-03"),
        Books(demo_rates(), sums("OD-03")),
        on=TODAY,
    )
    assert told.total == hand
    assert told.over_technical_percent == Decimal("28.66")
    assert told.over_administrative_percent == Decimal("28.46")
    assert [one.rule for one in told.findings] == ["ES-03", "ES-04"]
    assert "28.66 % (240341.11)" in told.findings[0].what
    assert "28.46 % (239062.22)" in told.findings[1].what
    assert told.surprises == (Surprise(6, 44.68, 405.29, 408.61, 409.21),)
    assert [one.offset_m for one in told.as_found.lowered] == [44.0, 48.0, 52.0]
    # At the three rods rock lies there or deeper, so half of the draws cost more than the total.
    assert told.total < told.spread.p50 < told.spread.p90
    assert (told.measured, told.to_complete) == (None, None)
    assert "did not hold at 1 of 13 levels found, worst at 44.68 m" in " ".join(told.reasons)


def test_the_drawn_wall_of_the_demo_costs_what_was_sanctioned():
    """Oracle: the technical sanction of OD-03 was given on the exact total, 838721.11."""
    told = forecast(
        Drawn(survey("OD-03"), ranges("OD-03")),
        (),
        Books(demo_rates(), sums("OD-03")),
        on=TODAY,
    )
    # The three long rods of 2026-03-20 are in the survey now and lower the drawn line.
    assert [one.offset_m for one in told.as_found.lowered] == [44.0, 48.0, 52.0]
    early = replace(survey("OD-03"), probes=survey("OD-03").probes[:13])
    told = forecast(Drawn(early), (), Books(demo_rates(), sums("OD-03")), on=TODAY)
    assert told.total == Decimal("838721.11")
    assert told.over_technical_percent == Decimal("0.00")
    assert told.over_administrative_percent == Decimal("-0.15")


def test_what_is_left_to_pay_of_a_wall_that_was_measured():
    """Oracle: TA-05 measured 470577.72 (the sum of its bill lines); the rest is contingency,
    overhead, and what the forecast has beyond the measured quantities.
    """
    books = Books(demo_rates(), sums("TA-05"), tuple(book("TA-05").values()))
    told = forecast(Drawn(survey("TA-05"), ranges("TA-05")), found("TA-05"), books, on=TODAY)
    assert told.measured.amount == Decimal("470577.72")
    assert told.to_complete == told.total - Decimal("470577.72")
    # The measured quantities are those of the rock found: lines without percentages agree to 0.5 %.
    assert float(told.appraisal.estimate.subtotal) == pytest.approx(470577.72, rel=0.005)
    assert told.surprises == ()
    assert told.findings == ()


def test_a_recorded_range_gives_percentiles_around_the_total():
    """Law: without anything found or lowered the total lies between P10 and P90, and a wider range
    is a wider spread.
    """
    spreads = []
    for half in (0.2, 0.6):
        wide = tuple(
            DrawnRange(one.offset_m, one.level_m - half, one.level_m, one.level_m + half)
            for one in pack("B").rock_line
        )
        told = forecast(Drawn(pack("B"), wide), (), Books(demo_rates()), on=ON)
        assert told.spread.p10 < told.total < told.spread.p90
        spreads.append(told.spread.p90 - told.spread.p10)
    assert spreads[0] < spreads[1]


def test_a_total_outside_its_percentiles_is_told():
    """Law: the demo's OD-03 with all of its range under the line: where the line was lowered to the
    foot of a test every draw lies deeper, so each costs more than the total.
    """
    drawn = tuple(
        DrawnRange(one.offset_m, one.low_m, one.likely_m, one.likely_m) for one in ranges("OD-03")
    )
    for given, outside in ((drawn, True), (ranges("OD-03"), False)):
        told = forecast(Drawn(survey("OD-03"), given), found("OD-03"), Books(demo_rates()), on=ON)
        within = told.spread.p10 <= told.total <= told.spread.p90
        said = any(one.startswith("The exact total lies outside") for one in told.reasons)
        assert said is not within
        assert not (outside and within)


def test_draws_that_dig_lifts_without_a_rate_have_no_percentiles_and_say_why():
    """Oracle: the examples' schedule prices lifts to 7.5 m; some draws of a wide range go below."""
    wide = tuple(
        DrawnRange(one.offset_m, one.level_m - 4.0, one.level_m, one.level_m)
        for one in pack("B").rock_line
    )
    told = forecast(Drawn(pack("B"), wide), (), Books(rates()), on=ON)
    assert told.total == SANCTIONED
    assert told.spread.p90 is None
    assert any(one.startswith("P10 to P90 are not known: of 2000 draws") for one in told.reasons)
