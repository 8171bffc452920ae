"""Rock bars in the bed and low ground beside it."""

from dataclasses import replace

import pytest
from hypothesis import given

from structures.intake.pack import GroundPoint, Toes, WallSettings
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from structures.wall.stretch import LowGround, Stretch, find_bars, find_low_ground
from tests.structures.wall.examples import cases, example, rock_bar


def cutoff_of(case):
    return cut(make_section(*case.parts))


def low_ground_of(levels, rock):
    x = [0, 10, 20, 30, 40, 50, 60]
    ground = tuple(GroundPoint(a, z) for a, z in zip(x, levels, strict=True))
    return find_low_ground(cut(make_section(ground, Toes(20, 40), *rock, WallSettings())))


def test_the_bar_of_the_worked_example():
    """Oracle: hand; rock rises 3.9 m in 4 m, so it passes the crest 99.7 at 3.7/3.9 of them."""
    (bar,) = find_bars(cutoff_of(rock_bar()))
    assert bar.from_m == pytest.approx(36 + 4 * 3.7 / 3.9)
    assert bar.to_m == pytest.approx(44 - 4 * 3.7 / 3.9)


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_the_worked_examples_have_neither(name):
    """Oracle: tables of handbook 13; rock under the crest in the bed, banks over the bed level."""
    cutoff = cutoff_of(example(name))
    assert find_bars(cutoff) == ()
    assert find_low_ground(cutoff) == ()


def test_rock_that_only_touches_the_crest_is_no_bar():
    case = rock_bar()
    touching = [99.7 if z == 99.9 else z for z in case.rock_z]
    assert find_bars(cutoff_of(case.with_rock(touching))) == ()


def test_rock_over_the_crest_from_toe_to_toe_is_one_bar():
    case = example("A")
    assert find_bars(cutoff_of(case.with_rock([104, 102, 99.8, 99.8, 102, 104]))) == (
        Stretch(30.0, 50.0),
    )


@given(cases())
def test_bars_and_wall_fill_the_bed(case):
    """Law: between the ends and the toes the wall stands or a bar does."""
    cutoff = cutoff_of(case)
    bed_m = min(cutoff.ends.right_m[0], case.toes.right_m) - max(
        cutoff.ends.left_m[0], case.toes.left_m
    )
    stands_m = cutoff.width_m[0][cutoff.section.between_toes].sum()
    bars_m = sum(bar.to_m - bar.from_m for bar in find_bars(cutoff))
    assert stands_m + bars_m == pytest.approx(max(0.0, bed_m), abs=1e-4)


def test_low_ground_is_cut_at_the_closing_level():
    """Oracle: hand; from 100 at the toe down to 98 and up to 104 at 60 m, bed level 100."""
    assert low_ground_of([104, 102, 100, 100, 100, 98, 104], ([0, 60], [90, 95])) == (
        LowGround("right", 40.0, pytest.approx(50 + 10 * 2 / 6)),
    )


def test_low_ground_on_the_left_in_two_stretches():
    """Oracle: hand; 99 at 0 and at 20 m lie under the bed level 99.5, 100.5 at 10 m stands between.

    The ground passes 99.5 at 1/1.5 of each slope. The right toe's side is high.
    """
    found = low_ground_of([99, 101, 99, 99.5, 100, 102, 104], ([0, 60], [90, 95]))
    assert found == ()  # the bed itself holds 99: the bed level is the lowest ground
    found = low_ground_of([98, 101, 99, 99.5, 100, 102, 104], ([0, 60], [90, 95]))
    assert found == (LowGround("left", 0.0, pytest.approx(10 / 3)),)


def test_low_ground_behind_a_closed_end_does_not_count():
    """Oracle: handbook 5.5; rock reaches the bed level 100 at 45 m, the dip lies beyond."""
    levels = [104, 102, 100, 100, 100, 101, 98]
    assert low_ground_of(levels, ([0, 40, 50, 60], [100, 95, 105, 90])) == ()
    assert low_ground_of(levels, ([0, 40, 50, 60], [100, 95, 90, 90]))[0].side == "right"


def test_many_draws_have_no_single_stretch():
    case = example("A")
    cutoff = cutoff_of(replace(case, rock_z=(case.rock_z, case.rock_z)))
    for find in (find_bars, find_low_ground):
        with pytest.raises(ValueError, match="2 draws"):
            find(cutoff)
