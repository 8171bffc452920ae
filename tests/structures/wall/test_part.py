"""A part of a wall: strips add up to the whole, each cut exactly."""

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.takeoff.sheet import measure
from structures.wall.part import part_of
from structures.wall.wall import design_wall
from tests.costing.documents.appraisals import pack


def wall(name):
    survey = pack(name)
    x = [one.offset_m for one in survey.rock_line]
    z = [one.level_m for one in survey.rock_line]
    return survey, design_wall(survey.ground, survey.toes, x, z, survey.wall)[1]


def test_half_of_example_a_is_half_of_it():
    """Oracle: example A is symmetric about 40 m; handbook 13 has face 155.333333, excavation
    1430.518519, length 53.333333, clay 139.8.
    """
    survey, cutoff = wall("A")
    half = part_of(cutoff, [(0.0, 40.0)])
    takings = measure(half, survey.wall)
    assert float(half.length_m[0]) == pytest.approx(53.333333 / 2, abs=1e-6)
    assert float(half.face_area_m2[0]) == pytest.approx(155.333333 / 2, abs=1e-6)
    assert float(takings.excavation_m3.sum()) == pytest.approx(1430.518519 / 2, abs=1e-6)
    assert float(takings.works.clay_m3[0]) == pytest.approx(69.9, abs=1e-9)


def test_a_strip_of_the_level_bed_by_hand():
    """Oracle: example A between 32 and 38 m has 4.00 m of trench, 1.2 + 1.5 x 4 = 7.2 m wide on
    average, 6 m long: 172.8 m3; face 6 x 3.85 = 23.1 m2.
    """
    survey, cutoff = wall("A")
    strip = part_of(cutoff, [(32.0, 38.0)])
    assert float(strip.face_area_m2[0]) == pytest.approx(23.1)
    assert float(measure(strip, survey.wall).excavation_m3.sum()) == pytest.approx(172.8)


@given(st.sampled_from("AB"), st.lists(st.floats(0.0, 68.0), min_size=1, max_size=6))
def test_parts_add_up_to_the_whole(name, cuts):
    survey, cutoff = wall(name)
    edges = [-5.0, *sorted(cuts), 90.0]
    reaches = list(pairwise(edges))
    whole = measure(cutoff, survey.wall)
    parts = [measure(part_of(cutoff, [reach]), survey.wall) for reach in reaches]
    together = measure(part_of(cutoff, reaches), survey.wall)
    for item in ("rock_key", "clay", "centering", "backfill", "surplus"):
        each = sum(float(one.by_item[item][0]) for one in parts)
        assert each == pytest.approx(float(whole.by_item[item][0]), rel=1e-9)
        assert each == pytest.approx(float(together.by_item[item][0]), rel=1e-9)
    dug = [float(one.excavation_m3.sum()) for one in parts]
    assert sum(dug) == pytest.approx(float(whole.excavation_m3.sum()), rel=1e-9)
    assert np.all(np.array(dug) >= 0.0)


@pytest.mark.parametrize("reaches", [[], [(5.0, 4.0)], [(0.0, 5.0), (4.0, 9.0)]])
def test_reaches_that_cannot_be_so_are_no_call(reaches):
    with pytest.raises(ValueError, match=r"reach"):
        part_of(wall("A")[1], reaches)
