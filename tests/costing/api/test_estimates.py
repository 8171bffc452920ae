"""An estimate asked for, its run, its figures; rates; and who sees none of it."""

from __future__ import annotations

import json
import subprocess
import sys
from uuid import uuid4

import pytest

from costing.models import Estimate
from structures.actions.settings import change_setting
from structures.models import Role, Run
from structures.runs.queue import execute
from tests import factories as make

pytestmark = pytest.mark.django_db
PLACE = "/api/v1/sites/EX-A/estimates"


@pytest.fixture
def survey(site, engineer):
    return make.a_survey(site, engineer)


@pytest.fixture
def schedule(site, engineer):
    return make.a_schedule(site.watershed.district, engineer)


@pytest.fixture
def priced(office, survey, schedule):
    answer = office.post(PLACE, {}, format="json")
    assert answer.status_code == 202, answer.content
    execute(answer.json()["id"])
    return answer


def test_asking_answers_with_a_run_that_ends_in_the_commands_figures(
    priced, office, survey, schedule, tmp_path
):
    place = f"http://testserver/api/v1/runs/{priced.json()['id']}"
    assert priced["Location"] == place
    assert priced.json()["state"] == "queued"
    run = office.get(place).json()
    assert (run["state"], run["progress"], run["site"]) == ("done", 1.0, "EX-A")

    # Oracle: the same pack and rates by the command of the shell.
    pack, rates = tmp_path / "survey.json", tmp_path / "RS-1.csv"
    pack.write_bytes(make.pack_bytes())
    rates.write_bytes(make.rates_bytes())
    command = [sys.executable, "manage.py", "appraise", pack, "--rates", rates, "--json"]
    said = json.loads(subprocess.run(command, capture_output=True, check=True).stdout)
    assert run["result"]["estimate"] == said["estimate"]
    assert run["result"]["quantities"] == said["quantities"]

    listed = office.get(f"/api/v1/estimates?run={run['id']}").json()
    assert listed["count"] == 1
    told = office.get(f"/api/v1/estimates/{listed['results'][0]['id']}").json()
    assert (told["survey"], told["rate_schedule"]) == (survey.pk, schedule.pk)
    assert told["total"] == said["estimate"]["total"]
    assert told["sanction"] == said["estimate"]["sanction"]
    assert [line["amount"] for line in told["lines"]] == [
        line["amount"] for line in said["estimate"]["lines"]
    ]
    assert told["stale"] == []


def test_asking_again_gives_the_run_there_is(priced, office):
    again = office.post(PLACE, {}, format="json")
    assert again.status_code == 202
    assert again.json()["id"] == priced.json()["id"]
    assert Estimate.objects.count() == 1


def test_a_named_survey_and_schedule_and_another_wall_are_priced(office, survey, schedule, priced):
    body = {
        "survey": survey.pk,
        "rate_schedule": schedule.pk,
        "wall": {"thickness_m": 1.2},
        "id": str(uuid4()),
    }
    answers = [office.post(PLACE, body, format="json") for _ in range(2)]
    assert [one.status_code for one in answers] == [202, 202]
    assert answers[0].json() == answers[1].json()
    assert answers[0].json()["id"] != priced.json()["id"]
    execute(answers[0].json()["id"])
    told = office.get(f"{PLACE}?ordering=-version").json()["results"]
    assert [one["version"] for one in told] == [2, 1]


def test_a_site_without_a_survey_is_refused_in_words(site, office, schedule):
    answer = office.post(PLACE, {}, format="json")
    assert answer.status_code == 422
    assert answer.json()["detail"] == "EX-A: EX-A has no survey. Hand in its survey first."
    assert not Run.objects.exists()


@pytest.mark.parametrize(
    ("body", "status", "field"),
    [
        ({"survey": 987}, 400, "survey"),
        ({"rate_schedule": 987}, 400, "rate_schedule"),
        ({"survey": "newest"}, 400, "survey"),
        ({"wall": {"thickness_m": 99.0}}, 422, "wall.thickness_m"),
        ({"wall": {"thikness_m": 0.9}}, 422, "wall.thikness_m"),
    ],
)
def test_what_cannot_be_priced_names_its_field(office, survey, schedule, body, status, field):
    answer = office.post(PLACE, body, format="json")
    assert answer.status_code == status, answer.content
    assert field in {one["field"] for one in answer.json()["findings"]}
    assert not Run.objects.filter(kind="estimate.price").exists()


@pytest.mark.parametrize("role", [Role.DISTRICT, Role.PROGRAMME, Role.AUDITOR])
def test_who_may_see_money_reads_but_does_not_ask(site, priced, as_user, role):
    client = as_user(make.a_user(role, site.watershed.district))
    assert client.get("/api/v1/estimates").json()["count"] == 1
    assert client.get(f"/api/v1/runs/{priced.json()['id']}").json()["result"]["estimate"]
    assert client.post(PLACE, {}, format="json").status_code == 403


