"""Writes that come twice at once, or break half-way: one effect, one answer."""

from __future__ import annotations

import threading
from concurrent.futures import ThreadPoolExecutor

import pytest
from django.db import connection, connections
from rest_framework.test import APIClient

from structures.actions.devices import Answered, carry_out_once
from structures.models import DeviceToken, SentWrite, Survey, Upload
from tests import factories as make

SENDERS = 4


@pytest.fixture
def token(engineer):
    _, token = DeviceToken.objects.create(
        user=engineer, session_hash=engineer.get_session_auth_hash()
    )
    return token


def at_once(send):
    """Send at the same moment from each sender; give the answers."""
    gate = threading.Barrier(SENDERS)

    def one(number):
        try:
            gate.wait()
            return send(number)
        finally:
            connections.close_all()

    with ThreadPoolExecutor(SENDERS) as pool:
        return list(pool.map(one, range(SENDERS)))


def survey_from(token, key):
    client = APIClient()
    client.credentials(HTTP_AUTHORIZATION=f"Token {token}")
    return client.post(
        "/api/v1/sites/EX-A/surveys",
        make.pack_bytes(),
        content_type="application/json",
        headers={"Idempotency-Key": key},
    )


@pytest.mark.postgres
@pytest.mark.django_db(transaction=True)
def test_one_key_from_four_senders_at_once_is_one_survey(token):
    answers = at_once(lambda _: survey_from(token, "same"))
    assert [one.status_code for one in answers] == [201] * SENDERS
    assert all(one.json() == answers[0].json() for one in answers)
    assert sorted(one.has_header("Idempotency-Replayed") for one in answers) == [
        False,
        *[True] * (SENDERS - 1),
    ]
    assert Survey.objects.count() == Upload.objects.count() == SentWrite.objects.count() == 1


@pytest.mark.postgres
@pytest.mark.django_db(transaction=True)
def test_two_edits_at_once_of_one_revision_are_one_edit(token, site):
    def edit(number):
        client = APIClient()
        client.credentials(HTTP_AUTHORIZATION=f"Token {token}")
        return client.patch(
            "/api/v1/sites/EX-A",
            {"name": f"ford {number}"},
            format="json",
            headers={"If-Match": '"1"'},
        )

    answers = at_once(edit)
    assert sorted(one.status_code for one in answers) == [200, *[412] * (SENDERS - 1)]
    site.refresh_from_db()
    assert site.revision == 2


@pytest.mark.django_db(transaction=True)
def test_a_write_that_breaks_leaves_neither_effect_nor_key(engineer, site):
    def write():
        type(site).objects.filter(pk=site.pk).update(name="half")
        raise RuntimeError("the power went")

    with pytest.raises(RuntimeError):
        carry_out_once(by=engineer, key="k", digest="d", write=write)
    site.refresh_from_db()
    assert site.name == "the ford"
    assert not SentWrite.objects.exists()
    answered = carry_out_once(by=engineer, key="k", digest="d", write=lambda: Answered(200, "ok"))
    assert answered == Answered(200, "ok")


@pytest.mark.django_db
def test_a_key_is_forgotten_after_its_days(engineer):
    carry_out_once(by=engineer, key="k", digest="d", write=lambda: Answered(200, 1))
    with connection.cursor() as cursor:
        cursor.execute("UPDATE structures_sentwrite SET at = '2020-01-01 00:00:00+00'")
    answered = carry_out_once(by=engineer, key="k", digest="e", write=lambda: Answered(200, 2))
    assert answered == Answered(200, 2)
