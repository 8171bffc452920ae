"""What a worker does by time: shows that it lives, sends again what was lost, begins the day."""

from __future__ import annotations

import logging
import os
import socket
import threading
from datetime import timedelta
from typing import TYPE_CHECKING, Final

from celery.signals import worker_ready, worker_shutdown
from django.conf import settings
from django.db import DatabaseError, close_old_connections, connection, transaction
from django.db.models import Q
from django.utils import timezone

from structures.models.run import WorkerPulse
from structures.models.upkeep import Job
from structures.runs.queue import start_run, sweep

if TYPE_CHECKING:
    from datetime import date, datetime

log = logging.getLogger(__name__)
PULSES_KEPT: Final = timedelta(days=1)  # every start of a worker has a name of its own
_over = threading.Event()
_DAILY: dict[str, str] = {}  # job -> kind of the run that does it


def last_pulse() -> datetime | None:
    """When any worker last showed that it lives."""
    newest = WorkerPulse.objects.order_by("-seen_at").first()
    return None if newest is None else newest.seen_at


def every_day(job: str, *, kind: str) -> None:
    """Have a run of a kind started once a day; its parameter is the day."""
    _DAILY[job] = kind


def claim_day(job: str, day: date) -> bool:
    """Whether this caller, and no other, does the job on that day."""
    Job.objects.get_or_create(name=job)
    # One conditional update: of all workers that come at once, one changes the row.
    undone = Q(last_done_on=None) | Q(last_done_on__lt=day)
    return bool(Job.objects.filter(undone, name=job).update(last_done_on=day))


def start_daily(day: date) -> None:
    """Start what is due today; day and run are kept together, or neither."""
    for job, kind in _DAILY.items():
        if Job.objects.filter(name=job, last_done_on__gte=day).exists():
            continue
        with transaction.atomic():
            if claim_day(job, day):
                start_run(kind=kind, params={"day": day.isoformat()})


def tick(name: str) -> None:
    """Show life, sweep once, and begin the day's work where nobody has."""
    now = timezone.now()
    WorkerPulse.objects.update_or_create(name=name, defaults={"seen_at": now})
    WorkerPulse.objects.filter(seen_at__lt=now - PULSES_KEPT).delete()
    sweep()
    start_daily(timezone.localdate())


@worker_ready.connect
def start_clock(**_: object) -> None:
    _over.clear()
    threading.Thread(target=_go_on, name="clock", daemon=True).start()


@worker_shutdown.connect
def stop_clock(**_: object) -> None:
    _over.set()


def _go_on() -> None:
    name = f"{socket.gethostname()}:{os.getpid()}"
    try:
        while not _over.is_set():
            close_old_connections()
            try:
                tick(name)
            except (DatabaseError, OSError):
                log.exception("The clock missed a beat and goes on.")
            _over.wait(settings.RUN_SWEEP_SECONDS)
    finally:
        connection.close()
