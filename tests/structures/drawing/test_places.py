from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.drawing.places import Box, Label, Places, spread


@given(
    wanted=st.lists(st.floats(0.0, 100.0), min_size=1, max_size=12).map(sorted),
    gap=st.floats(0.5, 10.0),
)
def test_spread_labels_keep_their_gap_and_their_mean(wanted, gap):
    """Law: neighbours are a gap apart or more, and the mean of all is where it was wanted."""
    places = spread(wanted, gap)
    assert all(b - a >= gap - 1e-9 for a, b in pairwise(places))
    assert sum(places) == pytest.approx(sum(wanted), abs=1e-6)


def test_spread_leaves_alone_what_does_not_touch():
    assert spread([1.0, 5.0, 20.0], 3.7) == [1.0, 5.0, 20.0]


def test_spread_moves_two_touching_labels_apart_by_halves():
    """Oracle: least squares by hand: 10 and 11 with gap 4 go to 8.5 and 12.5."""
    assert spread([10.0, 11.0], 4.0) == [8.5, 12.5]


def test_the_first_free_place_is_taken_once():
    places = Places(Box(0.0, 0.0, 50.0, 50.0), 2.6, 3.5)
    first, second = Label(10.0, 20.0, ("S1",)), Label(10.0, 30.0, ("S1",))
    assert places.put([first, second]) is first
    assert places.put([first, second]) is second
    assert places.put([first, second]) is None


def test_a_label_off_the_sheet_is_no_place():
    places = Places(Box(0.0, 0.0, 50.0, 50.0), 2.6, 3.5)
    assert places.put([Label(49.0, 20.0, ("bore 1",))]) is None
    inside = Label(49.0, 20.0, ("bore 1",), "end")
    assert places.put([inside]) is inside