def test_field_staff_meet_no_money_anywhere(site, priced, as_user):
    field = as_user(make.a_user(Role.FIELD, site.watershed.district))
    estimate = Estimate.objects.get()
    for place in ("estimates", "rate-schedules", "sites/EX-A/estimates"):
        assert field.get(f"/api/v1/{place}").json()["count"] == 0
    assert field.get(f"/api/v1/estimates/{estimate.pk}").status_code == 404
    assert field.get(f"/api/v1/rate-schedules/{estimate.schedule_id}").status_code == 404
    assert field.post(PLACE, {}, format="json").status_code == 403
    run = field.get(f"/api/v1/runs/{priced.json()['id']}").json()
    assert (run["state"], run["result"]) == ("done", None)
    kinds = {one["kind"] for one in field.get("/api/v1/uploads").json()["results"]}
    assert kinds == {"survey"}


def test_another_district_has_none_of_it(priced, as_user):
    stranger = as_user(make.an_engineer(make.a_district("AV")))
    estimate = Estimate.objects.get()
    for place in ("estimates", "rate-schedules", "runs", "uploads", "soundings", "structures"):
        assert stranger.get(f"/api/v1/{place}").json()["count"] == 0
    for place in (
        f"estimates/{estimate.pk}",
        f"rate-schedules/{estimate.schedule_id}",
        f"runs/{priced.json()['id']}",
        f"surveys/{estimate.survey_id}",
        "structures/EX-A",
        "sites/EX-A/estimates",
    ):
        assert stranger.get(f"/api/v1/{place}").status_code == 404


def test_the_reading_of_a_survey_is_told_without_a_price(site, survey, office, as_user):
    reading = office.get(f"/api/v1/surveys/{survey.pk}").json()["reading"]
    execute(reading)
    field = as_user(make.a_user(Role.FIELD, site.watershed.district))
    found = field.get(f"/api/v1/runs/{reading}").json()["result"]
    assert found["site"] == "EX-A"
    assert found["estimate"] is None
    assert found["wall"]["length_m"] > 0


def test_only_who_asked_for_a_run_stops_it(site, office, survey, schedule, as_user):
    asked = office.post(PLACE, {}, format="json").json()["id"]
    other = as_user(make.an_engineer(site.watershed.district))
    assert other.post(f"/api/v1/runs/{asked}/cancel").status_code == 403
    answer = office.post(f"/api/v1/runs/{asked}/cancel")
    assert (answer.status_code, answer.json()["state"]) == (202, "cancelled")


def test_a_schedule_tells_its_rates_as_text(office, schedule):
    told = office.get(f"/api/v1/rate-schedules/{schedule.pk}").json()
    # Oracle: the rates of the handbook's examples as the file writes them.
    rows = [line.split(",") for line in make.rates_bytes().decode().splitlines()[1:]]
    written = {(row[0], float(row[1]) if row[1] else None): row[3] for row in rows}
    for rate in told["rates"]:
        assert float(rate["rate"]) == float(written[rate["item"], rate["from_m"]])
        assert rate["rate"] == f"{float(rate['rate']):.2f}"
    assert told["rate_count"] == len(told["rates"]) > 0


def test_a_changed_setting_is_told_by_api_and_page_and_priced_by_the_next_asking(
    priced, office, client, site, engineer
):
    district = site.watershed.district
    change_setting(
        key="film_lap_m",
        value=0.4,
        district=district,
        reason="as welded here",
        by=make.a_user(Role.DISTRICT, district),
    )
    told = "Settings were changed since: film lap 0.4 m, was 0.3 m."
    (listed,) = office.get("/api/v1/estimates").json()["results"]
    assert listed["stale"] == [told]
    client.force_login(engineer)
    assert told in client.get(f"/estimates/{listed['id']}/").content.decode()

    again = office.post(PLACE, {}, format="json").json()
    assert again["id"] != priced.json()["id"]
    execute(again["id"])
    # Oracle: handbook 6.3 by hand, gross = net w/(w - l) with l 0.40 in place of 0.30 m.
    film = {
        one["version"]: next(
            float(line["quantity"])
            for line in office.get(f"/api/v1/estimates/{one['id']}").json()["lines"]
            if line["item"] == "film"
        )
        for one in office.get("/api/v1/estimates").json()["results"]
    }
    assert film[2] == pytest.approx(film[1] * 5.7 / 5.6, abs=0.01)
    stale = {
        one["version"]: one["stale"] for one in office.get("/api/v1/estimates").json()["results"]
    }
    assert stale[2] == []
