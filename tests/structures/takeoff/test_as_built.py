"""Work as built against a closed form, and stretches that nobody measured."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.ground.found import FoundLevel, take_in
from structures.intake.pack import GroundPoint, RockLinePoint, Site, SurveyPack, Toes, WallSettings
from structures.life.strips import Strip, cut_strips
from structures.takeoff.as_built import compare, levelled
from structures.takeoff.sheet import measure
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from structures.wall.stretch import Stretch

STRIPS = (Strip(1, 10.0, 20.0), Strip(2, 20.0, 30.0), Strip(3, 30.0, 40.0))
DRAWN_M, DEEPER_M = 95.0, 1.0


def trough():
    """A bed at 100 m between banks, rock at 95 m under it, rising to the banks beyond."""
    ground = ((0.0, 106.0), (8.0, 100.0), (42.0, 100.0), (50.0, 106.0))
    line = (
        (0.0, 105.0),
        (8.0, DRAWN_M),
        (20.0, DRAWN_M),
        (30.0, DRAWN_M),
        (42.0, DRAWN_M),
        (50.0, 105.0),
    )
    return SurveyPack(
        site=Site("NE-07", "Nerlavadi ford"),
        wall=WallSettings(),
        ground=tuple(GroundPoint(x, z) for x, z in ground),
        toes=Toes(8.0, 42.0),
        rock_line=tuple(RockLinePoint(x, z) for x, z in line),
    )


def wall_of(pack):
    x, z = ([getattr(one, key) for one in pack.rock_line] for key in ("offset_m", "level_m"))
    return cut(make_section(pack.ground, pack.toes, x, z, pack.wall))


def of(compared, item):
    return next(one for one in compared.rows if one.item == item)


def test_rock_a_metre_deeper_along_a_strip_is_its_face_times_the_thickness():
    """Oracle: 10 m of strip, 1 m deeper: 10 m2 of face, times the thickness of the clay."""
    pack = trough()
    found = tuple(FoundLevel(x, DRAWN_M - DEEPER_M, 2) for x in (20.0, 25.0, 30.0))
    compared = compare(wall_of(pack), wall_of(take_in(pack, found).pack), pack.wall, STRIPS, found)
    assert of(compared, "clay").difference == pytest.approx(10.0 * DEEPER_M * pack.wall.thickness_m)
    assert compared.measured == (Stretch(20.0, 30.0),)
    assert [(one.strip, one.from_m, one.to_m, one.whole) for one in compared.missed] == [
        (1, 10.0, 20.0, True),
        (3, 30.0, 40.0, True),
    ]


def test_rock_found_as_drawn_differs_nowhere_and_strips_add_up_to_the_wall():
    """Oracle: the sheet of the whole wall, measured at once."""
    pack = trough()
    drawn = wall_of(pack)
    ends = float(drawn.ends.left_m[0]), float(drawn.ends.right_m[0])
    strips = cut_strips(*ends, 6.0)
    line = [(one.offset_m, one.level_m) for one in pack.rock_line]
    found = tuple(
        FoundLevel(x, float(np.interp(x, *zip(*line, strict=True))), one.number)
        for one in strips
        for x in (one.from_m, *(b for b, _ in line if one.from_m < b < one.to_m), one.to_m)
    )
    compared = compare(drawn, wall_of(take_in(pack, found).pack), pack.wall, strips, found)
    whole = measure(drawn, pack.wall)
    assert compared.complete
    for item in ("clay", "rock_key", "film", "backfill"):
        one = of(compared, item)
        assert one.drawn == pytest.approx(float(whole.by_item[item][0]))
        assert one.difference == pytest.approx(0.0, abs=1e-6)
    dug = sum(one.drawn for one in compared.rows if one.item == "excavation")
    assert dug == pytest.approx(float(whole.excavation_m3.sum()), abs=0.01)


def test_what_nobody_measured_is_not_known_and_not_zero():
    pack = trough()
    compared = compare(wall_of(pack), wall_of(pack), pack.wall, STRIPS, ())
    clay = of(compared, "clay")
    assert (clay.built, clay.drawn_there, clay.difference) == (None, None, None)
    assert clay.drawn > 0.0
    assert len(compared.missed) == len(STRIPS)


def test_without_a_drawing_nothing_can_be_compared():
    pack = trough()
    found = tuple(FoundLevel(x, DRAWN_M, 2) for x in (20.0, 30.0))
    clay = of(compare(None, wall_of(pack), pack.wall, STRIPS, found), "clay")
    assert (clay.drawn, clay.drawn_there, clay.difference) == (None, None, None)
    assert clay.built > 0.0


@pytest.mark.parametrize(
    ("offsets", "measured", "missed"),
    [
        ((10.0, 20.0), [(10.0, 20.0)], []),
        ((10.4, 19.6), [(10.0, 20.0)], []),  # within half a metre of both ends
        ((12.0, 20.0), [(12.0, 20.0)], [(10.0, 12.0)]),
        ((14.0,), [], [(10.0, 20.0)]),  # one level says nothing of the line
    ],
)
def test_a_strip_is_measured_between_its_levels(offsets, measured, missed):
    found = [FoundLevel(x, 95.0, 1) for x in offsets]
    said, not_said = levelled(STRIPS[:1], found)
    assert [(one.from_m, one.to_m) for one in said] == measured
    assert [(one.from_m, one.to_m) for one in not_said] == missed


@given(st.lists(st.floats(10.0, 40.0), max_size=12))
def test_measured_and_missed_fill_every_strip_and_never_overlap(offsets):
    """Law: lengths of both kinds add up to the length of the strips."""
    found = [
        FoundLevel(x, 95.0, next(one.number for one in STRIPS if x <= one.to_m)) for x in offsets
    ]
    measured, missed = levelled(STRIPS, found)
    total = sum(one.to_m - one.from_m for one in (*measured, *missed))
    assert total == pytest.approx(30.0)
