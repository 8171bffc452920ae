"""Sites and watersheds: lists, filters, GeoJSON, entering, and two who edit one site."""

from __future__ import annotations

import pytest

from structures.ground.place import read_outline
from structures.models import Role, Site
from tests import factories as make

pytestmark = pytest.mark.django_db
SITES = "/api/v1/sites"


def codes(answer):
    assert answer.status_code == 200, answer.content
    return [one["code"] for one in answer.json()["results"]]


@pytest.fixture
def three(site):
    make.a_site(site.watershed, "EX-B", name="two palms", bed_level_m=99.0, lat=15.76)
    make.a_site(site.watershed, "EX-C", village_upstream="Nolkurava", bed_level_m=101.0, lat=15.77)
    return site


@pytest.mark.parametrize(
    ("query", "found"),
    [
        ("", ["EX-A", "EX-B", "EX-C"]),
        ("?ordering=-code", ["EX-C", "EX-B", "EX-A"]),
        ("?q=nolku", ["EX-C"]),
        ("?name=palm", ["EX-B"]),
        ("?code=EX-B", ["EX-B"]),
        ("?watershed=OD&stage=noted", ["EX-A", "EX-B", "EX-C"]),
        ("?watershed=elsewhere", []),
        ("?page_size=2&page=2", ["EX-C"]),
    ],
)
def test_a_list_is_filtered_sorted_and_paged(three, office, query, found):
    assert codes(office.get(SITES + query)) == found


def test_a_page_says_where_in_the_list_it_stands(three, office):
    told = office.get(f"{SITES}?page_size=2").json()
    assert told["count"] == 3
    assert told["next"] == f"http://testserver{SITES}?page=2&page_size=2"
    assert told["previous"] is None


@pytest.mark.parametrize(("query", "status"), [("?stage=flying", 400), ("?page=9", 404)])
def test_a_filter_that_cannot_be_is_named(office, query, status):
    answer = office.get(SITES + query)
    assert answer.status_code == status
    assert answer["Content-Type"] == "application/problem+json"


def test_sites_as_geojson_are_points_longitude_first(three, office):
    for answer in (
        office.get(f"{SITES}?format=geojson"),
        office.get(SITES, headers={"Accept": "application/geo+json"}),
    ):
        assert answer["Content-Type"] == "application/geo+json"
        told = answer.json()
        assert told["type"] == "FeatureCollection"
        assert told["count"] == 3
        first = told["features"][0]
        assert (first["type"], first["id"]) == ("Feature", "EX-A")
        assert first["geometry"] == {"type": "Point", "coordinates": [77.45, 15.75]}
        assert first["properties"]["stage"] == "noted"


def test_a_watershed_as_geojson_is_its_outline(site, office):
    answer = office.get("/api/v1/watersheds/OD?format=geojson").json()
    outline = read_outline({"type": "Polygon", "coordinates": [make.SQUARE]}, "OD").geometry
    assert (answer["type"], answer["id"], answer["geometry"]) == ("Feature", "OD", outline)
    assert answer["properties"]["site_count"] == 1


def test_what_is_not_there_is_a_problem_in_geojson_too(office):
    answer = office.get(f"{SITES}/NONE?format=geojson")
    assert answer.status_code == 404
    assert answer["Content-Type"] == "application/problem+json"
    assert answer.json()["title"] == "Not Found"


def new(**changes):
    return {"code": "KE-04", "watershed": "OD", "lat": 15.7521, "lon": 77.4462, **changes}


def test_a_site_is_entered_with_its_doubts(site, office):
    answer = office.post(SITES, new(stream="Keldun"), format="json")
    assert answer.status_code == 201, answer.content
    assert answer["Location"] == f"http://testserver{SITES}/KE-04"
    told = answer.json()
    assert (told["stage"], told["stream"], told["revision"]) == ("noted", "Keldun", 1)
    # Nobody said who uses the water below: rule PL-05.
    assert [one["rule"] for one in told["findings"]] == ["PL-05"]
    assert office.get(answer["Location"]).json() == told


def test_a_site_sent_twice_with_its_own_uuid_is_entered_once(site, office):
    body = new(id="9d3c4a52-0a5b-4cf3-9a3e-2f4f5c1d7e10")
    answers = [office.post(SITES, body, format="json") for _ in range(2)]
    assert [one.status_code for one in answers] == [201, 201]
    assert answers[0].json() == answers[1].json()
    assert Site.objects.filter(code="KE-04").count() == 1


