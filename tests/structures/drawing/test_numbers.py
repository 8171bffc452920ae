import pytest

from structures.drawing.numbers import section_numbers
from tests.structures.drawing.views import VIEWS


def rows_at(name, offset_m):
    return [row for row in section_numbers(VIEWS[name]()) if row.offset_m == offset_m]


def test_the_twin_of_example_b_has_its_points():
    """Oracle: handbook 13, example B, at 33 m: ground, rock, crest, key of 0.15 m; range 0.8 m."""
    (row,) = rows_at("B", 33.0)
    assert (row.ground_m, row.rock_m) == (249.95, 243.90)
    assert row.top_m == pytest.approx(249.40)
    assert row.bottom_m == pytest.approx(243.75)
    assert row.rock_low_m == pytest.approx(243.10)
    assert row.rock_high_m == pytest.approx(244.70)
    assert row.note == "S5"


def test_a_toe_has_two_rows():
    """Oracle: handbook 5.1: bed level on the bank's side, crest on the bed's."""
    tops = [row.top_m for row in rows_at("B", 15.0)]
    assert tops == pytest.approx([249.70, 249.40])
    assert {row.note for row in rows_at("B", 15.0)} == {"left toe, S3"}


def test_ends_say_whether_they_close():
    """Oracle: handbook 13, example C."""
    notes = {round(r.offset_m, 6): r.note for r in section_numbers(VIEWS["C open flank"]())}
    assert notes[6.117647] == "left end, closed on rock"
    assert notes[45.0] == "right end, OPEN"


def test_what_is_not_known_stays_empty():
    for row in section_numbers(VIEWS["no rock"]()):
        known = (row.rock_low_m, row.rock_m, row.rock_high_m, row.top_m, row.bottom_m)
        assert known == (None,) * 5
    rows = section_numbers(VIEWS["both flanks open"]())
    assert {row.rock_m is None for row in rows if not 20.0 <= row.offset_m <= 40.0} == {True}
    assert {row.rock_m is None for row in rows if 20.0 <= row.offset_m <= 40.0} == {False}


def test_no_wall_stands_in_a_rock_bar():
    """Oracle: the bar of check value 5.g lies between its two edges."""
    view = VIEWS["rock bar"]()
    (bar,) = view.wall.bars
    inside = [r for r in section_numbers(view) if bar.from_m + 1e-3 < r.offset_m < bar.to_m - 1e-3]
    assert inside
    assert all(row.top_m is None for row in inside)


def test_every_point_and_test_is_in_the_twin():
    view = VIEWS["crowded 400 m"]()
    rows = section_numbers(view)
    assert {round(x, 6) for x in view.offset_m} <= {round(r.offset_m, 6) for r in rows}
    notes = ", ".join(row.note for row in rows)
    assert all(test.label in notes for test in view.tests)
