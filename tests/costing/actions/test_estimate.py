"""An estimate asked for, computed by a run, frozen with its inputs; never altered after."""

from __future__ import annotations

import json
from datetime import date
from decimal import Decimal
from pathlib import Path

import pytest

from costing.actions.estimate import PRICE, request_estimate
from costing.appraisal import METHOD, appraise
from costing.documents.result import as_json
from costing.models import Estimate
from costing.price.rates import read_rates
from costing.queries.estimates import estimate_of_run, lines_of, visible_estimates
from costing.queries.schedules import schedule_record
from structures.actions.settings import change_setting
from structures.actions.surveys import accept_survey
from structures.errors import Refused
from structures.intake.practice import Decision, Practice
from structures.intake.survey_pack import read_pack, read_pack_bytes
from structures.models import Role, Run
from structures.queries.runs import runs_of_site, visible_runs
from structures.runs.queue import execute
from tests.factories import (
    FIXTURES,
    a_district,
    a_schedule,
    a_site,
    a_survey,
    a_user,
    a_watershed,
    an_engineer,
    pack_bytes,
)

pytestmark = pytest.mark.django_db
PRINTED = json.loads(Path("tests/oracles/examples.json").read_text())["examples"]
DAY = date(2026, 4, 10)


@pytest.fixture
def district():
    return a_district(invented=True, as_of=DAY)


@pytest.fixture
def engineer(district):
    return an_engineer(district)


@pytest.fixture
def site(district):
    return a_site(a_watershed(district))


@pytest.fixture
def schedule(district, engineer):
    return a_schedule(district, engineer, name="examples.csv")


def computed(site, by, **named):
    run = request_estimate(site_id=site.pk, by=by, **named)
    execute(str(run.pk))
    run.refresh_from_db()
    return run


@pytest.mark.parametrize("letter", ["A", "B", "C"])
@pytest.mark.usefixtures("schedule")
def test_the_worked_examples_to_the_last_digit(site, engineer, letter):
    """Oracle: handbook section 13, every priced line and sum."""
    place = a_site(site.watershed, f"EX-{letter}9", lat=15.71)
    a_survey(place, engineer, letter=letter.lower())
    run = computed(place, engineer)
    assert (run.state, run.message) == ("done", "")
    estimate, printed = estimate_of_run(engineer, run.pk), PRINTED[letter]["priced"]
    for key in ("subtotal", "contingency", "overhead", "total", "sanction"):
        assert getattr(estimate, key) == Decimal(printed[key]), key
    assert [
        (line.item, line.from_m, line.quantity, line.amount) for line in lines_of(estimate)
    ] == [
        (line["item"], line["from_m"], Decimal(line["quantity"]), Decimal(line["amount"]))
        for line in printed["lines"]
    ]
    results = PRINTED[letter]["results"]
    assert estimate.complete == (results["closed_left"] and results["closed_right"])


def test_the_office_and_the_command_give_the_same_answer(site, engineer, schedule):
    """Oracle: the appraisal of the files themselves, as the command makes it."""
    path = FIXTURES / "packs" / "example-a.json"
    data = (FIXTURES / "rates" / "examples.csv").read_bytes()
    rates = read_rates("examples.csv", data)
    command = as_json(appraise(read_pack(path), schedule=rates, on=DAY))
    accept_survey(site_id=site.pk, name=path.name, data=path.read_bytes(), by=engineer)
    estimate = estimate_of_run(engineer, computed(site, engineer).pk)
    assert estimate.result == command
    assert estimate.schedule == schedule


