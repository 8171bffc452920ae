"""Background jobs: claimed once, finished once, by whoever holds the fence."""

from __future__ import annotations

import threading
from datetime import timedelta

import pytest
from django.db import IntegrityError, OperationalError, transaction
from django.utils import timezone

from structures.errors import Refused
from structures.models.run import Run, WorkerPulse
from structures.runs import book, clock, queue
from structures.runs.queue import Outcome, execute, register, start_run

pytestmark = pytest.mark.django_db

DONE = []


@register("test.count", version="1")
def count(work):
    work.progress(0.5, "half way")
    return Outcome({"sum": sum(work.params["numbers"])}, lambda: DONE.append(work.params))


@register("test.refuse", version="1")
def refuse(work):
    raise Refused("The survey has no bed.", where="K-1", remedy="Survey it.")


@register("test.break", version="1")
def fall_over(work):
    raise ZeroDivisionError


@register("test.taken", version="1")
def taken(work):
    """A body so slow that another worker takes its run over in the middle."""
    Run.objects.update(lease_until=timezone.now() - timedelta(seconds=1))
    assert book.claim(work.held.run_id) is not None
    return Outcome({}, lambda: DONE.append("stale"))


@pytest.fixture(autouse=True)
def _nothing_done_yet():
    DONE.clear()


def opened(kind="test.count", **params):
    return start_run(kind=kind, params=params or {"numbers": [1, 2]}, subject="K-1")


def test_a_run_is_done_with_its_effect():
    run = opened()
    assert (run.state, run.going) == ("queued", True)
    execute(str(run.pk))
    run.refresh_from_db()
    assert (run.state, run.result, run.progress, run.attempts) == ("done", {"sum": 3}, 1.0, 1)
    assert DONE == [{"numbers": [1, 2]}]


def test_a_message_delivered_twice_does_its_work_once():
    run = opened()
    execute(str(run.pk))
    execute(str(run.pk))
    assert len(DONE) == 1


def test_the_same_inputs_show_the_old_result():
    run = opened()
    execute(str(run.pk))
    assert opened().pk == run.pk
    assert opened(numbers=[3]).pk != run.pk


def test_a_failed_run_is_computed_anew():
    run = opened("test.refuse")
    execute(str(run.pk))
    assert opened("test.refuse").pk != run.pk


def test_a_refusal_is_an_answer_and_no_error():
    run = opened("test.refuse")
    execute(str(run.pk))
    run.refresh_from_db()
    assert (run.state, run.message) == ("failed", "K-1: The survey has no bed. Survey it.")


def test_an_error_nobody_foresaw_is_written_down_and_raised():
    run = opened("test.break")
    with pytest.raises(ZeroDivisionError):
        execute(str(run.pk))
    run.refresh_from_db()
    assert run.state == "failed"
    assert "internal error" in run.message


def test_a_stale_worker_s_write_and_effect_are_refused():
    run = opened("test.taken")
    execute(str(run.pk))
    run.refresh_from_db()
    assert (run.state, run.result, run.fence) == ("running", None, 2)
    assert DONE == []


def test_progress_of_a_run_that_was_taken_over_is_refused():
    run = opened()
    held = book.claim(run.pk)
    Run.objects.update(fence=held.fence + 1)
    with pytest.raises(book.Superseded):
        book.note_progress(held, 0.5, "late")
    assert not book.renew(held)


def test_effect_and_state_are_written_together_or_not_at_all():
    run = opened()
    held = book.claim(run.pk)

    def effect():
        WorkerPulse.objects.create(name="half", seen_at=timezone.now())
        raise IntegrityError

    with pytest.raises(IntegrityError):
        book.finish(held, {}, effect)
    run.refresh_from_db()
    assert (run.state, WorkerPulse.objects.count()) == ("running", 0)


def test_a_run_that_waits_is_cancelled_at_once():
    run = opened()
    book.ask_cancel(run.pk)
    execute(str(run.pk))
    run.refresh_from_db()
    assert (run.state, DONE) == ("cancelled", [])


