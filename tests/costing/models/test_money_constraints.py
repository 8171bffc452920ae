"""What the database refuses of rates and estimates, whoever writes to it."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest
from django.apps import apps
from django.db import DatabaseError, IntegrityError, connection, transaction

from costing.actions.estimate import request_estimate
from costing.models import Estimate, EstimateLine, Rate, RateComponent, RateSchedule
from structures.models import Design, Run, Upload
from structures.models.unchanging import Unchanging
from structures.runs.queue import execute
from tests.factories import a_schedule, a_site, a_survey, an_engineer

pytestmark = pytest.mark.django_db
WRITTEN_ONCE = (
    "costing_rateschedule",
    "costing_rate",
    "costing_ratecomponent",
    "costing_estimate",
    "costing_estimateline",
    "costing_sanction",
    "costing_contract",
    "costing_contractrate",
    "costing_forecast",
    "costing_linedecision",
)


@pytest.fixture
def site():
    return a_site()


@pytest.fixture
def engineer(site):
    return an_engineer(site.watershed.district)


@pytest.fixture
def schedule(site, engineer):
    return a_schedule(site.watershed.district, engineer)


@pytest.fixture
def estimate(site, engineer, schedule):
    a_survey(site, engineer)
    run = request_estimate(site_id=site.pk, by=engineer)
    execute(str(run.pk))
    return Estimate.objects.get()


def refused(model, **values):
    with pytest.raises(IntegrityError), transaction.atomic():
        model.objects.create(**values)


@pytest.mark.parametrize(
    "wrong",
    [
        {"version": 1},
        {"version": 0},
        {"valid_from": date(2026, 2, 1), "valid_to": date(2026, 1, 31)},
        {"contingency_percent": Decimal("15.1")},
        {"overhead_percent": Decimal("-0.1")},
    ],
)
def test_a_schedule_that_cannot_be(schedule, engineer, wrong):
    """Oracle: handbook section 12, contingencies 0 to 15 %, overhead 0 to 10 %."""
    upload = Upload.objects.create(
        district=schedule.district, kind="rates", name="x", size=1, sha256="0" * 64, by=engineer
    )
    values = {"version": 2, "contingency_percent": 5, "overhead_percent": 2, **wrong}
    values |= {"code": schedule.code, "currency": "INR", "digest": "x", "by": engineer}
    refused(RateSchedule, district=schedule.district, upload=upload, **values)


@pytest.mark.parametrize(
    "wrong",
    [
        {"rate": 0},
        {"rate": Decimal("-0.01")},
        {"from_m": -0.5},
        {"from_m": 0.0},
        {"item": "clay", "from_m": None},
    ],
)
def test_a_rate_that_cannot_be(schedule, wrong):
    values = {"order": 99, "item": "excavation", "from_m": 99.0, "unit": "m3", "rate": 1, **wrong}
    refused(Rate, schedule=schedule, **values)


@pytest.mark.parametrize("wrong", [{"kind": "luck"}, {"quantity": -1}, {"unit_rate": -1}])
def test_a_component_that_cannot_be(schedule, wrong):
    values = {"words": "digger", "kind": "labour", "quantity": 1, "unit_rate": 1, **wrong}
    refused(RateComponent, rate=schedule.rates.first(), order=1, **values)


WRONG_LINES = (
    {"amount": None},
    {"quantity": None},
    {"rate": None},
    {"rate": 0, "amount": 0},
    {"from_m": 1.5, "to_m": 1.5},
    {"from_m": 1.5, "to_m": None},
    {"order": 1},
)
WRONG_ESTIMATES = (
    {"version": 1},
    {"total": Decimal("107.01")},
    {"subtotal": Decimal(-1), "total": Decimal(6)},
    {"sanction": Decimal("106.99")},
    {"sanction": None, "complete": True},
    {"p10": Decimal(2), "p50": Decimal(1), "p90": Decimal(3)},
    {"p10": Decimal(1), "p50": None, "p90": Decimal(3)},
    {"open_flank_share": 1.1},
)


def test_lines_that_cannot_be_and_lines_not_known(estimate):
    known = {"order": 99, "item": "clay", "unit": "m3", "quantity": 2, "rate": 3, "amount": 6}
    for wrong in WRONG_LINES:
        refused(EstimateLine, estimate=estimate, **{**known, **wrong})
    for order, lacking in enumerate(("quantity", "rate"), start=98):
        values = {**known, "order": order, "amount": None, lacking: None}
        assert EstimateLine.objects.create(estimate=estimate, **values).pk


def test_estimates_that_cannot_be(estimate):
    run = Run.objects.create(kind="estimate.price", digest="x", version="x")
    values = {
        **{key: getattr(estimate, key) for key in ("site", "design", "survey", "schedule")},
        "version": 2,
        "run": run,
        "input_digest": "x",
        "method": "x",
        "result": {},
        "complete": True,
        "currency": "INR",
        "sanction": Decimal(200),
        "subtotal": Decimal(100),
        "contingency": Decimal(5),
        "overhead": Decimal(2),
        "total": Decimal(107),
    }
    for wrong in WRONG_ESTIMATES:
        refused(Estimate, **{**values, **wrong})
    assert Estimate.objects.create(**values).pk


def test_estimates_and_rates_are_written_once(estimate):
    estimate.total = 0
    for change in (
        estimate.save,
        estimate.delete,
        lambda: Estimate.objects.update(total=0),
        lambda: estimate.lines.all().delete(),
        lambda: Rate.objects.update(rate=1),
    ):
        with pytest.raises(TypeError, match=r"written once|kept for good"):
            change()


@pytest.mark.parametrize("table", WRITTEN_ONCE)
def test_every_table_written_once_carries_its_trigger(table):
    """A later migration that rebuilds a table on SQLite drops its triggers unasked."""
    source = {
        "sqlite": "SELECT name FROM sqlite_master WHERE type = 'trigger' AND tbl_name = %s",
        "postgresql": (
            "SELECT tgname FROM pg_trigger WHERE NOT tgisinternal AND tgrelid = (%s)::regclass"
        ),
    }
    with connection.cursor() as cursor:
        cursor.execute(source[connection.vendor], [table])
        assert cursor.fetchall() == [(f"{table}_unchanging",)]


def test_the_list_of_such_tables_is_complete():
    ours = apps.get_app_config("costing").get_models()
    assert {one._meta.db_table for one in ours if issubclass(one, Unchanging)} == {*WRITTEN_ONCE}


@pytest.mark.usefixtures("estimate")
def test_the_database_refuses_a_change_past_the_program():
    for statement in (
        "UPDATE costing_estimate SET total = 0",
        "UPDATE costing_estimateline SET amount = 0",
        "UPDATE costing_rate SET rate = 1",
    ):
        with (
            pytest.raises(DatabaseError, match="is written once"),
            transaction.atomic(),
            connection.cursor() as cursor,
        ):
            cursor.execute(statement)


def test_a_priced_design_is_frozen(estimate):
    assert Design.objects.get(pk=estimate.design_id).frozen
