"""Readings of wells in a phone's parcel: the messy parcels of the demo, as they really arrive."""

from __future__ import annotations

import json
from datetime import date
from pathlib import Path

import pytest

from structures.actions.parcels import take_parcel
from structures.models import Reading, Repair, Role
from tests.factories import a_district, a_user, a_watershed
from tests.structures.wells import a_well

pytestmark = pytest.mark.django_db
HERE = Path(__file__).parents[1] / "intake" / "parcels"


@pytest.fixture
def district():
    return a_district(as_of=date(2026, 4, 10), invented=True)


def sent(name, by):
    document = json.loads((HERE / f"{name}.json").read_text())
    return take_parcel(document=document, by=by)[1]


@pytest.fixture
def reader(district):
    """Whoever reads the wells of the first parcel."""
    by = a_user(Role.FIELD, district, login="field-4")
    watershed = a_watershed(district)
    for code in ("BI-W07", "BI-W08", "OD-W07"):
        a_well(watershed, by, code)
    return by


def test_a_parcel_sent_twice_changes_nothing_the_second_time(reader):
    """What really arrives, row 41; oracle: three readings in the file."""
    assert [one.result for one in sent("first", reader)] == ["kept"] * 3
    again = sent("again", reader)
    assert [one.result for one in again] == ["already here"] * 3
    assert [one.depth_m for one in Reading.objects.order_by("read_at")] == [9.21, 9.5, 9.01]


def test_the_same_identifier_with_another_depth_keeps_both(reader):
    """Rule PC-02; oracle: 9.21 m in the first file, 9.81 m in the other."""
    sent("first", reader)
    changed = sent("changed", reader)
    assert [one.result for one in changed] == ["held", "already here"]
    assert "PC-02" in {one.rule for one in changed[0].findings}
    found = Reading.objects.filter(well__code="BI-W07")
    assert sorted(one.depth_m for one in found) == [9.21, 9.81]


def test_readings_of_a_stopped_clock_are_held_with_the_time_of_sending(district):
    """Rule LV-11; row 42; oracle: sent on 7 April 2026 at 18:10."""
    by = a_user(Role.FIELD, district, login="field-6")
    watershed = a_watershed(district, "TA")
    for code in ("TA-W06", "TA-W07"):
        a_well(watershed, by, code)
    answers = sent("clock_1970", by)
    assert [one.result for one in answers] == ["held", "held"]
    doubts = Repair.objects.filter(rule="LV-11").order_by("reading__read_at")
    assert [one.suggested for one in doubts] == ["2026-04-07T18:10+05:30"] * 2
    assert [one.raw for one in doubts] == ["1970-01-01T05:41+05:30", "2031-04-07T06:30+05:30"]
