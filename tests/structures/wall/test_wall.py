"""The wall in plain numbers and the cautions beside it."""

from dataclasses import replace

import pytest

from structures.intake.pack import GroundPoint, SlopeStation, Toes, WallSettings, Works
from structures.intake.practice import Practice
from structures.wall.wall import design_wall, wall_cautions
from tests.structures.wall.examples import example, expected, printed, rock_bar

PRINTED = (
    "bed_level_m",
    "crest_level_m",
    "closing_level_m",
    "left_end_m",
    "right_end_m",
    "length_m",
    "greatest_height_m",
    "greatest_depth_m",
    "greatest_depth_to_key_m",
    "face_area_m2",
    "face_above_rock_m2",
)


def wall_of(case):
    return design_wall(*case.parts)[0]


def codes(case, works=None):
    return [(one.code, one.level) for one in cautions(case, works)]


def cautions(case, works=None):
    return wall_cautions(wall_of(case), case.wall, works or Works())


def sloped(case, *slopes):
    stations = tuple(SlopeStation(20.0 * i, slope) for i, slope in enumerate(slopes))
    return replace(case, wall=replace(case.wall, side_slope=stations))


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_worked_examples(name):
    """Oracle: handbook 13."""
    wall, wanted = wall_of(example(name)), expected(name)
    for key in PRINTED:
        assert getattr(wall, key) == printed(wanted[key]), key
    assert (wall.closed_left, wall.closed_right) == (wanted["closed_left"], wanted["closed_right"])
    assert wall.closed is (name != "C")
    assert wall.bars == wall.low_ground == ()


def test_rock_at_the_ends():
    """Oracle: closed ends stand at the closing level; table of example C gives 73.70 at 45 m."""
    wall = wall_of(example("C"))
    assert wall.rock_at_left_m == pytest.approx(wall.closing_level_m)
    assert wall.rock_at_right_m == 73.70


def test_steepest_slope_along_the_wall():
    """Oracle: hand; in C the slope is back at 1.5 where the wall ends, in A the bank is left out."""
    assert wall_of(example("C")).steepest_slope == 1.5
    case = example("A")  # the wall stands from 13.33 to 66.67 m
    steep_bank = replace(
        case.wall, side_slope=(SlopeStation(0, 1.0), SlopeStation(10, 2.0), SlopeStation(70, 2.5))
    )
    assert wall_of(replace(case, wall=steep_bank)).steepest_slope == pytest.approx(
        2.0 + 0.5 * (40 / 3 - 10) / 60
    )


def test_an_open_flank_says_where_and_how_far_below():
    """Oracle: example C by hand, closing level 75.00 less rock 73.70 at 45 m."""
    (flank, drained) = cautions(example("C"))
    assert (flank.code, flank.level) == ("flank-open-right", "block")
    assert "at 45.00 m" in flank.text
    assert "1.30 m below the bed" in flank.text
    assert drained.code == "side-drained"


def test_a_deep_trench_asks_for_a_licensed_design():
    """Oracle: example B, 6.20 m to the bottom of the key against 6.1 m (handbook 11)."""
    (deep, _) = cautions(example("B"))
    assert (deep.code, deep.level) == ("trench-deep", "block")
    assert "6.20 m" in deep.text
    case = example("B")
    exactly = case.with_rock(z + 0.1 for z in case.rock_z)
    assert wall_of(exactly).greatest_depth_to_key_m == pytest.approx(6.1)
    assert "trench-deep" not in dict(codes(exactly))
    # Example A goes 4.15 m down to the bottom of the key: a local code may ask for less.
    case = example("A")
    strict = Practice(licensed_depth_m=4.0)
    (asked, *_) = wall_cautions(wall_of(case), case.wall, Works(), practice=strict)
    assert asked.code == "trench-deep"
    assert "4.15 m down to the bottom of the key, over 4 m" in asked.text


