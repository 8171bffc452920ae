"""Bills by the API: a draft is written once, read by who may see money, decided nowhere here."""

from __future__ import annotations

import pytest
from django.core.cache import cache
from rest_framework.test import APIClient

from costing.models import Bill
from tests.costing.works_office import a_works_office, measured, pipes_and_markers

pytestmark = pytest.mark.django_db
PLACE = "/api/v1/bills"


@pytest.fixture
def office():
    cache.clear()
    office = a_works_office()
    pipes_and_markers(office)
    return office


def client_of(user):
    client = APIClient()
    client.force_login(user)
    return client


def body(**changes):
    return {"site": "OD-01", "number": "RB1", "billed_on": "2026-04-10", **changes}


def test_a_draft_is_written_once_however_often_it_is_sent(office):
    """Oracle: 2 x 3900.00 + 7 x 650.00 = 12350.00."""
    client = client_of(office.engineer)
    answers = [
        client.post(PLACE, body(), format="json", headers={"Idempotency-Key": "b-1"})
        for _ in range(2)
    ]
    assert [one.status_code for one in answers] == [201, 201]
    assert answers[1]["Idempotency-Replayed"] == "true"
    assert answers[0].json() == answers[1].json()
    told = answers[0].json()
    assert (told["state"], told["claimed"], told["payable"]) == ("draft", "12350.00", None)
    assert [(one["item"], one["amount"]) for one in told["lines"]] == [
        ("marker", "4550.00"),
        ("observation_pipe", "7800.00"),
    ]
    assert Bill.objects.count() == 1
    listed = client.get(f"{PLACE}?site=OD-01&state=draft").json()
    assert [one["number"] for one in listed["results"]] == ["RB1"]
    assert client.get(answers[0]["Location"]).json()["lines"] == told["lines"]


def test_a_blocked_line_refuses_the_bill_and_says_why(office):
    """Oracle: BL-04 and BL-05."""
    line = {"line": 1, "entry": "OD-01-wall-marker", "quantity": "7.50", "rate": "651.00"}
    answer = client_of(office.engineer).post(PLACE, body(lines=[line]), format="json")
    assert answer.status_code == 422
    text = answer.content.decode()
    assert "Billed 7.50, measured 7.00 each" in text
    assert "rate 651.00, contract 650.00" in text
    assert not Bill.objects.exists()


@pytest.mark.parametrize("who", ["field", "officer", "stranger"])
def test_only_an_engineer_of_the_place_writes(office, who):
    users = {"field": office.trench.field, "officer": office.officer}
    if who == "stranger":
        from tests.factories import a_district, an_engineer  # noqa: PLC0415 -- of this case only

        users[who] = an_engineer(a_district("XX"))
    answer = client_of(users[who]).post(PLACE, body(), format="json")
    assert answer.status_code == (404 if who == "stranger" else 403)
    assert not Bill.objects.exists()


def test_field_staff_read_no_bill_and_nobody_decides_here(office):
    measured(office, None, "dewatering", "3.00", checked=False)
    client = client_of(office.engineer)
    place = client.post(PLACE, body(), format="json")["Location"]
    assert client_of(office.trench.field).get(place).status_code == 404
    assert client_of(office.trench.field).get(PLACE).json()["count"] == 0
    for method in (client.put, client.patch, client.delete):
        assert method(place, {"state": "decided"}, format="json").status_code == 405
