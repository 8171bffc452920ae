"""Rate schedules brought in: what would change, then the next version."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest

from costing.actions.schedule import import_schedule, preview_schedule
from costing.models import RateSchedule
from costing.price.analysis import Component
from costing.price.rates import read_rates
from costing.queries.schedules import (
    differences,
    schedule_record,
    schedules_valid_on,
    visible_schedules,
)
from structures.actions.settings import change_setting
from structures.errors import Refused
from structures.models import Role, Upload
from tests.factories import FIXTURES, a_district, a_schedule, a_user, an_engineer, rates_bytes

pytestmark = pytest.mark.django_db


@pytest.fixture
def district():
    return a_district()


@pytest.fixture
def engineer(district):
    return an_engineer(district)


def changed(changes):
    return [(one.kind, one.item, one.from_m, one.before, one.after) for one in changes]


def test_a_kept_schedule_prices_as_the_one_that_came(district, engineer):
    """Oracle: the schedule read from the file itself."""
    name = "RS-2025-26.csv"
    data = (FIXTURES / "rates" / name).read_bytes()
    kept = import_schedule(district_id=district.pk, name=name, data=data, by=engineer)
    kept.refresh_from_db()
    came = read_rates(name, data)
    assert schedule_record(kept) == came
    assert [one.description for one in schedule_record(kept).rates] == [
        one.description for one in came.rates
    ]


def test_versions_count_up_a_code(district, engineer):
    first = a_schedule(district, engineer)
    second = a_schedule(district, engineer, clay="830.00")
    other = a_schedule(district, engineer, name="RS-2.csv", clay="840.00")
    assert [(one.code, one.version) for one in (first, second, other)] == [
        ("RS-1", 1),
        ("RS-1", 2),
        ("RS-2", 1),
    ]
    assert schedule_record(first).rate_of("clay") == Decimal("820.00")
    assert (second.upload.rows_in, second.upload.outcome) == (14, "kept")


def test_a_preview_tells_the_differences_and_keeps_nothing(district, engineer):
    a_schedule(district, engineer)
    lines = rates_bytes(clay="830.00", overhead_percent="3").decode().splitlines()
    lines = [line for line in lines if not line.startswith("excavation,6.0")]
    data = "\n".join([*lines, "excavation,7.5,m3,225.00,INR"]).encode()
    read = preview_schedule(district_id=district.pk, name="RS-1.csv", data=data, by=engineer)
    assert read.newest.version == 1
    assert sorted(changed(read.changes)) == [
        ("added", "excavation", 7.5, None, Decimal("225.00")),
        ("changed", "clay", None, Decimal("820.00"), Decimal("830.00")),
        ("changed", "overhead_percent", None, Decimal(2), Decimal(3)),
        ("removed", "excavation", 6.0, Decimal("195.00"), None),
    ]
    assert RateSchedule.objects.count() == Upload.objects.count() == 1


def test_the_first_schedule_adds_everything(district, engineer):
    read = preview_schedule(
        district_id=district.pk, name="RS-1.csv", data=rates_bytes(), by=engineer
    )
    assert read.newest is None
    assert len(read.changes) == 16
    assert {one.kind for one in read.changes} == {"added"}
    assert differences(read.schedule, read.schedule) == ()


def test_the_same_rates_in_another_file_are_refused(district, engineer):
    a_schedule(district, engineer)
    with pytest.raises(Refused) as refused:
        import_schedule(
            district_id=district.pk, name="RS-1.csv", data=rates_bytes() + b"\n", by=engineer
        )
    assert refused.value.sentence() == (
        "RS-1.csv: These rates are those of RS-1 version 1. Nothing was added. "
        "Send the schedule that is new."
    )


def test_this_very_file_is_refused(district, engineer):
    a_schedule(district, engineer)
    for act in (preview_schedule, import_schedule):
        with pytest.raises(Refused, match="This very file came on"):
            act(district_id=district.pk, name="other.csv", data=rates_bytes(), by=engineer)


def test_another_currency_is_refused(district, engineer):
    """Source: ES-05."""
    data = rates_bytes().replace(b"INR", b"KES")
    with pytest.raises(Refused) as refused:
        import_schedule(district_id=district.pk, name="RS-1.csv", data=data, by=engineer)
    assert refused.value.sentence() == (
        "RS-1.csv, currency: The rates are in KES, the district counts in INR. Give rates in INR."
    )
    assert refused.value.findings[0].rule == "ES-05"


def test_a_schedule_without_currency_counts_in_that_of_the_district():
    district = a_district(currency="KES")
    data = rates_bytes().replace(b"INR", b"")
    kept = import_schedule(
        district_id=district.pk, name="RS-1.csv", data=data, by=an_engineer(district)
    )
    assert kept.currency == "KES"


def test_an_unknown_item_is_named_and_the_file_is_kept_as_refused(district, engineer):
    data = rates_bytes() + b"\nclayy,,m3,1.00,INR"
    with pytest.raises(Refused) as refused:
        import_schedule(district_id=district.pk, name="RS-1.csv", data=data, by=engineer)
    assert refused.value.findings[0].remedy == "Was clay meant?"
    assert Upload.objects.get().outcome == "refused"
    assert not RateSchedule.objects.exists()


class TestAnalysis:
    """A rate of 820.00: 2 x 300.00 + 0.5 x 290.91 = 745.455, rounded part by part to 745.46;
    with 10 % overhead and profit 74.55 it is 820.01 (handbook 8.3)."""

    def parts(self, machine):
        return (
            Component("digger", "labour", Decimal(2), Decimal("300.00")),
            Component("roller", "machinery", Decimal("0.5"), Decimal(machine)),
        )

    def test_parts_that_give_the_rate_are_kept(self, district, engineer):
        kept = import_schedule(
            district_id=district.pk,
            name="RS-1.csv",
            data=rates_bytes(clay="820.01"),
            by=engineer,
            components={("clay", None): self.parts("290.91")},
        )
        clay = kept.rates.get(item="clay")
        assert [(one.words, one.kind, one.quantity) for one in clay.components.all()] == [
            ("digger", "labour", Decimal(2)),
            ("roller", "machinery", Decimal("0.5")),
        ]

    def test_parts_that_give_another_rate_are_refused(self, district, engineer):
        with pytest.raises(Refused) as refused:
            import_schedule(
                district_id=district.pk,
                name="RS-1.csv",
                data=rates_bytes(),
                by=engineer,
                components={
                    ("clay", None): self.parts("290.91"),
                    ("excavation", 9.0): self.parts("290.91"),
                },
            )
        assert [one.sentence() for one in refused.value.findings] == [
            (
                "rate analysis, clay: The analysis gives 820.01, the schedule says 820.00. "
                "Put one of them right."
            ),
            (
                "rate analysis, excavation: There is no such rate in the schedule. "
                "Add the rate, or leave it out."
            ),
        ]
        assert not RateSchedule.objects.exists()


def test_schedules_valid_on_a_day(district, engineer):
    old = a_schedule(district, engineer, days="2025-01-01,2025-12-31")
    new = a_schedule(district, engineer, days="2026-01-01,2026-12-31", clay="830.00")
    ever = a_schedule(district, engineer, name="RS-2.csv", clay="840.00")
    days = (date(2024, 6, 1), date(2025, 12, 31), date(2026, 1, 1))
    assert [list(schedules_valid_on(district, day)) for day in days] == [
        [ever],
        [ever, old],
        [ever, new],
    ]


@pytest.mark.parametrize("role", [Role.FIELD, Role.PROGRAMME, Role.AUDITOR, Role.ADMIN])
def test_who_may_not_bring_rates_in(district, role):
    user = a_user(role, district)
    for act in (preview_schedule, import_schedule):
        with pytest.raises(Refused, match="You may not bring in a rate schedule here"):
            act(district_id=district.pk, name="RS-1.csv", data=rates_bytes(), by=user)


def test_schedules_are_seen_where_one_serves(district, engineer):
    a_schedule(district, engineer)
    assert [one.rate_count for one in visible_schedules(engineer)] == [14]
    assert visible_schedules(an_engineer(a_district("ZZ"))).count() == 0


def set_by_admin(district, key, value):
    admin = a_user(Role.ADMIN, district)
    words = {"reason": "as decided", "decided": ("P. Manager", "", date(2026, 3, 1))}
    change_setting(key=key, value=value, district=district, by=admin, **words)


def test_percentages_that_a_file_lacks_are_those_of_the_office(district, engineer):
    """Oracle: handbook 12 and 8.4; what the file says itself goes before."""
    set_by_admin(district, "contingency_percent", 4.0)
    set_by_admin(district, "overhead_percent", 3.5)
    rows = [one for one in rates_bytes().decode().splitlines() if "contingency" not in one]
    kept = import_schedule(
        district_id=district.pk, name="RS-1.csv", data="\n".join(rows).encode(), by=engineer
    )
    assert (kept.contingency_percent, kept.overhead_percent) == (Decimal(4), Decimal(2))
    assert "Not given: 4 % is taken (setting)." in [one["what"] for one in kept.findings]
    other = read_rates("RS-1.csv", "\n".join(rows).encode())
    assert other.contingency_percent == Decimal(5)


def test_overhead_and_profit_of_an_analysis_are_those_of_the_office(district, engineer):
    """Oracle: handbook 8.3 by hand, 100.00 with 20 % is 120.00, not the 110.00 of 10 %."""
    set_by_admin(district, "rate_overhead_profit_percent", 20.0)
    part = (Component("all of it", "labour", Decimal(1), Decimal("100.00")),)
    whole = {"district_id": district.pk, "by": engineer, "components": {("clay", None): part}}
    with pytest.raises(Refused, match=r"The analysis gives 120.00, the schedule says 110.00"):
        import_schedule(name="RS-1.csv", data=rates_bytes(clay="110.00"), **whole)
    assert import_schedule(name="RS-1.csv", data=rates_bytes(clay="120.00"), **whole).version == 1
