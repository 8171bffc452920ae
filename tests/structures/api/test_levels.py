"""Wells and readings by the API: each record with its own answer, sending twice harmless."""

from __future__ import annotations

from uuid import uuid4

import pytest

from structures.models import Reading, Role
from tests import factories as make
from tests.structures.wells import a_well, readings_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def reader(site):
    return make.a_user(Role.FIELD, site.watershed.district)


@pytest.fixture
def well(site, reader):
    well = a_well(site.watershed, reader, site=site)
    readings_of(well, reader)
    return well


def a_reading(**changes):
    return {
        "id": str(uuid4()),
        "well": "OD-W01",
        "mark": "M1",
        "read_at": "2025-04-02T06:30+05:30",
        "state": "static",
        "dry": "no",
        "depth_m": 8.02,
        **changes,
    }


def test_a_list_is_answered_record_by_record(as_user, reader, well):
    """Oracle: the interface, one answer a record; rules LV-01 and LV-10 for the last two."""
    phone = as_user(reader)
    sent = [
        a_reading(),
        a_reading(read_at="2025-04-03T06:30+05:30", depth_m=-8.0),
        a_reading(read_at="2025-04-04T06:30+05:30", depth_m=26.3),
        a_reading(read_at="no day"),
    ]
    told = phone.post("/api/v1/levels", sent, format="json")
    assert told.status_code == 200
    assert [one["result"] for one in told.json()] == ["kept", "refused", "held", "refused"]
    assert [one["id"] for one in told.json()] == [one["id"] for one in sent]
    again = phone.post("/api/v1/levels", sent, format="json")
    results = [one["result"] for one in again.json()]
    assert results == ["already here", "refused", "already here", "refused"]
    assert Reading.objects.filter(read_at__year=2025, read_at__month=4).count() == 2


def test_one_reading_alone_is_answered_alone(as_user, reader, well):
    """Oracle: the interface; an identifier with other values is held, not a conflict (PC-02)."""
    phone, one = as_user(reader), a_reading()
    assert phone.post("/api/v1/levels", one, format="json").json()["result"] == "kept"
    other = phone.post("/api/v1/levels", one | {"depth_m": 8.5}, format="json")
    assert (other.status_code, other.json()["result"]) == (200, "held")
    assert other.json()["findings"][0]["rule"] == "PC-02"


def test_a_tape_held_below_the_parapet_waits_with_both_depths(as_user, reader, well):
    """Oracle: field practice 8, no. 12: 10.00 - 1.98 = 8.02, 0.40 below the parapet: 8.42."""
    sent = a_reading(hold_m=10.0, wet_m=1.98, tape_below_mark_m=0.4)
    del sent["depth_m"]
    (finding,) = as_user(reader).post("/api/v1/levels", sent, format="json").json()["findings"]
    assert (finding["rule"], finding["level"]) == ("LV-15", "hold")
    assert "Reading 8.02 is 8.42 below the mark." in finding["what"]


def test_what_is_no_reading_at_all_is_refused(as_user, reader, well):
    for sent in (["x"], [], "8.02"):
        assert as_user(reader).post("/api/v1/levels", sent, format="json").status_code == 422


def test_wells_and_levels_are_listed_where_one_serves(as_user, reader, well, site):
    told = as_user(reader).get("/api/v1/wells", {"role": "upstream"}).json()["results"]
    assert [(one["code"], one["marks"][0]["mark"], one["site"]) for one in told] == [
        ("OD-W01", "M1", site.code)
    ]
    levels = as_user(reader).get("/api/v1/levels", {"well": "OD-W01", "standing": "taken"}).json()
    assert levels["count"] == 30
    stranger = make.an_engineer(make.a_district("ZZ"))
    assert as_user(stranger).get("/api/v1/wells").json()["count"] == 0
    assert as_user(stranger).get("/api/v1/levels").json()["count"] == 0
