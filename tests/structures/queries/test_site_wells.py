"""The wells of a site with their last readings."""

from __future__ import annotations

from datetime import UTC, date, datetime

import pytest

from structures.models import Reading, Role, Well
from structures.queries.site_wells import wells_of
from tests.factories import a_district, a_site, a_user, a_watershed

pytestmark = pytest.mark.django_db


def a_well(site, code, role="upstream"):
    return Well.objects.create(
        watershed=site.watershed,
        site=site,
        code=code,
        role=role,
        kind="dug",
        changed_by=site.changed_by,
    )


def read(well, at, **changes):
    said = {"state": "static", "depth_m": 5.0, "level_m": 410.0, **changes}
    return Reading.objects.create(well=well, read_at=at, by=well.changed_by, **said)


def test_the_last_reading_that_was_not_left_out_stands_at_its_day_of_the_place():
    """Oracle: by hand; 20:00 UTC on 2 March is 01:30 on 3 March in India (+05:30)."""
    site = a_site()
    engineer = a_user(Role.ENGINEER, site.watershed.district)
    control, well = a_well(site, "W2", "control"), a_well(site, "W1")
    read(well, datetime(2026, 2, 1, tzinfo=UTC), level_m=411.0)
    read(well, datetime(2026, 3, 2, 20, tzinfo=UTC), level_m=409.5, dry=True, state="pumping")
    read(well, datetime(2026, 3, 9, tzinfo=UTC), level_m=420.0, standing="left out")
    first, second = wells_of(engineer, site)
    assert (first.well, first.day, first.level_m) == (well, date(2026, 3, 3), 409.5)
    assert (first.dry, first.state, first.moving) == (True, "pumping", True)
    assert (second.well, second.day, second.level_m) == (control, None, None)
    assert (second.dry, second.moving) == (False, False)


def test_wells_are_for_who_serves_there():
    site = a_site()
    a_well(site, "W1")
    stranger = a_user(Role.ENGINEER, a_district("AV"))
    elsewhere = a_user(
        Role.ENGINEER,
        site.watershed.district,
        watersheds=[a_watershed(site.watershed.district, "BI")],
    )
    assert wells_of(stranger, site) == wells_of(elsewhere, site) == []
