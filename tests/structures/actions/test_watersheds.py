"""Watersheds from outlines, and long profiles from a list."""

from __future__ import annotations

import json

import pytest

from structures.actions.watersheds import bulk_enter_profiles, bulk_enter_watersheds
from structures.errors import Refused
from structures.models import LongProfilePoint, Role, Stream, Upload, Watershed
from structures.queries.districts import visible_watersheds
from structures.queries.sites import bed_on_profile_m, long_profile
from tests.factories import SQUARE, a_district, a_site, a_user, a_watershed, an_engineer, book_bytes

pytestmark = pytest.mark.django_db


@pytest.fixture
def district():
    return a_district()


@pytest.fixture
def engineer(district):
    return an_engineer(district)


def feature(ring=SQUARE, **properties):
    return {
        "type": "Feature",
        "properties": {"code": "OD", "name": "Odremma", **properties},
        "geometry": {"type": "Polygon", "coordinates": [ring]},
    }


def enter(district, by, *features):
    document = {"type": "FeatureCollection", "features": features}
    return bulk_enter_watersheds(
        district_id=district.pk, name="w.geojson", data=json.dumps(document).encode(), by=by
    )


def test_outlines_become_watersheds(district, engineer):
    """Oracle: 0.1 degrees square at 15.75 N is (11.0642 km)(10.7162 km): the meridian's degree
    there is 110,642 m, the parallel's 107,162 m (series of the ellipsoid, half a per mille)."""
    gauges = {"R1": 0.25, "R2": 0.75}
    enter(district, engineer, feature(stream="Odre", rain_gauges=gauges))
    (watershed,) = visible_watersheds(engineer)
    assert watershed.area_km2 == pytest.approx(11.0642 * 10.7162, rel=5e-4)
    assert [stream.name for stream in watershed.streams.all()] == ["Odre"]
    assert {one.gauge: one.weight for one in watershed.gauges.all()} == gauges
    assert watershed.history.get().history_user == engineer
    assert watershed.findings == []


def test_one_gauge_counts_whole_and_several_streams_are_named_once(district, engineer):
    (watershed,) = enter(
        district, engineer, feature(stream=["Odre", "Odre", " Bilde "], rain_gauge="R1")
    ).watersheds
    assert [stream.name for stream in watershed.streams.all()] == ["Bilde", "Odre"]
    assert [(one.gauge, one.weight) for one in watershed.gauges.all()] == [("R1", 1.0)]


def test_an_open_clockwise_outline_is_mended_and_said(district, engineer):
    (watershed,) = enter(district, engineer, feature(ring=SQUARE[:-1][::-1])).watersheds
    ring = watershed.outline["coordinates"][0]
    assert ring[0] == ring[-1]
    assert [one["level"] for one in watershed.findings] == ["note", "note"]


def test_all_findings_come_at_once_and_nothing_is_kept(district, engineer):
    a_watershed(district, "TA")
    with pytest.raises(Refused) as refused:
        enter(
            district,
            engineer,
            feature(code="TA"),
            feature(ring=[[771230.5, 1725410.2], [774980.1, 1725300.7], [774550.0, 1729120.9]]),
            feature(ring=[[0, 0], [1, 1], [1, 0], [0, 1]]),
            feature(code=None),
            feature(code="X", rain_gauges={"R1": 0.5, "R2": 0.4}),
            "no feature",
        )
    found = [one.sentence() for one in refused.value.findings]
    assert found == [
        "w.geojson feature 1, code: TA is taken. Codes are not used twice; take another.",
        f"w.geojson feature 2: {found[1].split(': ', 1)[1]}",
        f"w.geojson feature 3: {found[2].split(': ', 1)[1]}",
        "w.geojson feature 4, code: This field cannot be blank. Put it right.",
        (
            "w.geojson feature 5, rain_gauges: The weights of the rain gauges do not add up to "
            "one. Give each gauge its share, above 0, together 1."
        ),
        (
            "w.geojson feature 6: This is no feature with properties. "
            "Send a FeatureCollection of polygons with code and name, or of lines with stream."
        ),
    ]
    assert "These are not longitude and latitude." in found[1]
    assert "crosses or touches itself" in found[2]
    assert [one.code for one in Watershed.objects.all()] == ["TA"]
    assert Upload.objects.get().outcome == "refused"


