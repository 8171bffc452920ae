"""The hydrograph: gaps, dry readings, rain and marks as they are read off the drawing."""

from __future__ import annotations

import re
import time
from datetime import date, timedelta

import pytest

from structures.drawing.hydrograph import Point, Track, draw_hydrograph
from structures.drawing.standalone import standalone

FIRST = date(2024, 1, 5)


def monthly(levels, first=FIRST, **changes):
    return tuple(
        Point(first + timedelta(days=30 * place), level, **changes)
        for place, level in enumerate(levels)
    )


def lines(markup):
    return [
        [tuple(map(float, pair.split(","))) for pair in found.split()]
        for found in re.findall(r'<polyline class="level-a" points="([^"]*)"', markup)
    ]


def test_a_long_silence_is_a_gap_and_no_line_crosses_it():
    """Oracle: the look of the drawings: no line across missing months."""
    points = (*monthly([410.0, 410.2, 410.4]), *monthly([409.0, 409.1], first=date(2024, 9, 1)))
    drawn = lines(draw_hydrograph([Track("W1", "upstream", points)]))
    assert [len(line) for line in drawn] == [3, 2]


def test_equal_rises_are_equal_heights():
    """Oracle: a linear scale: 410.0, 410.5, 411.0 lie at equal distances, higher is further up."""
    (line,) = lines(draw_hydrograph([Track("W1", "upstream", monthly([410.0, 410.5, 411.0]))]))
    (_, low), (_, middle), (_, high) = line
    assert low - middle == pytest.approx(middle - high, abs=0.011)
    assert low > middle > high


def test_dry_readings_are_open_marks_and_break_the_line():
    wet = monthly([410.0, 410.2])
    dry = Point(date(2024, 3, 5), 404.0, dry=True)
    after = monthly([409.0, 409.2], first=date(2024, 4, 5))
    markup = draw_hydrograph([Track("W1", "upstream", (*wet, dry, *after))])
    assert markup.count('class="dry"') == 1
    assert [len(line) for line in lines(markup)] == [2, 2]
    assert "open mark down: dry, water below" in markup


def test_a_pumped_reading_is_a_cross_beside_the_line():
    pumped = Point(date(2024, 2, 20), 408.0, pumped=True)
    points = sorted((*monthly([410.0, 410.2, 410.1]), pumped), key=lambda one: one.day)
    markup = draw_hydrograph([Track("W1", "upstream", tuple(points))])
    assert [len(line) for line in lines(markup)] == [3]
    assert "cross: pump running or just stopped" in markup
    assert "410.00 to 410.20 m" in markup  # in words as in the line: the well at rest


def test_a_level_that_is_doubted_and_impossible_does_not_flatten_the_drawing():
    slip = Point(date(2024, 4, 5), 12.0, doubted=True)
    track = Track("W1", "upstream", (*monthly([410.0, 410.6]), slip), (), 404.0, 415.0)
    markup = draw_hydrograph([track])
    assert 'class="obs"' not in markup
    (line,) = lines(markup)
    assert line[0][1] - line[1][1] > 10.0  # 0.6 m of a scale of about a metre on 34 mm


def test_a_month_of_rain_that_is_not_known_is_shaded_and_no_zero():
    rain = [(date(2024, 1, 1), 0.0), (date(2024, 2, 1), None), (date(2024, 3, 1), 80.0)]
    markup = draw_hydrograph([Track("W1", "upstream", monthly([410.0, 410.1, 410.2]))], rain=rain)
    assert markup.count('class="rain"') == 1
    assert markup.count('class="gap-wash"') == 1


def test_completion_and_a_changed_mark_are_named():
    track = Track("W1", "upstream", monthly([410.0] * 12), ((date(2024, 6, 1), 0.6),))
    markup = draw_hydrograph([track], completed=date(2024, 5, 20))
    assert "wall completed 20 May 2024" in markup
    assert "mark +0.60 m" in markup


def test_wells_stand_below_one_another_on_one_axis_of_time():
    points = monthly([410.0, 410.3])
    tracks = [Track("W1", "upstream", points), Track("W2", "downstream", points)]
    first, second = lines(draw_hydrograph(tracks))
    assert [x for x, _ in first] == [x for x, _ in second]
    assert second[0][1] > first[0][1] + 30.0


def test_words_of_a_name_are_escaped_and_a_file_of_it_stands_alone():
    markup = draw_hydrograph([Track("W<1>", "upstream", monthly([410.0, 410.1]))])
    assert "W<1>" not in markup
    assert standalone(markup).startswith("<?xml")


def test_a_hydrograph_of_nothing_is_refused():
    with pytest.raises(ValueError, match="shows a well"):
        draw_hydrograph([])
    assert "not read in this time" in draw_hydrograph([Track("W1", "upstream", ())])


def test_ten_wells_of_ten_years_are_drawn_quickly():
    """Oracle: 10 years and 10 wells in under 100 ms of the server; fortnightly readings."""
    tracks = [
        Track(
            f"W{place}",
            "upstream",
            tuple(
                Point(date(2015, 1, 1) + timedelta(days=15 * at), 410.0 + (at % 24) * 0.1)
                for at in range(243)
            ),
        )
        for place in range(10)
    ]
    rain = [(date(2015 + at // 12, at % 12 + 1, 1), float(at % 50)) for at in range(120)]
    took = []
    for _ in range(5):
        begun = time.perf_counter()
        draw_hydrograph(tracks, rain=rain, completed=date(2020, 5, 1))
        took.append(time.perf_counter() - begun)
    assert min(took) < 0.1
