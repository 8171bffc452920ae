"""The cutoff: lengths, areas, heights and depths without a step size."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.pack import GroundPoint, Toes, WallSettings
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from tests.structures.wall.exact import exact_wall
from tests.structures.wall.examples import cases, example, expected, printed, rock_bar

SUMS = ("length_m", "face_above_rock_m2", "face_area_m2", "greatest_height_m", "greatest_depth_m")


def cutoff_of(case):
    return cut(make_section(*case.parts))


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_worked_examples(name):
    """Oracle: handbook 13, CHECK VALUES 5."""
    cutoff, wanted = cutoff_of(example(name)), expected(name)
    for key in (*SUMS, "greatest_depth_to_key_m"):
        assert getattr(cutoff, key)[0] == printed(wanted[key]), key


def test_face_of_example_a_by_hand():
    """Oracle: check value 5.a: 20 m of bed 3.85 m high, then 10 m and 20/3 m of mean heights."""
    by_hand = 20 * 3.85 + 2 * (10 * 3.15 + 20 / 3 * 1.15)
    assert cutoff_of(example("A")).face_area_m2[0] == pytest.approx(by_hand, rel=1e-12)


def test_example_a_with_rock_half_a_metre_lower():
    """Oracle: check value 5.e."""
    case = example("A")
    cutoff = cutoff_of(case.with_rock(z - 0.5 for z in case.rock_z))
    assert cutoff.face_area_m2[0] == printed(expected("5.e")["face_area_m2"])


def test_a_rock_bar_interrupts_the_wall():
    """Oracle: check value 5.g."""
    cutoff = cutoff_of(rock_bar())
    assert cutoff.length_m[0] == printed(expected("5.g")["length_m"])
    assert cutoff.face_area_m2[0] == printed(expected("5.g")["face_area_m2"])


def test_rock_on_the_crest_all_along_leaves_no_wall():
    """Oracle: handbook 5.4, a wall exists where rock is below the top, strictly."""
    ground = (GroundPoint(0, 104), GroundPoint(20, 249.7), GroundPoint(40, 249.7))
    cutoff = cut(
        make_section(ground, Toes(20, 40), [20, 27, 40], [249.4, 249.4, 249.4], WallSettings())
    )
    for key in (*SUMS, "greatest_depth_to_key_m"):
        assert getattr(cutoff, key)[0] == 0.0, key
    assert not cutoff.stands.any()


@given(cases())
def test_agrees_with_exact_fractions(case):
    """Oracle: the slow route in exact fractions (tests/structures/wall/exact.py)."""
    cutoff, exact = cutoff_of(case), exact_wall(case)
    for key in SUMS:
        assert getattr(cutoff, key)[0] == pytest.approx(
            float(getattr(exact, key)), rel=1e-9, abs=1e-7
        ), key


@given(cases(), st.lists(st.integers(0, 300), min_size=9, max_size=9))
def test_lower_rock_never_means_less_wall(case, drops):
    """Law: length, face and depth grow or stay when the rock line is lowered anywhere."""
    lower = case.with_rock(z - drop / 100 for z, drop in zip(case.rock_z, drops, strict=False))
    before, after = cutoff_of(case), cutoff_of(lower)
    for key in SUMS:
        assert getattr(after, key)[0] >= getattr(before, key)[0] - 1e-7, key


@given(cases())
def test_a_mirrored_section_has_the_same_wall(case):
    """Law (check value 5.f)."""
    cutoff, turned = cutoff_of(case), cutoff_of(case.mirrored())
    for key in SUMS:
        assert getattr(turned, key)[0] == pytest.approx(
            getattr(cutoff, key)[0], rel=1e-9, abs=1e-7
        ), key


@given(cases())
def test_points_on_the_lines_change_nothing(case):
    """Law (handbook 5.9): the result depends on no step, so points on the lines are idle."""
    ground_x = np.array([point.offset_m for point in case.ground])
    ground_z = np.array([point.level_m for point in case.ground])
    x = np.sort(np.append(ground_x, (ground_x[:-1] + ground_x[1:]) / 2))
    rock_x = np.array(case.rock_x)
    more = np.unique(np.append(rock_x, (rock_x[:-1] * 2 + rock_x[1:]) / 3))
    denser = replace(
        case,
        ground=tuple(GroundPoint(a, np.interp(a, ground_x, ground_z)) for a in x),
        rock_x=tuple(more),
        rock_z=tuple(np.interp(more, rock_x, case.rock_z)),
    )
    before, after = cutoff_of(case), cutoff_of(denser)
    for key in SUMS:
        assert getattr(after, key)[0] == pytest.approx(
            getattr(before, key)[0], rel=1e-9, abs=1e-6
        ), key


@given(cases(), st.integers(0, 2**32 - 1))
def test_draws_equal_the_single_lines(case, seed):
    """Law: one path, so each row of many draws is that line alone."""
    rng = np.random.default_rng(seed)
    lines = np.array(case.rock_z) + rng.normal(0.0, 2.0, size=(5, len(case.rock_z)))
    together = cut(make_section(case.ground, case.toes, case.rock_x, lines, case.wall))
    for i, line in enumerate(lines):
        alone = cutoff_of(case.with_rock(line))
        for key in SUMS:
            assert getattr(together, key)[i] == pytest.approx(
                getattr(alone, key)[0], rel=1e-13, abs=0
            ), key


def test_lowest_rock_under_the_wall_of_example_b():
    """Oracle: table of example B, 243.90 at x = 33."""
    assert cutoff_of(example("B")).lowest_rock_m[0] == pytest.approx(243.90)


def test_what_was_cut_cannot_be_changed():
    cutoff = cutoff_of(example("A"))
    with pytest.raises(ValueError, match="read-only"):
        cutoff.left.rock_m[0, 0] = 0.0
