"""Clay, rock key, film, centering, markers and spoil: the short formulas of handbook 6."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.trench import spoil_distance_m
from structures.takeoff.centering import centering_m2
from structures.takeoff.clay import clay_of_wall, rock_key_m3
from structures.takeoff.film import film_net_m2, film_with_laps_m2
from structures.takeoff.markers import count_markers
from structures.takeoff.quantity import ITEMS, Quantity
from structures.takeoff.spoil import spoil_heap
from tests.structures.wall.examples import expected, printed


def test_clay_of_example_a():
    """Oracle: handbook 13 and 6.1; 0.9 m x 155.333333 m2."""
    wanted = expected("A")
    clay = clay_of_wall(155.333333333, 0.9, borrow_factor=1.25, loose_factor=1.50, waste_share=0.05)
    assert clay.in_place_m3 == printed(wanted["clay_m3"])
    assert clay.borrow_m3 == printed(wanted["clay_borrow_m3"])
    assert clay.loose_m3 == printed(wanted["clay_loose_m3"])


def test_rock_key_of_example_b():
    """Oracle: handbook 13 and 6.6; 0.9 x 0.15 x 54."""
    assert rock_key_m3(54.0, 0.9, 0.15) == printed(expected("B")["rock_key_m3"])


def test_film_with_laps():
    """Oracle: check value 6.b."""
    net = film_net_m2(100.0, 40.0, faces=2, anchor_m=0.30, fold_m=0.30)
    assert net == printed("248.0000")
    assert film_with_laps_m2(net, 6.0, 0.30) == printed("261.052632")


def test_film_on_no_face_is_none():
    assert film_net_m2(100.0, 40.0, faces=0, anchor_m=0.30, fold_m=0.30) == 0.0


@pytest.mark.parametrize("lap_m", [6.0, 7.0, -0.1])
def test_a_lap_that_does_not_fit_its_roll_is_refused(lap_m):
    with pytest.raises(ValueError, match="does not fit a roll 6 m wide"):
        film_with_laps_m2(248.0, 6.0, lap_m)


def test_centering_of_example_b():
    """Oracle: handbook 13 and 6.4; both faces."""
    assert centering_m2(169.85) == printed(expected("B")["centering_m2"])


@pytest.mark.parametrize(
    ("line_m", "stones"),
    [(53.333333, 7), (54.0, 7), (38.882353, 5), (50.0, 6), (50.000001, 6), (50.1, 7), (0.5, 2)],
)
def test_markers(line_m, stones):
    """Oracle: handbook 13 for A, B, C; else 6.5 by hand: both ends and every 10 m."""
    assert count_markers(line_m, 10.0) == stones


@given(st.integers(1, 400), st.integers(5, 25))
def test_a_line_of_whole_spacings_has_one_stone_more(spacings, spacing_m):
    """Law: stones stand at the ends and between every two spacings."""
    assert count_markers(float(spacings * spacing_m), float(spacing_m)) == spacings + 1


def test_spoil_heap():
    """Oracle: check value 6.g, A = 30 m2; distance by handbook 12, half of 5 m."""
    heap = spoil_heap(30.0, 5.0)
    assert heap.height_m == printed("4.47214")
    assert heap.base_m == printed("13.41641")
    assert heap.distance_m == 2.5
    assert heap.height_m * heap.base_m / 2 == pytest.approx(30.0)  # area of a triangle


def test_spoil_stays_back_even_from_a_shallow_trench():
    """Oracle: handbook 12, the larger of 1.5 m and half the depth."""
    assert [spoil_distance_m(depth) for depth in (0.5, 3.0, 6.0)] == [1.5, 1.5, 3.0]
    with pytest.raises(ValueError, match="-1 m2"):
        spoil_heap(-1.0, 2.0)


def test_an_item_is_measured_in_its_own_unit():
    """Oracle: the interface's item codes."""
    assert Quantity("film", "m2", 3.0).unit == ITEMS["film"]
    with pytest.raises(ValueError, match="'film' is not measured in 'm3'"):
        Quantity("film", "m3", 3.0)
    with pytest.raises(ValueError, match="'sand'"):
        Quantity("sand", "m3", 3.0)
