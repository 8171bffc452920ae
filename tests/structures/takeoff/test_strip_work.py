"""The work of one strip, and of the wall as a whole, as a measurement is offered them."""

from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.pack import GroundWater, Works
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.sheet import measure, quantities
from structures.takeoff.strip_work import OF_THE_WALL, strip_work, wall_work
from structures.wall.wall import design_wall
from tests.costing.documents.appraisals import pack


def wall(name):
    survey = pack(name)
    x = [one.offset_m for one in survey.rock_line]
    z = [one.level_m for one in survey.rock_line]
    return survey.wall, design_wall(survey.ground, survey.toes, x, z, survey.wall)[1]


def test_a_strip_of_the_level_bed_by_hand():
    """Oracle: example A between 32 and 38 m by hand: 4.00 m deep, 1.2 m at the foot, 1.5 across to
    1 up, so 28.8, 12.375 and 2.7 m2 stand below 0, 1.5 and 3 m; face 3.85 m, above rock 3.70 m.
    """
    settings, cutoff = wall("A")
    work = {(one.item, one.from_m): one.quantity for one in strip_work(cutoff, settings, 32, 38)}
    assert work == {
        ("excavation", 0.0): pytest.approx(6 * (28.8 - 12.375)),
        ("excavation", 1.5): pytest.approx(6 * (12.375 - 2.7)),
        ("excavation", 3.0): pytest.approx(6 * 2.7),
        ("rock_key", None): pytest.approx(0.9 * 0.15 * 6),
        ("clay", None): pytest.approx(0.9 * 3.85 * 6),
        ("film", None): pytest.approx(2 * (3.85 * 6 + 6 * 0.6) * 6 / 5.7),
        ("centering", None): pytest.approx(2 * 3.7 * 6),
        ("backfill", None): pytest.approx(172.8 - 0.9 * 3.7 * 6),
        ("surplus", None): pytest.approx(0.9 * 3.85 * 6 * 1.25),
    }


@given(st.sampled_from("AB"), st.lists(st.floats(1.0, 68.0), max_size=5))
def test_strips_add_up_to_the_wall(name, cuts):
    """Oracle: the measurement sheet of the whole wall."""
    settings, cutoff = wall(name)
    dry = plan_pumping(cutoff, GroundWater(), Works(pump_hours=0.0))
    whole = {}
    for one in quantities(measure(cutoff, settings), dry):
        whole[one.item] = whole.get(one.item, 0.0) + one.quantity
    found = dict.fromkeys(whole, 0.0)
    for start, stop in pairwise([-5.0, *sorted(cuts), 90.0]):
        for one in strip_work(cutoff, settings, start, stop) if stop > start else ():
            found[one.item] += one.quantity
    for item in set(whole) - set(OF_THE_WALL):
        # A band that rounds to 0.00 is not listed in a strip (handbook 8.4).
        assert found[item] == pytest.approx(whole[item], abs=0.005 * 6 * 6)


def test_of_the_whole_wall_are_hours_markers_and_pipes():
    """Oracle: handbook 13, example A: 7 markers, 2 pipes; the hours are summed by hand."""
    work = wall_work(wall("A")[1], wall("A")[0], [12.5, 20.0, 7.25])
    assert [(one.item, one.quantity) for one in work] == [
        ("dewatering", 39.75),
        ("marker", 7.0),
        ("observation_pipe", 2.0),
    ]
    assert work[0].working == "3 day sheets, 12.5 + 20 + 7.25 hours"