def test_a_run_at_work_stops_at_its_next_step():
    run = opened()
    Run.objects.filter(pk=run.pk).update(cancel_asked=True)
    execute(str(run.pk))
    run.refresh_from_db()
    assert (run.state, run.result) == ("cancelled", None)


def test_only_a_silent_worker_loses_its_run():
    run = opened()
    assert book.claim(run.pk) is not None
    assert book.claim(run.pk) is None
    Run.objects.update(lease_until=timezone.now() - timedelta(seconds=1))
    assert book.claim(run.pk).fence == 2


def test_the_sweep_sends_again_what_waits_or_lost_its_worker(settings, monkeypatch):
    sent = []
    monkeypatch.setattr(queue, "send", sent.append)
    waiting, silent, fresh = opened(numbers=[1]), opened(numbers=[2]), opened(numbers=[3])
    long_ago = timezone.now() - timedelta(seconds=settings.RUN_RESEND_SECONDS + 1)
    Run.objects.filter(pk__in=[waiting.pk, silent.pk]).update(created_at=long_ago, sent_at=long_ago)
    book.claim(silent.pk)
    Run.objects.filter(pk=silent.pk).update(lease_until=long_ago)
    assert queue.sweep() == 2
    assert set(sent) == {waiting.pk, silent.pk}
    assert fresh.pk not in sent
    assert queue.sweep() == 0


def test_a_run_that_takes_its_worker_down_again_and_again_is_given_up(settings):
    run = opened()
    past = timezone.now() - timedelta(seconds=1)
    for _ in range(settings.RUN_ATTEMPTS):
        assert book.claim(run.pk) is not None
        Run.objects.update(lease_until=past)
    assert book.claim(run.pk) is None
    book.give_up_worn_out()
    run.refresh_from_db()
    assert run.state == "failed"
    assert f"{settings.RUN_ATTEMPTS} times" in run.message


def test_the_time_left_follows_the_pace_so_far():
    """Oracle: a quarter done in 10 s leaves three times as long."""
    run = opened()
    book.claim(run.pk)
    begun = timezone.now() - timedelta(seconds=10)
    Run.objects.update(progress=0.25, started_at=begun)
    run.refresh_from_db()
    assert run.seconds_left in (30, 31)
    Run.objects.update(progress=0.01)
    run.refresh_from_db()
    assert run.seconds_left is None


@pytest.mark.parametrize(
    "wrong",
    [{"progress": 1.5}, {"state": "done"}, {"state": "running", "lease_until": None}],
)
def test_the_database_refuses_what_must_never_be(wrong):
    run = opened()
    with pytest.raises(IntegrityError), transaction.atomic():
        Run.objects.filter(pk=run.pk).update(**wrong)


def test_the_database_computes_the_same_once():
    run = opened()
    again = {"kind": run.kind, "digest": run.digest, "version": run.version}
    with pytest.raises(IntegrityError), transaction.atomic():
        Run.objects.create(**again)


def test_a_tick_shows_life():
    assert clock.last_pulse() is None
    clock.tick("here:1")
    clock.tick("here:1")
    assert WorkerPulse.objects.count() == 1
    assert timezone.now() - clock.last_pulse() < timedelta(seconds=5)


def test_a_tick_forgets_workers_not_seen_for_a_day():
    long_ago = timezone.now() - timedelta(days=1, seconds=1)
    WorkerPulse.objects.create(name="gone:1", seen_at=long_ago)
    clock.tick("here:1")
    assert list(WorkerPulse.objects.values_list("name", flat=True)) == ["here:1"]


def test_a_lease_is_renewed_again_after_the_database_failed_once(settings, monkeypatch):
    """The first renewal fails as on a locked database; the one after it must come all the same."""
    settings.RUN_LEASE_SECONDS = 0.03
    renewed = threading.Event()
    answers = iter([OperationalError("database is locked")])

    def renew(_held):
        for error in answers:
            raise error
        renewed.set()
        return True

    monkeypatch.setattr(book, "renew", renew)
    held = book.claim(opened().pk)
    with queue._lease_kept(held):
        assert renewed.wait(5.0)
