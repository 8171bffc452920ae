"""The way along a stream from site to site: along its course where it has one."""

from __future__ import annotations

import pytest

from structures.ground.place import distance_m
from structures.models import LongProfilePoint
from structures.queries.map import beds_of, runs_of
from tests import factories as make

pytestmark = pytest.mark.django_db
UPPER, BEND, LOWER = (77.42, 15.75), (77.44, 15.77), (77.46, 15.75)  # a stream round a hill
WAY_M = distance_m(UPPER, BEND) + distance_m(BEND, LOWER)  # oracle: geodesics (general library)


@pytest.fixture
def watershed():
    return make.a_watershed()


@pytest.fixture
def stream(watershed):
    return watershed.streams.create(name="Odre", course=line(UPPER, BEND, LOWER))


@pytest.fixture
def engineer(watershed):
    return make.an_engineer(watershed.district)


def line(*points):
    return {"type": "LineString", "coordinates": [list(point) for point in points]}


def levelled(watershed, stream, code, position, bed_m):
    lon, lat = position
    site = make.a_site(watershed, code, lon=lon, lat=lat, stream=stream)
    for up_m in (-100.0, 0.0, 100.0):
        LongProfilePoint.objects.create(
            site=site, distance_upstream_m=up_m, bed_level_m=bed_m + up_m / 200.0
        )


def only(user, watershed):
    (bed,) = beds_of(user, watershed)
    return bed


@pytest.mark.parametrize("drawn", [(UPPER, BEND, LOWER), (LOWER, BEND, UPPER)])
def test_the_way_runs_along_the_course_whichever_way_it_was_drawn(
    watershed, stream, engineer, drawn
):
    stream.course = line(*drawn)
    stream.save()
    levelled(watershed, stream, "OD-1", UPPER, 110.0)
    levelled(watershed, stream, "OD-2", LOWER, 100.0)
    bed = only(engineer, watershed)
    assert bed.along_course
    assert [one.code for one in bed.reaches] == ["OD-1", "OD-2"]
    assert [one.at_m for one in bed.reaches] == pytest.approx([0.0, WAY_M], rel=1e-5)


def test_a_single_site_has_a_way_of_none(watershed, stream, engineer):
    levelled(watershed, stream, "OD-1", BEND, 110.0)
    bed = only(engineer, watershed)
    assert [(one.code, one.at_m) for one in bed.reaches] == [("OD-1", 0.0)]


def test_without_a_course_the_way_is_straight(watershed, stream, engineer):
    stream.course = None
    stream.save()
    levelled(watershed, stream, "OD-1", UPPER, 110.0)
    levelled(watershed, stream, "OD-2", LOWER, 100.0)
    bed = only(engineer, watershed)
    assert (bed.along_course, bed.why) == (False, "")
    assert bed.reaches[1].at_m == pytest.approx(distance_m(UPPER, LOWER))
    assert runs_of([watershed]) == []


def test_a_site_far_from_the_course_makes_the_way_straight_and_is_named(
    watershed, stream, engineer
):
    far = (77.40, 15.75)
    levelled(watershed, stream, "OD-1", far, 110.0)
    levelled(watershed, stream, "OD-2", LOWER, 100.0)
    bed = only(engineer, watershed)
    assert bed.why == f"OD-1 lies {distance_m(far, UPPER):.0f} m from the course of Odre."
    assert bed.reaches[1].at_m == pytest.approx(distance_m(far, LOWER))


def test_a_course_in_two_pieces_is_drawn_but_measures_no_way(watershed, stream, engineer):
    stream.course = {
        "type": "MultiLineString",
        "coordinates": [[list(UPPER), [77.43, 15.76]], [[77.45, 15.76], list(LOWER)]],
    }
    stream.save()
    levelled(watershed, stream, "OD-1", UPPER, 110.0)
    levelled(watershed, stream, "OD-2", LOWER, 100.0)
    assert only(engineer, watershed).why == "The lines of Odre do not join to one course."
    (run,) = runs_of([watershed])
    assert [len(one) for one in run.lines] == [2, 2]