@pytest.mark.parametrize(
    ("slopes", "wanted"),
    [
        ((2.0,), []),
        ((2.5, 3.0), []),
        ((1.5,), [("side-drained", "warn")]),
        ((2.0, 1.9, 2.0), [("side-drained", "warn")]),
        ((2.0, 1.4, 2.0), [("side-steep", "block")]),
    ],
)
def test_side_slopes(slopes, wanted):
    """Oracle: handbook 12; under 1.5 blocks, 1.5 up to under 2.0 stands only in drained sand."""
    assert codes(sloped(example("A"), *slopes)) == wanted


def test_a_signed_support_design_lifts_the_block_and_is_named():
    case = sloped(example("A"), 1.2)
    (said,) = cautions(case, Works(support_design="SD-7, S. Rao, licence 311"))
    assert (said.code, said.level) == ("side-supported", "warn")
    assert "SD-7, S. Rao, licence 311" in said.text
    assert codes(case, Works(support_design="")) == [("side-steep", "block")]


def test_rock_bars_and_low_ground_are_listed():
    (bar, drained) = cautions(rock_bar())
    assert (bar.code, bar.level) == ("rock-bar", "note")
    assert "from 39.79 to 40.21 m" in bar.text  # hand: 36 + 4 x 3.7/3.9 and its mirror
    assert drained.code == "side-drained"
    ground = (GroundPoint(0, 104), GroundPoint(20, 100), GroundPoint(40, 100), GroundPoint(60, 98))
    wall, _ = design_wall(ground, Toes(20, 40), [0, 30, 60], [103, 95, 96], WallSettings())
    assert [one.code for one in wall_cautions(wall, WallSettings(), Works())] == [
        "flank-open-right",
        "low-ground-right",
    ]


def test_rock_over_the_bed_at_both_toes_leaves_no_room_for_a_wall():
    """Oracle: handbook 5.5, each end at its toe; 5.4, nowhere is rock below the crest."""
    case = sloped(example("A"), 1.2)
    case = case.with_rock([104.0] * 6)
    wall = wall_of(case)
    assert (wall.left_end_m, wall.right_end_m, wall.closed) == (30.0, 50.0, True)
    assert (wall.length_m, wall.greatest_height_m, wall.steepest_slope) == (0.0, 0.0, None)
    assert codes(case) == [("no-wall", "block")]


def test_rock_over_the_crest_but_under_the_bed_leaves_two_stubs():
    """Oracle: hand; rock rises 2.2 m in 10 m of bank and has 0.2 m to go, 20/22 m each side."""
    wall = wall_of(example("A").with_rock([104, 102, 99.8, 99.8, 102, 104]))
    assert wall.left_end_m == pytest.approx(30 - 20 / 22)
    assert wall.length_m == pytest.approx(2 * 20 / 22)
    assert len(wall.bars) == 1


def test_a_setting_without_a_unit_is_named_without_one():
    wall = replace(example("A").wall, film_faces=1, changed=("film_faces",))
    (_, faces) = cautions(replace(example("A"), wall=wall))
    assert faces.text.startswith("Film faces: 1 instead of 2 (accepted 0 to 2).")


def test_changed_engineering_defaults_are_named_with_value_default_and_range():
    """Oracle: handbook 12; the lift is the district's own, the others ask for an engineer."""
    case = example("A")
    wall = replace(
        case.wall,
        key_m=0.3,
        lift_m=1.2,
        side_slope=(SlopeStation(0, 2.2), SlopeStation(60, 3.0)),
        changed=("key_m", "lift_m", "side_slope"),
    )
    key, slope = cautions(replace(case, wall=wall))
    assert {key.code, slope.code} == {"default-changed"}
    assert key.text.startswith("Rock key: 0.3 m instead of 0.15 (accepted 0.1 to 0.6).")
    assert slope.text.startswith(
        "Side slope of the trench: 3 across per 1 up instead of 2 (accepted 1 to 3)."
    )
