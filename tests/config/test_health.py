"""/healthz and /readyz. Oracle: the sentence on them in the interfaces of the project."""

from __future__ import annotations

from datetime import timedelta

import pytest
from django.utils import timezone

from structures.models.run import WorkerPulse


def seen(ago_s):
    WorkerPulse.objects.create(name="one", seen_at=timezone.now() - timedelta(seconds=ago_s))


def test_healthz_answers_without_a_database(client):
    answer = client.get("/healthz")
    assert (answer.status_code, answer.json()) == (200, {"process": "ok"})
    assert "no-store" in answer["Cache-Control"]


def test_no_answer_allows_foreign_or_inline_scripts(client):
    policy = client.get("/healthz")["Content-Security-Policy"]
    assert "default-src 'self'" in policy
    assert "unsafe" not in policy
    assert "http" not in policy


@pytest.mark.django_db
def test_readyz_is_ready_while_database_queue_and_worker_answer(client):
    seen(ago_s=1)
    answer = client.get("/readyz")
    assert answer.json() == {"database": "ok", "queue": "ok", "worker": "ok"}
    assert answer.status_code == 200


@pytest.mark.django_db
def test_readyz_tells_that_no_worker_was_ever_seen(client):
    answer = client.get("/readyz")
    assert answer.status_code == 503
    assert answer.json() == {"database": "ok", "queue": "ok", "worker": "has never been seen"}


@pytest.mark.django_db
def test_readyz_tells_that_the_worker_fell_silent(client):
    seen(ago_s=100)
    answer = client.get("/readyz")
    assert answer.status_code == 503
    assert answer.json()["worker"] == "silent for 100 s"


@pytest.mark.django_db
def test_readyz_tells_that_the_queue_has_no_folder(client, settings, tmp_path):
    seen(ago_s=1)
    settings.QUEUE_URL = ""
    settings.QUEUE_FOLDER = tmp_path / "gone"
    answer = client.get("/readyz")
    assert answer.status_code == 503
    assert answer.json()["queue"] == "cannot be written: No such file or directory"


@pytest.mark.django_db
def test_readyz_tells_that_the_queue_server_is_away(client, settings):
    """Port 9 (discard) of this machine is closed: a real refused connection."""
    seen(ago_s=1)
    settings.QUEUE_URL = "redis://127.0.0.1:9/0"
    answer = client.get("/readyz")
    assert answer.status_code == 503
    assert answer.json() == {"database": "ok", "queue": "does not answer", "worker": "ok"}


@pytest.mark.parametrize("address", ["/healthz", "/readyz"])
def test_nothing_is_written_by_asking(client, address):
    assert client.post(address).status_code == 405
