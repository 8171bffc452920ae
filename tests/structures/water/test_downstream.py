"""Screening of what goes missing downstream."""

import pytest

from structures.water.downstream import Point, screen_downstream
from tests.structures.water.oracle import WATER, printed

CASE = WATER["9.v"]
POINTS = tuple(Point(f"at {area} km2", area) for area, _ in CASE["share"])


def test_shares_thin_out():
    """Oracle: check value 9.v; with the limit of 20 % (handbook 12) only the last is under it."""
    found = screen_downstream(CASE["dam_km2"], POINTS)
    assert [one.point for one in found.shares] == list(POINTS)
    for one, (_, share) in zip(found.shares, CASE["share"], strict=True):
        assert one.share == printed(share)
    assert [one.under_limit for one in found.shares] == [False, False, False, True]
    assert found.first_under == POINTS[3]
    assert found.limit_percent == 20.0


def test_a_part_that_is_held_cuts_off_less():
    """Oracle: handbook 9.19 with f = 0.5; 0.5 x 12/40 is 15 %."""
    found = screen_downstream(12.0, POINTS, held_share=0.5)
    assert found.shares[2].share == pytest.approx(0.15)
    assert found.first_under == POINTS[2]


def test_at_the_limit_is_not_under_it():
    """Oracle: handbook 9.19, under the limit; 12/60 is 20 % exactly."""
    found = screen_downstream(12.0, (Point("ford", 60.0),))
    assert found.first_under is None


def test_nobody_below_is_an_empty_list():
    assert screen_downstream(12.0, ()).shares == ()


@pytest.mark.parametrize(
    ("points", "options", "words"),
    [
        ((Point("weir", 11.9),), {}, "weir has less catchment"),
        ((Point("weir", 40.0), Point("mill", 30.0)), {}, "mill has less catchment"),
        (POINTS, {"held_share": 1.1}, "held share"),
        (POINTS, {"limit_percent": 31.0}, "not accepted"),
    ],
)
def test_points_out_of_order(points, options, words):
    with pytest.raises(ValueError, match=words):
        screen_downstream(12.0, points, **options)