@pytest.mark.parametrize(
    ("changes", "status", "field"),
    [
        ({"code": "EX-A"}, 422, "code"),
        ({"lat": 91.0}, 422, "lat"),
        ({"bed_slope": 0.9}, 422, "bed_slope"),
        ({"lat": "north"}, 400, "lat"),
        ({"lat": True}, 400, "lat"),
        ({"name": {"a": 1}}, 400, "name"),
        ({"colour": "red"}, 400, "colour"),
        ({"id": "no uuid"}, 400, "id"),
    ],
)
def test_a_site_that_cannot_be_names_its_field(site, office, changes, status, field):
    answer = office.post(SITES, new(**changes), format="json")
    assert answer.status_code == status, answer.content
    assert field in {one["field"] for one in answer.json()["findings"]}
    assert Site.objects.count() == 1


def test_no_site_is_entered_into_another_district(site, office):
    make.a_watershed(make.a_district("AV"), "AR")
    answer = office.post(SITES, new(watershed="AR"), format="json")
    assert answer.status_code == 422
    assert answer.json()["findings"][0]["field"] == "watershed"
    assert Site.objects.count() == 1


def edit(client, changes, **headers):
    return client.patch(f"{SITES}/EX-A", changes, format="json", headers=headers)


def test_an_edit_needs_the_etag_it_was_read_with(site, office):
    seen = office.get(f"{SITES}/EX-A")["ETag"]
    assert edit(office, {"name": "a"}).status_code == 428
    first = edit(office, {"name": "the deep ford"}, **{"If-Match": seen})
    assert first.status_code == 200
    assert first.json()["name"] == "the deep ford"
    assert first["ETag"] != seen
    late = edit(office, {"name": "the wide ford"}, **{"If-Match": seen})
    assert late.status_code == 412
    assert late["Content-Type"] == "application/problem+json"
    site.refresh_from_db()
    assert site.name == "the deep ford"
    assert edit(office, {"name": "b"}, **{"If-Match": first["ETag"]}).status_code == 200


def test_an_edit_sent_twice_under_one_key_is_one_edit(site, office):
    seen = office.get(f"{SITES}/EX-A")["ETag"]
    headers = {"If-Match": seen, "Idempotency-Key": "edit-1"}
    answers = [edit(office, {"bed_level_m": 98.5}, **headers) for _ in range(2)]
    assert [one.status_code for one in answers] == [200, 200]
    assert answers[0]["ETag"] == answers[1]["ETag"]
    site.refresh_from_db()
    assert (site.bed_level_m, site.revision) == (98.5, 2)


def test_an_edit_that_cannot_be_changes_nothing(site, office):
    answer = edit(office, {"lat": 95.0, "name": "x"}, **{"If-Match": "*"})
    assert answer.status_code == 422
    assert answer.json()["findings"][0]["field"] == "lat"
    site.refresh_from_db()
    assert (site.name, site.revision) == ("the ford", 1)


@pytest.mark.parametrize("role", [Role.PROGRAMME, Role.AUDITOR])
def test_who_may_only_read_is_told_so(site, as_user, role):
    client = as_user(make.a_user(role, site.watershed.district))
    assert codes(client.get(SITES)) == ["EX-A"]
    assert edit(client, {"name": "x"}, **{"If-Match": "*"}).status_code == 403
    assert client.post(SITES, new(), format="json").status_code == 403


def test_another_district_sees_and_finds_nothing(site, as_user):
    stranger = as_user(make.an_engineer(make.a_district("AV")))
    assert codes(stranger.get(SITES)) == []
    assert codes(stranger.get(f"{SITES}?q=EX")) == []
    for answer in (
        stranger.get(f"{SITES}/EX-A"),
        edit(stranger, {"name": "x"}, **{"If-Match": "*"}),
        stranger.get("/api/v1/watersheds/OD"),
    ):
        assert answer.status_code == 404


def test_an_address_that_is_not_there_is_a_problem(client):
    answer = client.get("/api/v1/culverts/9")
    assert answer.status_code == 404
    assert answer["Content-Type"] == "application/problem+json"


@pytest.mark.parametrize(
    ("place", "status"),
    [
        (f"{SITES}/%00", 400),
        (f"{SITES}?q=%00", 400),
        (f"{SITES}/%00/surveys", 400),
        ("/api/v1/surveys/99999999999999999999999", 404),
        ("/api/v1/surveys?version=99999999999999999999999", 200),
        ("/api/v1/runs/------------------------------------", 404),
        (f"{SITES}?page=0", 404),
        (f"{SITES}?ordering=password", 200),
    ],
)
def test_an_odd_address_is_answered_in_words(office, place, status):
    assert office.get(place).status_code == status


def test_answers_stay_out_of_caches(office):
    assert office.get(SITES)["Cache-Control"] == "private, no-store"
