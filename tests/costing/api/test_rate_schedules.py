"""A rate schedule brought in by a program: compared, kept, refused, sent twice."""

from __future__ import annotations

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from costing.models import RateSchedule
from structures.models import Role
from tests import factories as make

pytestmark = pytest.mark.django_db
PLACE = "/api/v1/rate-schedules"
NAMED = {"Content-Disposition": 'attachment; filename="RS-2.csv"'}


def send(client, data, query="", **headers):
    return client.post(PLACE + query, data, content_type="text/csv", headers={**NAMED, **headers})


def test_a_schedule_is_compared_before_it_is_kept(office):
    answer = send(office, make.rates_bytes(), "?preview=true")
    assert answer.status_code == 200, answer.content
    assert answer.json()["follows"] is None
    assert {one["kind"] for one in answer.json()["changes"]} == {"added"}
    assert not RateSchedule.objects.exists()


def test_a_schedule_is_kept_under_the_name_of_its_file(office):
    answer = send(office, make.rates_bytes())
    assert answer.status_code == 201, answer.content
    told = answer.json()
    assert (told["code"], told["version"], told["district"]) == ("RS-2", 1, "QU")
    assert office.get(answer["Location"]).json() == told
    changed = send(office, make.rates_bytes(clay="999.00"), "?preview=1").json()
    assert changed["follows"] == 1
    assert [(one["item"], one["after"]) for one in changed["changes"]] == [("clay", "999.0000")]


def test_a_form_is_taken_and_a_second_sending_changes_nothing(office):
    answers = [
        office.post(
            f"{PLACE}?district=QU",
            {"file": SimpleUploadedFile("RS-3.csv", make.rates_bytes())},
            headers={"Idempotency-Key": "rates-1"},
        )
        for _ in range(2)
    ]
    assert [one.status_code for one in answers] == [201, 201]
    assert answers[0].json() == answers[1].json()
    assert RateSchedule.objects.count() == 1


def test_an_unknown_item_is_named(office):
    answer = send(office, make.rates_bytes() + b"\nmoonlight,,m3,4.00,INR\n")
    assert answer.status_code == 422
    assert "moonlight" in answer.json()["detail"]
    assert not RateSchedule.objects.exists()


@pytest.mark.parametrize("role", [Role.FIELD, Role.PROGRAMME, Role.AUDITOR, Role.ADMIN])
def test_who_may_not_bring_rates_in_is_told_so(site, as_user, role):
    client = as_user(make.a_user(role, site.watershed.district))
    answer = send(client, make.rates_bytes())
    assert answer.status_code == 403
    assert not RateSchedule.objects.exists()


def test_who_serves_in_two_districts_names_one(site, as_user, engineer):
    other = make.a_district("AV")
    make.a_posting(engineer, Role.ENGINEER, other)
    client = as_user(engineer)
    assert send(client, make.rates_bytes()).status_code == 400
    assert send(client, make.rates_bytes(), "?district=AV").status_code == 201
    assert send(client, make.rates_bytes(), "?district=XX").status_code == 404
