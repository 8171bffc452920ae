"""Whether database, queue and a worker answer, each asked with little patience."""

from __future__ import annotations

import logging
import tempfile
from datetime import timedelta
from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.db import DatabaseError, connection
from django.utils import timezone
from kombu import Connection
from kombu.exceptions import OperationalError

from structures.runs.clock import last_pulse

if TYPE_CHECKING:
    from collections.abc import Callable

log = logging.getLogger(__name__)
BROKER_PATIENCE_S: Final = 2  # a prober asks again soon; a request must not hang on a dead server
WELL: Final = "ok"


def readiness() -> dict[str, str]:
    """Ask each part; "ok", or what is wrong with it."""
    return {name: ask() for name, ask in PARTS.items()}


def database_answer() -> str:
    try:
        with connection.cursor() as cursor:
            cursor.execute("SELECT 1")
    except DatabaseError:
        log.exception("The database does not answer.")
        return "does not answer"
    return WELL


def queue_answer() -> str:
    return _server_answer() if settings.QUEUE_URL else _folder_answer()


def worker_answer() -> str:
    try:
        seen = last_pulse()
    except DatabaseError:
        return "not known: its sign of life stands in the database"
    if seen is None:
        return "has never been seen"
    silent = timezone.now() - seen
    if silent > timedelta(seconds=settings.WORKER_SILENT_SECONDS):
        return f"silent for {silent.total_seconds():.0f} s"
    return WELL


def _folder_answer() -> str:
    try:
        with tempfile.TemporaryFile(dir=settings.QUEUE_FOLDER) as trial:
            trial.write(b"1")
            trial.flush()
    except OSError as error:
        return f"cannot be written: {error.strerror}"
    return WELL


def _server_answer() -> str:
    patience = {
        "socket_connect_timeout": BROKER_PATIENCE_S,
        "socket_timeout": BROKER_PATIENCE_S,
    }
    redis = settings.QUEUE_URL.startswith("redis")
    queue = Connection(
        settings.QUEUE_URL,
        connect_timeout=BROKER_PATIENCE_S,
        transport_options=patience if redis else {},
    )
    try:
        queue.ensure_connection(max_retries=1, interval_start=0, timeout=BROKER_PATIENCE_S)
    except (OperationalError, OSError):
        log.exception("The queue does not answer.")
        return "does not answer"
    finally:
        queue.release()
    return WELL


PARTS: Final[dict[str, Callable[[], str]]] = {
    "database": database_answer,
    "queue": queue_answer,
    "worker": worker_answer,
}
