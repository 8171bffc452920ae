"""Saturated area of a section and its sum over levels."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.intake.pack import GroundPoint
from structures.water.section_area import Bands, surveyed_section
from tests.structures.wall.examples import example
from tests.structures.water.oracle import bands, steps, vee

LEVELS = st.integers(-100, 2100).map(lambda level: level / 100.0)


def trapezium():
    """Rock 0 at offsets 0 to 4, ground rising from 2 to 6."""
    return Bands([4.0], [0.0], [0.0], [2.0], [6.0])


@pytest.mark.parametrize(
    ("level_m", "area_m2"),
    [(-1.0, 0.0), (0.0, 0.0), (1.0, 4.0), (2.0, 8.0), (4.0, 14.0), (6.0, 16.0), (9.0, 16.0)],
)
def test_area_is_clipped_by_the_ground(level_m, area_m2):
    """Oracle: hand sums; at level 4 the strip 4 x 4 less the triangle 2 x 2 / 2 over the ground."""
    assert trapezium().area_below_m2(level_m) == pytest.approx(area_m2)


def test_area_of_a_vee_below_a_level():
    """Oracle: area of a triangle, side slope times depth squared (handbook 9.u)."""
    assert vee(2.5, 4.0).area_below_m2(3.0) == pytest.approx(2.5 * 9.0)


def test_sum_of_a_vee_over_levels():
    """Oracle: integral of 2.5 z^2 from 1 to 4 is 2.5 (64 - 1)/3."""
    assert vee(2.5, 4.0).area_summed_m3(1.0, 4.0) == pytest.approx(52.5)


@settings(max_examples=40, deadline=None)
@given(bands(), LEVELS)
def test_area_is_the_sum_of_thin_strips(band, level_m):
    """Oracle: midpoint rule on 20 001 steps a piece, error under 20 m x 10 m/steps^2 a crossing."""
    lower, upper, width = steps(band)
    strips = np.clip(np.minimum(level_m, upper) - lower, 0.0, None) * width
    assert band.area_below_m2(level_m) == pytest.approx(strips.sum(), abs=1e-5)


@settings(max_examples=40, deadline=None)
@given(bands(), LEVELS, LEVELS)
def test_sum_over_levels_is_that_of_areas(band, first_m, second_m):
    """Oracle: Simpson's rule is exact on each piece between the levels of the corners."""
    low, high = sorted((first_m, second_m))
    corners = np.concatenate(
        [band.lower_left_m, band.lower_right_m, band.upper_left_m, band.upper_right_m]
    )
    levels = np.unique([low, *corners[(corners > low) & (corners < high)], high])
    areas = [band.area_below_m2(level) for level in levels]
    middle = [band.area_below_m2(level) for level in 0.5 * (levels[:-1] + levels[1:])]
    simpson = sum(
        (b - a) * (p + 4.0 * m + q) / 6.0
        for a, b, p, m, q in zip(
            levels[:-1], levels[1:], areas[:-1], middle, areas[1:], strict=True
        )
    )
    assert band.area_summed_m3(low, high) == pytest.approx(simpson, abs=1e-8)


@given(bands(), LEVELS, LEVELS)
def test_more_water_never_wets_less(band, first_m, second_m):
    low, high = sorted((first_m, second_m))
    assert band.area_below_m2(low) <= band.area_below_m2(high) + 1e-12


def test_section_reaches_as_far_as_both_lines():
    """Oracle: hand sum; rock known from 2 to 8 at level 0, ground at 1 from 0 to 5, then to 4 at 8."""
    ground = (GroundPoint(0.0, 1.0), GroundPoint(5.0, 1.0), GroundPoint(8.0, 4.0))
    section = surveyed_section(ground, [2.0, 8.0], [0.0, 0.0])
    assert section.width_m.tolist() == [3.0, 3.0]
    assert section.area_below_m2(10.0) == pytest.approx(3.0 + 7.5)


def test_section_of_example_b():
    """Oracle: thin strips of 1 mm through the survey of handbook 13, water at 249.35 (6.c)."""
    case = example("B")
    x = np.arange(0.0005, 68.0, 0.001)
    ground = np.interp(x, [p.offset_m for p in case.ground], [p.level_m for p in case.ground])
    rock = np.interp(x, case.rock_x, case.rock_z)
    wanted = np.clip(np.minimum(249.35, ground) - rock, 0.0, None).sum() * 0.001
    section = surveyed_section(case.ground, case.rock_x, case.rock_z)
    assert section.area_below_m2(249.35) == pytest.approx(wanted, abs=1e-4)


@pytest.mark.parametrize(
    ("rock", "words"),
    [
        (([9.0, 12.0], [0.0, 0.0]), "share no stretch"),
        (([0.0, 8.0], [0.0, 5.0]), "stands above"),
        (([0.0], [0.0]), "two points"),
    ],
)
def test_lines_that_make_no_section(rock, words):
    ground = (GroundPoint(0.0, 1.0), GroundPoint(8.0, 4.0))
    with pytest.raises(ValueError, match=words):
        surveyed_section(ground, *rock)


def test_pieces_cannot_be_wrong():
    with pytest.raises(ValueError, match="negative width"):
        Bands([-1.0], [0.0], [0.0], [1.0], [1.0])
    with pytest.raises(ValueError, match="pieces"):
        Bands([1.0], [0.0, 0.0], [0.0], [1.0], [1.0])
