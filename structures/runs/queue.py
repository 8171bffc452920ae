"""Kinds of run, sending after commit, and the one task that carries them out."""

from __future__ import annotations

import logging
import threading
from contextlib import contextmanager
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING, Any
from uuid import UUID

from celery import shared_task
from django.conf import settings
from django.db import DatabaseError, close_old_connections, connection, transaction
from django.utils import timezone
from kombu.exceptions import OperationalError

from structures.errors import Refused
from structures.models.run import Run
from structures.runs import book

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from structures.models.people import User

log = logging.getLogger(__name__)


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a body found, and what it changes: `effect` runs in the transaction that ends the run."""

    result: dict[str, Any]
    effect: Callable[[], None] | None = None


@dataclass(frozen=True, slots=True)
class Work:
    """What a body is given: its parameters, and where to say how far it is."""

    held: book.Claim

    @property
    def params(self) -> dict[str, Any]:
        return self.held.params

    def progress(self, share: float, message: str) -> None:
        book.note_progress(self.held, share, message)


@dataclass(frozen=True, slots=True)
class Kind:
    version: str
    body: Callable[[Work], Outcome]


_KINDS: dict[str, Kind] = {}


def register(name: str, *, version: str) -> Callable[[Callable[[Work], Outcome]], Any]:
    """Make a body known as a kind of run; another version computes anew."""

    def keep(body: Callable[[Work], Outcome]) -> Callable[[Work], Outcome]:
        _KINDS[name] = Kind(version, body)
        return body

    return keep


def start_run(
    *, kind: str, params: dict[str, Any], subject: str = "", asked_by: User | None = None
) -> Run:
    """Open a run and send it after commit; the same inputs give the run there is already."""
    run, new = book.open_run(
        kind=kind,
        version=_KINDS[kind].version,
        params=params,
        subject=subject,
        asked_by=asked_by,
    )
    if new:
        transaction.on_commit(partial(send, run.pk))
    return run


def send(run_id: UUID) -> None:
    """Put the run's number on the queue; where the queue does not answer, the sweep sends later."""
    try:
        execute.delay(str(run_id))
    except (OperationalError, OSError):
        log.warning("The queue does not take run %s; it is sent again later.", run_id)
        return
    Run.objects.filter(pk=run_id, state=Run.State.QUEUED).update(sent_at=timezone.now())


def sweep() -> int:
    """Send again what waits too long or lost its worker."""
    book.give_up_worn_out()
    lost = book.waiting_too_long()
    for run_id in lost:
        send(run_id)
    return len(lost)


@shared_task(name="runs.execute", ignore_result=True)
def execute(run_id: str) -> None:
    held = book.claim(UUID(run_id))
    if held is None:
        return
    try:
        with _lease_kept(held):
            outcome = _KINDS[held.kind].body(Work(held))
            book.finish(held, outcome.result, outcome.effect)
    except book.Superseded:
        log.warning("Run %s was taken over by another worker; its result is dropped here.", run_id)
    except book.CancelAsked:
        book.stop(held)
    except Refused as refused:
        book.fail(held, refused.sentence())
    except Exception:
        book.fail(held, f"Run {run_id} stopped on an internal error; see the worker's log.")
        raise


@contextmanager
def _lease_kept(held: book.Claim) -> Iterator[None]:
    """Renew the lease while a body is at work, so that only a dead worker loses its run."""
    over = threading.Event()

    def keep() -> None:
        try:
            while not over.wait(settings.RUN_LEASE_SECONDS / 3):
                close_old_connections()
                try:
                    if not book.renew(held):
                        return
                except DatabaseError:
                    log.exception("The lease of run %s was not renewed; tried again.", held.run_id)
        finally:
            connection.close()

    keeper = threading.Thread(target=keep, name=f"lease-{held.run_id}", daemon=True)
    keeper.start()
    try:
        yield
    finally:
        over.set()
        keeper.join()