def test_the_settings_of_the_district_are_what_it_is_priced_by(site, engineer, schedule):
    """Oracle: the spine with the same record; 24 h x 10 days x 4 pumps (handbook 6.11, 6.i)."""
    district = site.watershed.district
    admin, signed = a_user(Role.ADMIN, district), ("A. Rao", "L-1", date(2026, 3, 1))
    for key, value in (("pump_m3_per_hour", 10.0), ("clay_k_m_per_s", 1e-9)):
        words = {"reason": "measured here", "decided": signed}
        change_setting(key=key, value=value, district=district, by=admin, **words)
    wet = {
        "works": {"days_below_water": 10},
        "ground_water": {"hydraulic_conductivity_m_per_day": 17.28, "water_level_m": 249.35},
    }
    place = a_site(site.watershed, "EX-B8", lat=15.71)
    a_survey(place, engineer, letter="b", **wet)
    run = computed(place, engineer)
    estimate = estimate_of_run(engineer, run.pk)
    (pumping,) = [line for line in lines_of(estimate) if line.item == "dewatering"]
    assert pumping.quantity == Decimal("960.00")
    decision = Decision("clay_k_m_per_s", 1e-9, *signed, "measured here")
    practice = Practice(pump_m3_per_hour=10.0, clay_k_m_per_s=1e-9, decisions=(decision,))
    data = pack_bytes("EX-B8", "b", **wet)
    plain = read_pack_bytes("EX-B8.json", data)
    spine = appraise(plain, schedule=schedule_record(schedule), on=DAY, practice=practice)
    assert estimate.result == as_json(spine)
    told = [one["text"] for one in estimate.result["cautions"] if one["code"] == "default-changed"]
    assert any(
        "Decided by A. Rao, licence L-1, on 2026-03-01: measured here." in one for one in told
    )


def test_inputs_are_frozen_with_their_digest(site, engineer, schedule):
    survey = a_survey(site, engineer)
    run = computed(site, engineer, wall={"thickness_m": 1.2})
    estimate = Estimate.objects.get()
    assert (estimate.version, estimate.survey, estimate.rock_line) == (1, survey, None)
    assert (estimate.schedule, estimate.run, estimate.asked_by) == (schedule, run, engineer)
    assert estimate.wall["thickness_m"] == 1.2
    assert estimate.method == METHOD
    assert len(estimate.input_digest) == 64
    assert estimate.currency == "INR"
    assert estimate.result["method"] == METHOD
    assert (estimate.p10, estimate.p50, estimate.p90) == (None, None, None)


@pytest.mark.usefixtures("schedule")
def test_the_same_inputs_show_the_old_result(site, engineer):
    a_survey(site, engineer)
    first = computed(site, engineer)
    other = an_engineer(site.watershed.district)
    assert request_estimate(site_id=site.pk, by=other) == first
    assert computed(site, engineer, wall={"key_m": 0.2}) != first
    assert [one.version for one in Estimate.objects.order_by("version")] == [1, 2]
    for seen in (visible_runs(other), runs_of_site(other, "EX-A")):
        assert seen.filter(kind=PRICE).count() == 2


@pytest.mark.usefixtures("schedule")
def test_a_newer_survey_is_priced_beside_the_old_estimate(site, engineer):
    a_survey(site, engineer)
    computed(site, engineer)
    before = Estimate.objects.values().get()
    a_survey(site, engineer, works={"pump_hours": 480})
    computed(site, engineer)
    assert Estimate.objects.values().get(version=1) == before
    dewatering = Estimate.objects.get(version=2).lines.get(item="dewatering")
    # 480 hours at 36.00
    assert dewatering.amount == Decimal("17280.00")


@pytest.mark.usefixtures("schedule")
def test_an_older_survey_can_still_be_named(site, engineer):
    first = a_survey(site, engineer)
    a_survey(site, engineer, works={"pump_hours": 480})
    computed(site, engineer, survey_id=first.pk)
    assert Estimate.objects.get().survey == first


@pytest.mark.usefixtures("schedule")
def test_an_estimated_line_gives_percentiles_in_order(site, engineer):
    change_setting(
        key="risk_draws",
        value=2000,
        district=site.watershed.district,
        reason="as it stands",
        by=a_user(Role.PROGRAMME, site.watershed.district),
    )
    bores = [
        {"offset_m": offset, "depth_m": depth, "method": method, "met_rock": True}
        for offset, depth, method in (
            (0.0, 0.0, "outcrop"),
            (30.0, 3.0, "bore"),
            (50.0, 3.0, "bore"),
            (80.0, 0.0, "outcrop"),
        )
    ]
    a_survey(site, engineer, rock_line=None, rock=bores)
    run = computed(site, engineer)
    assert (run.state, run.message) == ("done", "")
    estimate = Estimate.objects.get()
    assert estimate.p10 <= estimate.p50 <= estimate.p90
    assert 0.0 <= estimate.open_flank_share <= 1.0


