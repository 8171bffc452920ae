"""Wells, marks and repairs in the browser."""

from __future__ import annotations

import pytest

from structures.actions.readings import take_readings
from structures.models import MeasuringPoint, Reading, Repair, Role, Well
from tests import factories as make
from tests.structures.wells import a_record, a_well, readings_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return make.a_site()


@pytest.fixture
def reader(site):
    return make.a_user(Role.FIELD, site.watershed.district)


@pytest.fixture
def well(site, reader):
    return a_well(site.watershed, reader, site=site, upstream_of_wall_m=140.0)


@pytest.fixture
def office(client, site):
    client.force_login(make.an_engineer(site.watershed.district))
    return client


def words(answer):
    return " ".join(answer.content.decode().split())


def test_list_and_map_show_the_same_filter(office, site, well, reader):
    a_well(site.watershed, reader, "OD-W02", role="control", lat=15.73)
    page = office.get("/wells/", {"role": "control"})
    assert "OD-W02" in words(page)
    assert "OD-W01" not in words(page)
    assert "1 well." in words(page)


def test_a_well_is_entered_on_a_page(office, site):
    page = office.get("/wells/new/")
    assert page.status_code == 200
    said = {
        "watershed": site.watershed.code,
        "code": "OD-W07",
        "role": "control",
        "kind": "dug",
        "site": site.code,
        "ground_level_m": "429,40",
        "owner_consents": "not known",
    }
    assert office.post("/wells/new/", said).url == "/wells/OD-W07/"
    assert Well.objects.get(code="OD-W07").ground_level_m == 429.4
    again = office.post("/wells/new/", said)
    assert again.status_code == 422
    assert "OD-W07 is taken by another well." in words(again)


def test_a_new_mark_is_told_reading_by_reading(office, well, reader):
    """Oracle: 427.40 - 426.80 = 0.60 m higher, by hand."""
    readings_of(well, reader, count=4)
    page = office.post(
        "/wells/OD-W01/mark/",
        {"mark": "M2", "what": "ring", "level_m": "427.4", "valid_from": "2024-01-20"},
    )
    assert page.status_code == 200
    assert "2 levels were worked out anew." in words(page)
    assert "2 readings wait for a decision." in words(page)
    assert MeasuringPoint.objects.get(mark="M2").height_above_ground_m == 1.4
    sheet = words(office.get("/wells/OD-W01/"))
    assert "Photo and second person, please." in sheet
    assert "2 suggestions open." in sheet


def test_several_doubts_are_decided_with_one_reason(office, well, reader):
    readings_of(well, reader)
    times = ("2025-04-02T06:30+05:30", "2025-04-09T06:30+05:30")
    take_readings(records=[a_record(at=at, depth_m=26.3) for at in times], by=reader)
    page = office.get("/repairs/")
    assert "2 doubts wait." in words(page)
    ids = list(Repair.objects.values_list("pk", flat=True))
    said = {"repairs": ids, "decision": "suggested", "why": "tape marked in feet"}
    assert office.post("/repairs/", said | {"why": ""}).status_code == 422
    assert office.post("/repairs/", said).status_code == 302
    assert Reading.objects.filter(standing="repaired").count() == 2
    assert "tape marked in feet" in words(office.get("/repairs/"))
    back = office.post(f"/repairs/{ids[0]}/", {"decision": "raw", "why": "it was metres"})
    assert back.url == "/wells/OD-W01/"
    assert "reversed since" in words(office.get(f"/repairs/{ids[0]}/"))


def test_a_reader_sees_doubts_and_decides_on_none(client, well, reader):
    readings_of(well, reader, count=3)
    row = Reading.objects.first()
    one = Repair.objects.create(
        reading=row, field="depth_m", rule="LV-10", raw="26.3", told="Feet?"
    )
    client.force_login(reader)
    assert 'name="repairs"' not in words(client.get("/repairs/"))
    page = client.post(f"/repairs/{one.pk}/", {"decision": "raw", "why": "sure"})
    assert page.status_code == 422
    assert not Repair.objects.get().decision
