"""The course of a stream as it is read."""

from __future__ import annotations

import pytest

from structures.errors import Refused
from structures.ground.course import feet_on, lines_of, read_course
from structures.ground.place import distance_m

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


def test_the_way_along_a_course_is_the_sum_of_its_pieces():
    """Oracle: geodesics on the ellipsoid from bend to bend (general library)."""
    ends = [tuple(point) for point in BEND]
    first_m, second_m = distance_m(ends[0], ends[1]), distance_m(ends[1], ends[2])
    feet = feet_on(line(BEND), ends)
    ways = [0.0, first_m, first_m + second_m]
    assert [foot.along_m for foot in feet] == pytest.approx(ways, rel=1e-5, abs=1e-3)
    assert [foot.off_m for foot in feet] == pytest.approx([0.0, 0.0, 0.0], abs=1e-6)


def test_a_site_beside_the_course_counts_at_its_foot():
    """Oracle: geodesic from the site straight to the middle of the eastern piece."""
    beside, foot = (67.425, 15.715), (67.42, 15.715)
    (found,) = feet_on(line(BEND), [beside])
    assert found.off_m == pytest.approx(distance_m(beside, foot), rel=1e-4)
    along_m = distance_m(tuple(BEND[0]), tuple(BEND[1])) + distance_m(tuple(BEND[1]), foot)
    assert found.along_m == pytest.approx(along_m, rel=1e-5)


def test_lines_that_join_are_one_course_and_lines_with_a_gap_are_none():
    pieces = {"type": "MultiLineString", "coordinates": [BEND[1:], BEND[:2]]}
    whole, joined = (feet_on(one, [tuple(BEND[2])])[0] for one in (line(BEND), pieces))
    assert joined.along_m == pytest.approx(whole.along_m)
    gap = {"type": "MultiLineString", "coordinates": [BEND[:2], [[67.43, 15.70], [67.44, 15.70]]]}
    assert feet_on(gap, [tuple(BEND[0])]) is None
