"""The long profile: every levelled point where it belongs, nothing between the sites."""

from __future__ import annotations

import re

import pytest

from structures.drawing.long_profile import Reach, draw_profile

UPPER = Reach("OD-1", 0.0, ((-200.0, 99.0), (0.0, 100.0), (200.0, 101.0)))
LOWER = Reach("OD-2", 1000.0, ((-100.0, 95.0), (100.0, 96.0)))


def lines(markup):
    found = re.findall(r'<polyline class="ground" points="([^"]+)"', markup)
    return [[tuple(map(float, pair.split(","))) for pair in one.split()] for one in found]


def test_water_goes_right_and_levels_keep_their_scale():
    """Oracle: straight scale by hand: 1300 m of way and equal falls are equal heights."""
    upper, lower = lines(draw_profile([UPPER, LOWER], "Odre"))
    (x1, y1), (x2, y2), (x3, y3) = upper
    assert x1 < x2 < x3
    assert y2 - y1 == pytest.approx(y3 - y2, abs=0.02)
    assert y2 > y1
    mm_per_m = (x3 - x1) / 400.0
    assert lower[0][0] - x2 == pytest.approx((1000.0 - 100.0) * mm_per_m, abs=0.02)
    assert lower[0][1] - y1 == pytest.approx((101.0 - 96.0) * (y2 - y1), abs=0.06)


@pytest.mark.parametrize(
    ("along", "words"),
    [(True, "km downstream, along the course;"), (False, "straight from site to site;")],
)
def test_the_foot_says_how_the_way_was_measured(along, words):
    assert words in draw_profile([UPPER, LOWER], "Odre", along_course=along)


def test_sites_are_not_joined_by_a_line():
    assert len(lines(draw_profile([UPPER, LOWER], "Odre", narrow=True))) == 2


@pytest.mark.parametrize("reaches", [[], [Reach("OD-1", 0.0, ((0.0, 1.0),))]])
def test_a_profile_of_less_than_two_points_is_a_wrong_call(reaches):
    with pytest.raises(ValueError, match="two levelled points"):
        draw_profile(reaches, "Odre")