def test_an_empty_collection_is_refused(district, engineer):
    with pytest.raises(Refused, match="No outline and no line is here"):
        enter(district, engineer)


@pytest.mark.parametrize("role", [Role.FIELD, Role.AUDITOR, Role.ADMIN])
def test_who_may_not_enter_watersheds(district, role):
    with pytest.raises(Refused, match="You may not enter a watershed here"):
        enter(district, a_user(role, district), feature())


BEND = [[77.41, 15.72], [77.45, 15.75], [77.49, 15.74]]


def course(points=BEND, **properties):
    return {
        "type": "Feature",
        "properties": {"stream": "Odre", **properties},
        "geometry": {"type": "LineString", "coordinates": points},
    }


class TestCourses:
    def told(self, refused):
        return [one.sentence() for one in refused.value.findings]

    def test_a_line_beside_the_outline_is_the_course_of_its_stream(self, district, engineer):
        kept = enter(district, engineer, feature(stream="Odre"), course())
        assert kept.names == ("OD Odremma", "OD Odre, course")
        stream = kept.watersheds[0].streams.get()
        assert stream.course == {"type": "LineString", "coordinates": BEND}
        assert Upload.objects.get().rows_in == 2

    def test_a_file_of_its_own_names_the_watershed_and_may_name_the_stream(
        self, district, engineer
    ):
        watershed = a_watershed(district)
        kept = enter(district, engineer, course(stream="Bilde", watershed="OD"))
        assert (kept.watersheds, [one.name for one in watershed.streams.all()]) == ([], ["Bilde"])

    def test_a_second_course_takes_the_place_of_the_first_and_says_so(self, district, engineer):
        enter(district, engineer, feature(stream="Odre"), course())
        (stream,) = enter(district, engineer, course(BEND[::-1])).streams
        assert stream.course["coordinates"] == BEND[::-1]
        assert [(one["level"], one["what"]) for one in Upload.objects.first().findings] == [
            ("note", "Odre in OD had a course already; this one takes its place.")
        ]

    def test_a_course_outside_its_watershed_is_doubted(self, district, engineer):
        enter(district, engineer, feature(stream="Odre"), course([[70.0, 15.0], [70.1, 15.0]]))
        (doubt,) = Upload.objects.get().findings
        assert (doubt["level"], doubt["what"]) == (
            "warn",
            "The course of Odre lies outside the outline of OD.",
        )

    def test_every_line_that_cannot_be_placed_is_said_and_nothing_is_kept(self, district, engineer):
        for code in ("OD", "TA"):
            a_watershed(district, code).streams.create(name="Odre")
        with pytest.raises(Refused) as refused:
            enter(
                district,
                engineer,
                course(),
                course(stream="Nul"),
                course(watershed="ZZ"),
                course(watershed="OD"),
                course(watershed="OD"),
            )
        assert self.told(refused) == [
            (
                "w.geojson feature 1, watershed: Odre is a stream of OD and of TA. "
                "Give the code of its watershed as watershed."
            ),
            (
                "w.geojson feature 2, watershed: No watershed here names a stream Nul. "
                "Give the code of its watershed as watershed."
            ),
            (
                "w.geojson feature 3, watershed: There is no watershed ZZ where you may enter "
                "streams. Choose one of: OD, TA."
            ),
            (
                "w.geojson feature 5, stream: The course of Odre in OD stands twice. "
                "Keep one, or send both lines as one MultiLineString."
            ),
        ]
        assert not Stream.objects.exclude(course=None).exists()

    def test_a_line_without_a_stream_or_without_points_is_refused(self, district, engineer):
        with pytest.raises(Refused) as refused:
            enter(district, engineer, course(stream=""), course(points=[[77.4, 15.7]]))
        assert self.told(refused) == [
            (
                "w.geojson feature 1, stream: This line names no stream. "
                "Give the stream's name as stream, 120 characters at most."
            ),
            "w.geojson feature 2: A line has two different points or more. Draw it again.",
        ]

    def test_an_engineer_of_one_watershed_gives_no_course_to_another(self, district):
        """As for outlines, the district's whole list is not theirs to enter into."""
        here = a_watershed(district)
        a_watershed(district, "TA").streams.create(name="Tavri")
        hand = an_engineer(district, watersheds=[here])
        with pytest.raises(Refused):
            enter(district, hand, course(stream="Tavri"))
        assert not Stream.objects.exclude(course=None).exists()