@pytest.mark.usefixtures("schedule")
def test_without_a_rock_line_the_run_says_what_to_do_and_freezes_nothing(site, engineer):
    a_survey(site, engineer, rock_line=None)
    run = computed(site, engineer)
    assert run.state == "failed"
    assert run.message.startswith("EX-A: No rock line:")
    assert "Bore" in run.message
    assert not Estimate.objects.exists()


@pytest.mark.usefixtures("schedule")
def test_a_line_not_known_keeps_its_place(site, engineer):
    a_survey(site, engineer, works=None)
    computed(site, engineer)
    estimate = Estimate.objects.get()
    assert (estimate.complete, estimate.sanction) == (False, None)
    line = estimate.lines.get(item="dewatering")
    assert (line.quantity, line.rate, line.amount) == (None, Decimal("36.00"), None)


class TestRefusals:
    def test_without_a_survey(self, site, engineer):
        with pytest.raises(Refused) as refused:
            request_estimate(site_id=site.pk, by=engineer)
        assert refused.value.sentence() == "EX-A: EX-A has no survey. Hand in its survey first."

    def test_without_rates_of_the_day(self, site, engineer, district):
        a_survey(site, engineer)
        a_schedule(district, engineer, days="2025-01-01,2026-04-09")
        with pytest.raises(Refused) as refused:
            request_estimate(site_id=site.pk, by=engineer)
        assert refused.value.sentence() == (
            "EX-A: No rate schedule of Quenharra holds on 2026-04-10. "
            "Bring in the rates of this year."
        )

    @pytest.mark.parametrize(
        ("days", "words"),
        [
            ("2025-01-01,2026-04-09", "EX-A: Schedule RS-1 ended 2026-04-09."),
            ("2026-04-11,2026-12-31", "EX-A: Schedule RS-1 begins on 2026-04-11."),
        ],
    )
    def test_rates_that_do_not_hold_today(self, site, engineer, district, days, words):
        """Source: ES-02; the office refuses what the command only cautions about."""
        a_survey(site, engineer)
        schedule = a_schedule(district, engineer, days=days)
        with pytest.raises(Refused) as refused:
            request_estimate(site_id=site.pk, by=engineer, schedule_id=schedule.pk)
        assert refused.value.sentence().startswith(words)
        assert not Run.objects.filter(kind=PRICE).exists()

    @pytest.mark.parametrize("days", ["2025-01-01,2026-04-10", "2026-04-10,2026-12-31"])
    def test_rates_hold_on_their_first_and_last_day(self, site, engineer, district, days):
        a_survey(site, engineer)
        schedule = a_schedule(district, engineer, days=days)
        assert computed(site, engineer, schedule_id=schedule.pk).state == "done"

    @pytest.mark.usefixtures("schedule")
    def test_a_wall_that_cannot_be(self, site, engineer):
        a_survey(site, engineer)
        with pytest.raises(Refused) as refused:
            request_estimate(site_id=site.pk, by=engineer, wall={"thickness_m": 9.0})
        assert refused.value.findings[0].field == "wall.thickness_m"

    @pytest.mark.parametrize("role", [role for role in Role.values if role != Role.ENGINEER])
    @pytest.mark.usefixtures("schedule")
    def test_who_may_not_ask(self, site, engineer, district, role):
        a_survey(site, engineer)
        with pytest.raises(Refused, match="You may not ask for an estimate here"):
            request_estimate(site_id=site.pk, by=a_user(role, district))


@pytest.mark.usefixtures("schedule")
def test_estimates_and_runs_are_seen_where_one_serves(site, engineer):
    a_survey(site, engineer)
    run = computed(site, engineer)
    stranger = an_engineer(a_district("ZZ"))
    assert visible_estimates(engineer).count() == 1
    assert visible_estimates(stranger).count() == 0
    assert estimate_of_run(stranger, run.pk) is None
    assert visible_runs(stranger).count() == 0
    assert visible_runs(a_user(Role.AUDITOR, site.watershed.district)).filter(pk=run.pk).exists()


def test_a_file_named_like_a_site_is_no_run_of_that_site(site, engineer):
    """A run without an account carries the name of a file as its subject."""
    Run.objects.create(kind="appraisal", subject="site EX-A", digest="x", version="x")
    assert visible_runs(engineer).count() == 0
