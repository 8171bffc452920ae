"""What the database refuses of papers, trench, measurements, wells and register."""

from __future__ import annotations

from datetime import date, datetime
from decimal import Decimal
from zoneinfo import ZoneInfo

import pytest
from django.db import DatabaseError, IntegrityError, connection, transaction

from structures.migrations._triggers import SQLITE_KEPT
from structures.models import (
    Alarm,
    Chain,
    Entry,
    HoldPoint,
    MeasurementEntry,
    MeasuringPoint,
    Role,
    Strip,
    Well,
)
from tests.factories import a_site, a_user

pytestmark = pytest.mark.django_db
NOW = datetime(2026, 3, 2, 8, 30, tzinfo=ZoneInfo("Asia/Kolkata"))


@pytest.fixture
def site():
    return a_site()


@pytest.fixture
def field(site):
    return a_user(Role.FIELD, site.watershed.district)


@pytest.fixture
def strip(site):
    return Strip.objects.create(structure=site.structure, number=1, from_m=8.88, to_m=14.88)


def refused(model, **values):
    with pytest.raises(IntegrityError), transaction.atomic():
        model.objects.create(**values)


def refused_by_trigger(words, statement):
    with (
        pytest.raises(DatabaseError, match=words),
        transaction.atomic(),
        connection.cursor() as cursor,
    ):
        cursor.execute(statement)


class TestRegister:
    @pytest.fixture
    def entry(self, site, field):
        chain = Chain.objects.create(district=site.watershed.district, length=1, digest="d")
        return Entry.objects.create(
            chain=chain,
            number=1,
            at=NOW,
            by=field,
            by_name="field-1",
            act="hold",
            content_digest="c",
            digest="d",
            code="QU-1",
        )

    @pytest.mark.usefixtures("entry")
    def test_an_entry_is_neither_changed_nor_deleted_past_the_program(self):
        if connection.vendor == "sqlite":
            with connection.cursor() as cursor:
                cursor.execute(SQLITE_KEPT.format(table="structures_entry"))
        refused_by_trigger("written once", "UPDATE structures_entry SET by_name = 'another'")
        refused_by_trigger("kept for good|written once", "DELETE FROM structures_entry")

    def test_an_entry_hangs_on_the_one_before(self, entry, field):
        values = {"chain": entry.chain, "at": NOW, "by": field, "by_name": "x", "act": "hold"}
        digests = {"content_digest": "c", "digest": "e", "code": "QU-2"}
        refused(Entry, number=2, **values, **digests)
        refused(Entry, number=1, **values, **digests)

    def test_the_office_has_one_register(self, entry):
        Chain.objects.create(district=None)
        refused(Chain, district=None)
        refused(Chain, district=entry.chain.district)


def test_covered_unseen_stays(strip):
    Strip.objects.update(opened_on=date(2026, 3, 1), covered_on=date(2026, 3, 9))
    Strip.objects.update(covered_unseen=True)
    refused_by_trigger("lasts|written once", "UPDATE structures_strip SET covered_unseen = FALSE")


@pytest.mark.parametrize(
    "wrong",
    [
        {"to_m": 8.0},
        {"number": 1},
        {"number": 0},
        {"covered_on": date(2026, 3, 1)},
        {"opened_on": date(2026, 3, 2), "covered_on": date(2026, 3, 1)},
        {"covered_unseen": True},
    ],
)
def test_a_strip_that_cannot_be(strip, wrong):
    values = {"number": 2, "from_m": 14.88, "to_m": 20.88, **wrong}
    refused(Strip, structure=strip.structure, **values)


def test_who_asks_for_a_hold_point_does_not_see_it(strip, field):
    asked = {"strip": strip, "hold": "H1", "asked_at": NOW, "asked_by": field}
    refused(HoldPoint, **asked, seen_at=NOW, seen_by=field, result="go")
    refused(HoldPoint, **asked, result="go")


def test_who_measures_does_not_check(strip, field):
    values = {
        "structure": strip.structure,
        "strip": strip,
        "code": "M1",
        "item": "clay",
        "unit": "m3",
        "measured_on": date(2026, 3, 2),
        "measured_by": field,
    }
    refused(MeasurementEntry, **values, quantity=Decimal(0))
    refused(MeasurementEntry, **values, quantity=Decimal(1), checked_by=field, checked_at=NOW)


def test_one_alarm_stands_at_a_time(strip, field):
    values = {"structure": strip.structure, "why": "rain upstream", "set_by": field}
    Alarm.objects.create(**values, set_at=NOW)
    refused(Alarm, **values, set_at=NOW)


def test_a_well_has_one_mark_in_use(site, field):
    well = Well.objects.create(
        watershed=site.watershed,
        code="W-1",
        role="control",
        kind="dug",
        changed_by=field,
    )
    values = {"well": well, "what": "parapet", "by": field, "entered_on": date(2026, 1, 1)}
    MeasuringPoint.objects.create(mark="M1", valid_from=date(2022, 1, 1), **values)
    refused(MeasuringPoint, mark="M2", valid_from=date(2024, 1, 1), **values)
    refused(
        MeasuringPoint,
        mark="M3",
        valid_from=date(2024, 1, 2),
        valid_to=date(2024, 1, 1),
        **values,
    )
    refused(Well, watershed=site.watershed, code="W-2", role="", kind="dug", changed_by=field)
