"""What passes under a wall that ends on a shelf, between slices and plan."""

from functools import cache

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.pack import GroundPoint, Toes, WallSettings
from structures.wall.wall import design_wall
from structures.water.leakage import slot_flow
from structures.water.shelf import shelf_leak

WATER = 100.0


def wall(rock):
    """A bed at 101 m with rock of given points under it, 100 m wide, steep to both sides."""
    ground = tuple(
        GroundPoint(x, z) for x, z in ((0, 103.0), (10, 101.0), (110, 101.0), (120, 103.0))
    )
    x, z = zip(*rock, strict=True)
    return design_wall(ground, Toes(10.0, 110.0), x, z, WallSettings())[1]


# Rock at 90 m over 100 m, walls almost upright: the layer is 10 m thick everywhere.
BOX = ((9.999, 103.0), (10.0, 90.0), (110.0, 90.0), (110.001, 103.0))


@pytest.mark.parametrize(("reach_m", "share"), [(50, 0.679162), (200, 0.894374), (500, 0.954891)])
def test_a_slot_under_the_whole_wall(reach_m, share):
    """Oracle: check value 9.e, b/T = 0.9 with L/T = 5, 20, 50; shelf 1 m above rock 10 m down."""
    leak = shelf_leak(wall(BOX), shelf_m=91.0, water_m=WATER, reach_m=reach_m)
    assert leak.least_share == pytest.approx(share, abs=2e-5)
    assert leak.reach_over_layer == pytest.approx(reach_m / 10)
    # Open along its whole width the plan has no wall left.
    assert leak.most_share == pytest.approx(1.0, abs=1e-4)


# Half of the box is 10 m deep, half of it 6 m.
HALF = (
    (9.999, 103.0),
    (10.0, 94.0),
    (60.0, 94.0),
    (60.0001, 90.0),
    (110.0, 90.0),
    (110.001, 103.0),
)


@cache
def half_wall():
    return wall(HALF)


def test_only_what_flows_over_the_deep_half_can_pass():
    """Oracle: by hand, 50 m x 10 m of 50 m x 16 m lies over the deep half; b/T = 0.6 there, and
    the most is 9.6 in plan with T = 50, b = 25 m, where b/T = 0.5 has dL/T = 0.441271 (9.d).
    """
    leak = shelf_leak(wall(HALF), shelf_m=94.0, water_m=WATER, reach_m=200.0)
    slot = slot_flow(10.0, 6.0, 200.0).passing_share
    assert leak.least_share == pytest.approx(10 / 16 * slot, abs=1e-4)
    assert leak.most_share == pytest.approx(200 / (200 + 50 * 0.441271), abs=1e-4)
    assert leak.open_width_m == pytest.approx(50.0, abs=1e-3)
    assert leak.reach_over_width == pytest.approx(4.0, abs=1e-3)
    assert leak.open_stretches == 1


def test_two_gullies_share_the_width():
    """Oracle: by hand, two gullies of 10 m in 100 m: T = 25, b = 20 m, b/T = 0.8."""
    rock = ((9.999, 103.0), (10.0, 96.0))
    for start in (30.0, 80.0):
        rock += ((start, 96.0), (start + 1e-6, 90.0), (start + 10, 90.0), (start + 10.000001, 96.0))
    leak = shelf_leak(
        wall((*rock, (110.0, 96.0), (110.001, 103.0))), shelf_m=96.0, water_m=WATER, reach_m=300.0
    )
    assert leak.open_stretches == 2
    assert leak.most_share == pytest.approx(slot_flow(25.0, 20.0, 300.0).passing_share, abs=1e-4)
    assert leak.least_share < leak.most_share


def test_where_the_wall_reaches_rock_nothing_is_open():
    """Oracle: half of the box taken down to rock passes half of what the whole box passes."""
    known = {"shelf_m": 91.0, "water_m": WATER, "reach_m": 200.0}
    whole = shelf_leak(wall(BOX), **known)
    half = shelf_leak(wall(BOX), **known, down_to_rock=[(5.0, 60.0)])
    assert half.least_share == pytest.approx(whole.least_share / 2, abs=1e-4)
    assert half.open_width_m == pytest.approx(50.0, abs=1e-3)


def test_a_shelf_above_the_water_keeps_nothing_back_there():
    """Law: where the wall does not reach into the water every slice passes whole."""
    leak = shelf_leak(wall(BOX), shelf_m=100.5, water_m=WATER, reach_m=100.0)
    assert leak.least_share == pytest.approx(1.0, abs=1e-3)


@given(st.floats(90.1, 99.9), st.floats(0.01, 3.0), st.floats(20.0, 2000.0))
def test_a_higher_shelf_never_leaks_less(shelf_m, rise_m, reach_m):
    low = shelf_leak(half_wall(), shelf_m=shelf_m, water_m=WATER, reach_m=reach_m)
    high = shelf_leak(half_wall(), shelf_m=shelf_m + rise_m, water_m=WATER, reach_m=reach_m)
    assert low.least_share <= high.least_share + 1e-6
    assert 0.0 < low.least_share <= low.most_share <= 1.0 + 1e-9


def test_a_shelf_under_all_rock_is_no_call():
    with pytest.raises(ValueError, match="deeper than 89 m"):
        shelf_leak(wall(BOX), shelf_m=89.0, water_m=WATER, reach_m=100.0)
    with pytest.raises(ValueError, match="reach_m"):
        shelf_leak(wall(BOX), shelf_m=91.0, water_m=WATER, reach_m=0.0)
