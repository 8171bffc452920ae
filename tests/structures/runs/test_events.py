"""What happens starts the runs that wait for it, once a cause."""

from __future__ import annotations

import pytest

from structures.models import Run
from structures.runs import events, queue

pytestmark = pytest.mark.django_db


@pytest.fixture
def _waiting(monkeypatch):
    monkeypatch.setattr(events, "_WAITING", {})
    monkeypatch.setattr(queue, "_KINDS", {**queue._KINDS})
    queue.register("trial.forecast", version="1")(lambda _: queue.Outcome({}))


@pytest.mark.usefixtures("_waiting")
def test_a_cause_starts_one_run_of_each_kind_that_waits():
    events.await_event(events.ROCK_FOUND, kind="trial.forecast")
    events.await_event(events.ROCK_FOUND, kind="trial.forecast")
    first = events.happened(events.ROCK_FOUND, 7, cause="level-1", subject="site OD-03")
    again = events.happened(events.ROCK_FOUND, 7, cause="level-1", subject="site OD-03")
    other = events.happened(events.ROCK_FOUND, 7, cause="level-2")
    assert first == again != other
    told = list(Run.objects.order_by("created_at").values_list("params", flat=True))
    assert told == [
        {"structure": 7, "cause": "level-1"},
        {"structure": 7, "cause": "level-2"},
    ]


@pytest.mark.usefixtures("_waiting")
def test_where_nobody_waits_nothing_is_started():
    assert events.happened(events.ROCK_FOUND, 7, cause="level-1") == ()
    assert not Run.objects.exists()


def test_a_name_that_nothing_has_is_a_slip():
    with pytest.raises(KeyError, match="rock-fund"):
        events.await_event("rock-fund", kind="trial.forecast")
