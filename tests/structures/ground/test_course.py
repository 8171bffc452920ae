"""The course of a stream as it is read."""

from __future__ import annotations

import pytest

from structures.errors import Refused
from structures.ground.course import lines_of, read_course

BEND = [[67.40, 15.70], [67.42, 15.70], [67.42, 15.73]]


def line(points):
    return {"type": "LineString", "coordinates": points}


def test_heights_are_left_out_and_a_point_given_twice_running_is_kept_once():
    given = line([[67.40, 15.70, 410.0], [67.42, 15.70], [67.42, 15.70], [67.42, 15.73, 400.0]])
    assert read_course(given, "x") == line(BEND)


def test_a_course_of_several_lines_keeps_them():
    given = {"type": "MultiLineString", "coordinates": [BEND[:2], BEND[1:]]}
    assert read_course(given, "x") == given
    assert lines_of(given) == [[(67.40, 15.70), (67.42, 15.70)], [(67.42, 15.70), (67.42, 15.73)]]
    assert lines_of(line(BEND)) == [[(67.40, 15.70), (67.42, 15.70), (67.42, 15.73)]]


@pytest.mark.parametrize(
    ("geometry", "sentence"),
    [
        ({"type": "Polygon", "coordinates": [BEND]}, "Odre: This is no line. Send a GeoJSON"),
        (None, "Odre: This is no line."),
        (line(None), "Odre: The line has no points."),
        ({"type": "MultiLineString", "coordinates": []}, "Odre: The line has no points."),
        ({"type": "MultiLineString", "coordinates": [7]}, "Odre: The line has no points."),
        (line([]), "Odre: A line has two different points or more."),
        (line([[67.4, 15.7], [67.4, 15.7]]), "Odre: A line has two different points or more."),
        (line([[67.4, "15.7"], [67.4, 15.8]]), "Odre: A point is not two numbers."),
        (line([[0.0, 0.0]] * 20_001), "Odre: The line has more than 20000 points. Thin it out."),
        (
            line([[771230.5, 1725410.2], [774980.1, 1725300.7]]),
            (
                "Odre: These are not longitude and latitude. The first point that cannot be one "
                "is 771230, 1.72541e+06. Save it in WGS 84 degrees, longitude first."
            ),
        ),
    ],
)
def test_what_is_no_course_is_refused_with_its_place(geometry, sentence):
    with pytest.raises(Refused) as refused:
        read_course(geometry, "Odre")
    assert refused.value.sentence().startswith(sentence)
