"""The phone's round of wells without its scripts: what to expect, read twice, kept."""

from __future__ import annotations

from datetime import date

import pytest

from structures.models import Reading, Role
from tests import factories as make
from tests.structures.wells import a_well, readings_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    district = make.a_district(invented=True, as_of=date(2025, 3, 20))
    return make.a_site(make.a_watershed(district))


@pytest.fixture
def reader(site):
    return make.a_user(Role.FIELD, site.watershed.district)


@pytest.fixture
def phone(client, site, reader):
    well = a_well(site.watershed, reader, site=site, upstream_of_wall_m=140.0)
    readings_of(well, reader)  # 8.00 to 8.04 m, the last on 13 March 2025
    client.force_login(reader)
    return client


def words(answer):
    return " ".join(answer.content.decode().split())


def reading(**changes):
    return {
        "depth": "8,12",
        "unit": "m",
        "dry": "no",
        "state": "static",
        "day": "2025-03-20",
        "hour": "06:30",
        **changes,
    }


def test_the_round_tells_what_to_expect(phone):
    """Oracle: the last was 8.04 m; three times half a metre either way: 6.54 to 9.54 m by hand."""
    page = words(phone.get("/today/wells/"))
    assert "OD-W01" in page
    assert "expect 6.54 to 9.54 m" in page
    page = words(phone.get("/today/wells/OD-W01/"))
    assert "Hold the tape at M1: parapet, north side, red mark." in page


def test_a_reading_is_kept_with_a_decimal_comma_and_in_centimetres(phone):
    assert phone.post("/today/wells/OD-W01/", reading()).url == "/today/wells/"
    row = Reading.objects.get(depth_m=8.12)
    assert (row.state, row.standing, row.mark.mark) == ("static", "taken", "M1")
    phone.post("/today/wells/OD-W01/", reading(depth="806", unit="cm", hour="07:10"))
    assert Reading.objects.get(depth_m=8.06).level_m == 418.74


def test_far_from_what_is_expected_it_is_read_twice(phone):
    page = phone.post("/today/wells/OD-W01/", reading(depth="10.9"))
    assert page.status_code == 422
    assert "Wait, read again, and write the second reading." in words(page)
    assert not Reading.objects.filter(depth_m=10.9).exists()
    told = phone.post("/today/wells/OD-W01/", reading(depth="10.9", again="10.91"), follow=True)
    assert "Held for an engineer." in words(told)
    assert Reading.objects.get(depth_m=10.9).standing == "held"


@pytest.mark.parametrize(
    ("said", "depth_m", "dry", "state"),
    [
        # Bottom 11.50 m below ground, the mark 0.80 m above it.
        ({"dry": "yes", "depth": ""}, 12.3, True, "static"),
        ({"state": "obstructed", "depth": ""}, None, False, "obstructed"),
        ({"depth": "", "hold": "10", "wet": "1,9"}, 8.1, False, "static"),
    ],
)
def test_dry_blocked_and_by_tape(phone, said, depth_m, dry, state):
    assert phone.post("/today/wells/OD-W01/", reading(**said)).status_code == 302
    row = Reading.objects.get(read_at__date=date(2025, 3, 20))
    assert (row.depth_m, row.dry, row.state) == (depth_m, dry, state)


@pytest.mark.parametrize("depth", ["", "dry", "-8"])
def test_what_is_no_depth_is_told_at_its_field(phone, depth):
    page = phone.post("/today/wells/OD-W01/", reading(depth=depth))
    assert page.status_code == 422
    assert not Reading.objects.filter(read_at__date=date(2025, 3, 20)).exists()


def test_the_same_form_sent_twice_keeps_one_reading(phone):
    said = reading(record_id="5f0f1a0e-7c0f-4d53-9a53-aaaaaaaaaaaa")
    for _ in range(2):
        assert phone.post("/today/wells/OD-W01/", said).status_code == 302
    assert Reading.objects.filter(read_at__date=date(2025, 3, 20)).count() == 1