class TestProfiles:
    @pytest.fixture
    def site(self, district):
        return a_site(a_watershed(district))

    def enter(self, site, by, *rows):
        data = "\n".join(["code,distance_upstream_m,bed_level_m", *rows]).encode()
        return bulk_enter_profiles(
            district_id=site.watershed.district_id, name="p.csv", data=data, by=by
        )

    def test_points_stand_in_order_and_give_the_bed_at_the_site(self, site, engineer):
        """Oracle: straight between (-100, 99.8) and (300, 101.4): 100.2 m at 0."""
        kept = self.enter(site, engineer, "EX-A,300,101.4", "EX-A,-100,99.8")
        points = long_profile(engineer, "EX-A").values_list("distance_upstream_m", "bed_level_m")
        assert (kept, list(points)) == (2, [(-100.0, 99.8), (300.0, 101.4)])
        assert bed_on_profile_m(site) == pytest.approx(100.2)

    def test_points_come_in_from_a_workbook_with_each_cell_named(self, site, engineer):
        heads = ("code", "distance_upstream_m", "bed_level_m")
        hand = {"district_id": site.watershed.district_id, "name": "p.xlsx", "by": engineer}
        wrong = book_bytes(bed=[heads, ("EX-A", -120, 99.8), ("EX-A", 130, "high")])
        with pytest.raises(Refused) as refused:
            bulk_enter_profiles(data=wrong, **hand)
        assert [one.where for one in refused.value.findings] == ["p.xlsx bed!C3"]
        good = book_bytes(bed=[heads, ("EX-A", -120, 99.8), ("EX-A", 130, 101.4)])
        assert bulk_enter_profiles(data=good, **hand) == 2
        assert LongProfilePoint.objects.count() == 2

    def test_a_profile_that_does_not_reach_the_site_says_nothing(self, site, engineer):
        self.enter(site, engineer, "EX-A,50,101.4", "EX-A,300,101.9")
        assert bed_on_profile_m(site) is None

    def test_a_new_profile_takes_the_place_of_the_old_one(self, site, engineer):
        self.enter(site, engineer, "EX-A,-200,99.0", "EX-A,200,101.0")
        self.enter(site, engineer, "EX-A,-200,99.5", "EX-A,200,101.5")
        assert LongProfilePoint.objects.count() == 2
        assert bed_on_profile_m(site) == pytest.approx(100.5)

    def test_short_and_rising_profiles_are_doubted(self, site, engineer):
        """Source: LP-01 (100 m each way), LP-02."""
        self.enter(site, engineer, "EX-A,-100,101.0", "EX-A,60,100.0")
        told = [(one["rule"], one["what"], one["remedy"]) for one in Upload.objects.get().findings]
        assert told == [
            ("LP-01", "The long line is 160 m.", "Too short for a gradient: go 40 m further."),
            ("LP-02", "The bed rises downstream on EX-A.", "Distance sign turned round?"),
        ]

    def test_findings_come_at_once_and_nothing_is_kept(self, site, engineer):
        with pytest.raises(Refused) as refused:
            self.enter(
                site,
                engineer,
                "EX-A,0,100",
                "EX-A,0,100.1",
                "EX-Z,0,100",
                "EX-A,far,100",
                "EX-A,5,",
            )
        assert [one.sentence() for one in refused.value.findings] == [
            "p.csv line 3, distance_upstream_m: EX-A has a point at 0 m already. Keep one of them.",
            (
                "p.csv line 4, code: There is no site EX-Z where you may enter profiles. "
                "Enter the site first, or mend the code."
            ),
            (
                'p.csv line 5, distance_upstream_m: "far" is not a number. '
                "Type the number, or leave out what was not measured."
            ),
            "p.csv line 6, bed_level_m: This is missing. Give the level of the bed.",
        ]
        assert not LongProfilePoint.objects.exists()

    def test_a_site_elsewhere_is_no_site_here(self, site):
        stranger = an_engineer(a_district("ZZ"))
        with pytest.raises(Refused, match="You may not enter a long profile here"):
            self.enter(site, stranger, "EX-A,0,100")
