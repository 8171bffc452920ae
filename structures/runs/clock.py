"""What a worker does by time: shows that it lives, and sends again what was lost."""

from __future__ import annotations

import logging
import os
import socket
import threading
from datetime import timedelta
from typing import TYPE_CHECKING, Final

from celery.signals import worker_ready, worker_shutdown
from django.conf import settings
from django.db import DatabaseError, close_old_connections, connection
from django.utils import timezone

from structures.models.run import WorkerPulse
from structures.runs.queue import sweep

if TYPE_CHECKING:
    from datetime import datetime

log = logging.getLogger(__name__)
PULSES_KEPT: Final = timedelta(days=1)  # every start of a worker has a name of its own
_over = threading.Event()


def last_pulse() -> datetime | None:
    """When any worker last showed that it lives."""
    newest = WorkerPulse.objects.order_by("-seen_at").first()
    return None if newest is None else newest.seen_at


def tick(name: str) -> None:
    """Show life and sweep once."""
    now = timezone.now()
    WorkerPulse.objects.update_or_create(name=name, defaults={"seen_at": now})
    WorkerPulse.objects.filter(seen_at__lt=now - PULSES_KEPT).delete()
    sweep()


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
