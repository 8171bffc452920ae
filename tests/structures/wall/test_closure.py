"""Ends of the wall: tied into rock, or open and said so."""

from dataclasses import replace

import pytest
from hypothesis import given

from structures.intake.pack import GroundPoint, Toes, WallSettings
from structures.wall.closure import find_ends
from structures.wall.section import make_section
from tests.structures.wall.exact import Line, exact_ends
from tests.structures.wall.examples import cases, example, expected, printed

FLAT = (GroundPoint(0, 104), GroundPoint(20, 100), GroundPoint(40, 100), GroundPoint(60, 104))


def ends_of(case):
    return find_ends(make_section(*case.parts))


def flat(rock_x, rock_z):
    return find_ends(make_section(FLAT, Toes(20, 40), rock_x, rock_z, WallSettings()))


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_ends_of_the_worked_examples(name):
    """Oracle: handbook 13; check values 5.b and 5.d."""
    ends, wanted = ends_of(example(name)), expected(name)
    assert ends.left_m[0] == printed(wanted["left_end_m"])
    assert ends.right_m[0] == printed(wanted["right_end_m"])
    assert bool(ends.closed_left[0]) is wanted["closed_left"]
    assert bool(ends.closed_right[0]) is wanted["closed_right"]


def test_ends_of_example_a_with_rock_half_a_metre_lower():
    """Oracle: check value 5.e."""
    case = example("A")
    ends = ends_of(case.with_rock(z - 0.5 for z in case.rock_z))
    assert ends.left_m[0] == printed(expected("5.e")["left_end_m"])
    assert ends.right_m[0] == printed(expected("5.e")["right_end_m"])


def test_rock_as_high_as_the_bed_at_a_toe_ends_the_wall_there():
    """Oracle: handbook 5.5; the left toe lies on rock at the bed level exactly."""
    ends = flat([0, 20, 30, 60], [101, 100, 95, 104])
    assert (ends.left_m[0], ends.closed_left[0]) == (20.0, True)
    # Right: from 95 at 30 m rock rises 0.3 a metre, so 100 is reached at 30 + 5 / 0.3.
    assert ends.right_m[0] == pytest.approx(30 + 5 / 0.3)
    assert ends.closed_right[0]


def test_the_first_crossing_outward_counts():
    """Oracle: hand; rock reaches 100 at x = 45, falls again and comes back."""
    ends = flat([10, 30, 40, 50, 55, 60], [100, 95, 99, 101, 96, 103])
    assert ends.right_m[0] == pytest.approx(45.0)


def test_rock_that_reaches_the_closing_level_at_the_last_point_closes():
    ends = flat([0, 30, 60], [100.0, 95, 100.0])
    assert (ends.left_m[0], ends.right_m[0]) == (0.0, 60.0)
    assert ends.closed_left[0]
    assert ends.closed_right[0]


def test_a_rock_line_that_ends_between_the_toes_leaves_that_flank_open():
    """Oracle: handbook 5.5, nothing is extrapolated."""
    ends = flat([0, 20, 35], [104, 96, 96])
    assert (ends.right_m[0], bool(ends.closed_right[0])) == (35.0, False)
    assert (ends.left_m[0], bool(ends.closed_left[0])) == (10.0, True)


def test_a_rock_line_beside_the_bed_closes_nothing():
    ends = flat([45, 60], [99, 104])
    assert (ends.left_m[0], ends.right_m[0]) == (45.0, 60.0)
    assert not ends.closed_left[0]
    assert not ends.closed_right[0]


@given(cases())
def test_ends_agree_with_exact_fractions(case):
    """Oracle: walk outward in exact fractions."""
    ends = ends_of(case)
    left, closed_left, right, closed_right = exact_ends(Line(case))
    assert ends.left_m[0] == pytest.approx(float(left), abs=1e-7)
    assert ends.right_m[0] == pytest.approx(float(right), abs=1e-7)
    assert bool(ends.closed_left[0]) is closed_left
    assert bool(ends.closed_right[0]) is closed_right
    assert ends.line_m[0] == pytest.approx(float(right - left), abs=1e-7)


@given(cases())
def test_a_mirrored_section_has_mirrored_ends(case):
    """Law (check value 5.f): left becomes right."""
    far = case.ground[-1].offset_m
    ends, turned = ends_of(case), ends_of(case.mirrored())
    assert turned.left_m[0] == pytest.approx(far - ends.right_m[0], abs=1e-7)
    assert turned.closed_left[0] == ends.closed_right[0]
    assert turned.closed_right[0] == ends.closed_left[0]


def test_every_draw_has_its_own_ends():
    """Oracle: the same lines one at a time."""
    case = example("A")
    lines = [[z - drop for z in case.rock_z] for drop in (0.0, 0.5, 3.9, 9.0)]
    together = ends_of(replace(case, rock_z=tuple(map(tuple, lines))))
    for i, line in enumerate(lines):
        alone = ends_of(case.with_rock(line))
        assert together.left_m[i] == alone.left_m[0]
        assert together.closed_right[i] == alone.closed_right[0]
    assert together.closed_left.tolist() == [True, True, True, False]
