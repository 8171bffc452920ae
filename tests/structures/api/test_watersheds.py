"""Watersheds entered by a program, as GeoJSON, all of them or none."""

from __future__ import annotations

import json

import pytest

from structures.models import Watershed
from tests import factories as make

pytestmark = pytest.mark.django_db
PLACE = "/api/v1/watersheds"
FAR = [[78.4, 15.7], [78.5, 15.7], [78.5, 15.8], [78.4, 15.8], [78.4, 15.7]]


def outlines(*codes, ring=FAR):
    geometry = {"type": "Polygon", "coordinates": [ring]}
    features = [
        {"type": "Feature", "properties": {"code": code, "name": code}, "geometry": geometry}
        for code in codes
    ]
    return json.dumps({"type": "FeatureCollection", "features": features}).encode()


def send(client, data, **headers):
    return client.post(PLACE, data, content_type="application/geo+json", headers=headers)


def test_outlines_come_in_and_go_out_again(office):
    answer = send(office, outlines("KE", "LO"))
    assert answer.status_code == 201, answer.content
    assert [one["code"] for one in answer.json()["results"]] == ["KE", "LO"]
    told = office.get(f"{PLACE}?format=geojson&code=KE").json()["features"][0]
    assert told["geometry"]["coordinates"] == [FAR]


def test_a_course_comes_in_with_its_outline_or_later_and_goes_out_by_its_stream(office):
    line = {"type": "LineString", "coordinates": [[78.42, 15.72], [78.46, 15.78]]}
    features = json.loads(outlines("KE"))["features"]
    features[0]["properties"]["stream"] = ["Keldun", "Nul"]
    course = {"type": "Feature", "properties": {"stream": "Keldun"}, "geometry": line}
    both = json.dumps({"type": "FeatureCollection", "features": [*features, course]}).encode()
    (told,) = send(office, both).json()["results"]
    assert (told["streams"], told["courses"]) == (["Keldun", "Nul"], {"Keldun": line})
    later = course | {"properties": {"stream": "Nul", "watershed": "KE"}}
    (told,) = send(office, json.dumps(later).encode()).json()["results"]
    assert told["courses"] == {"Keldun": line, "Nul": line}


def test_they_are_told_back_as_geojson_where_asked_for(office):
    answer = send(office, outlines("KE", "LO"), Accept="application/geo+json")
    assert answer.status_code == 201
    told = answer.json()
    assert told["type"] == "FeatureCollection"
    assert [one["id"] for one in told["features"]] == ["KE", "LO"]


def test_one_wrong_outline_keeps_all_of_them_out(office):
    answer = send(office, outlines("KE", "OD"))
    assert answer.status_code == 422
    assert answer.json()["findings"][0]["field"] == "code"
    assert Watershed.objects.count() == 1


def test_sent_twice_under_one_key_they_are_entered_once(office):
    answers = [send(office, outlines("KE"), **{"Idempotency-Key": "w"}) for _ in range(2)]
    assert [one.status_code for one in answers] == [201, 201]
    assert answers[0].json() == answers[1].json()
    assert Watershed.objects.count() == 2


def test_field_staff_may_not_enter_them(site, as_user):
    client = as_user(make.a_user("field", site.watershed.district))
    assert send(client, outlines("KE")).status_code == 403
