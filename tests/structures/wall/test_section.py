"""The section: common offsets, bed level, tops, and what it refuses."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given

from structures.errors import Refused
from structures.intake.pack import GroundPoint, SlopeStation, Toes, WallSettings
from structures.wall.section import Section, make_section
from tests.structures.wall.examples import cases, example


def test_levels_of_example_b():
    """Oracle: check value 1.e (bed level 249.70 at x = 26); crest 0.30 m below it (5.1)."""
    section = make_section(*example("B").parts)
    assert section.bed_level_m == 249.70
    assert section.closing_level_m == 249.70
    assert section.crest_level_m == pytest.approx(249.40)
    assert section.floor_m == pytest.approx(0.9 + 2 * 0.15)  # handbook 5.7


def test_offsets_are_the_union_of_all_breakpoints():
    """Oracle: hand list; ground passes the bed level 100 at x = 5 (halfway from 101 to 99)."""
    section = make_section(
        (GroundPoint(0, 101), GroundPoint(10, 99), GroundPoint(20, 100), GroundPoint(40, 104)),
        Toes(20, 30),
        [2, 24, 38],
        [99, 95, 100],
        replace(WallSettings(), side_slope=(SlopeStation(12, 1.5), SlopeStation(33, 2.0))),
    )
    assert section.offset_m.tolist() == [2, 5, 10, 12, 20, 24, 30, 33, 38]
    assert section.reach == (2.0, 38.0)
    assert section.draws == 1


def test_bed_level_is_read_at_toes_between_points():
    """Oracle: straight line from 104 at 0 to 100 at 40 has 101 at 30 (handbook 1.6)."""
    section = make_section(
        (GroundPoint(0, 104), GroundPoint(40, 100)), Toes(10, 30), [0, 40], [95, 95], WallSettings()
    )
    assert section.bed_level_m == pytest.approx(101.0)


def test_top_steps_at_the_toes_and_follows_low_ground():
    """Oracle: handbook 5.1, read off by hand for a bank that dips to 99 under the bed at 100."""
    section = make_section(
        (GroundPoint(0, 103), GroundPoint(10, 99), GroundPoint(20, 100), GroundPoint(30, 100)),
        Toes(20, 30),
        [0, 10, 30],
        [90, 90, 90],
        WallSettings(),
    )
    left, right = section.top_m
    assert section.offset_m.tolist() == [0, 7.5, 10, 20, 30]
    assert left == pytest.approx([100, 100, 99, 99.7])
    assert right == pytest.approx([100, 99, 100, 99.7])


def test_side_slope_is_constant_outside_its_stations():
    """Oracle: handbook 5.7; halfway between 1.5 and 2.0 is 1.75."""
    wall = replace(WallSettings(), side_slope=(SlopeStation(10, 1.5), SlopeStation(30, 2.0)))
    section = make_section(
        (GroundPoint(0, 100), GroundPoint(20, 99), GroundPoint(40, 100)),
        Toes(5, 35),
        [0, 40],
        [95, 95],
        wall,
    )
    by_offset = dict(zip(section.offset_m.tolist(), section.slope.tolist(), strict=True))
    assert by_offset[0.0] == 1.5
    assert by_offset[20.0] == pytest.approx(1.75)
    assert by_offset[40.0] == 2.0


@given(cases())
def test_rock_is_exact_at_its_own_points_and_never_extrapolated(case):
    """Law: every rock point inside the reach keeps its level to the last bit (5.5)."""
    section = make_section(*case.parts)
    first, last = section.reach
    assert first == max(case.ground[0].offset_m, case.rock_x[0])
    assert last == min(case.ground[-1].offset_m, case.rock_x[-1])
    for x, z in zip(case.rock_x, case.rock_z, strict=True):
        if first <= x <= last:
            assert section.rock_m[0, section.offset_m.tolist().index(x)] == z


def test_rock_away_from_the_ground_is_refused_with_a_remedy():
    case = replace(example("A"), rock_x=(90.0, 95.0), rock_z=(96.0, 97.0))
    with pytest.raises(Refused) as refused:
        make_section(*case.parts)
    assert refused.value.where == "rock line"
    assert "90 to 95 m" in refused.value.what
    assert refused.value.remedy


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"toes": Toes(50, 30)}, "left before right"),
        ({"toes": Toes(-1, 30)}, "inside the ground"),
        ({"rock_x": (0.0, 10.0)}, "6 levels for 2 offsets"),
        ({"rock_x": (0.0, 20.0, 20.0, 50.0, 60.0, 80.0)}, "rise strictly"),
        ({"rock_z": (104.0, 98.0, float("nan"), 96.0, 98.0, 104.0)}, "finite"),
    ],
)
def test_wrong_calls_fail_at_once(change, words):
    with pytest.raises(ValueError, match=words):
        make_section(*replace(example("A"), **change).parts)


def test_a_section_cannot_be_changed_or_made_wrong():
    section = make_section(*example("A").parts)
    with pytest.raises(ValueError, match="read-only"):
        section.rock_m[0, 0] = 0.0
    values = {name: getattr(section, name) for name in Section.__slots__}
    with pytest.raises(ValueError, match="ground_m has 2 points"):
        Section(**{**values, "ground_m": np.zeros(2)})
    with pytest.raises(ValueError, match="not left of"):
        Section(**{**values, "left_toe_m": 60.0})
