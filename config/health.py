"""/healthz: this process lives. /readyz: database, queue and a worker answer."""

from __future__ import annotations

import logging
import tempfile
from datetime import timedelta
from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.db import DatabaseError, connection
from django.http import JsonResponse
from django.utils import timezone
from django.views.decorators.cache import never_cache
from django.views.decorators.http import require_safe
from kombu import Connection
from kombu.exceptions import OperationalError

from structures.runs.clock import last_pulse

if TYPE_CHECKING:
    from collections.abc import Callable

    from django.http import HttpRequest

log = logging.getLogger(__name__)
BROKER_PATIENCE_S: Final = 2  # a prober asks again soon; a request must not hang on a dead server
WELL: Final = "ok"


@require_safe
@never_cache
def healthz(request: HttpRequest) -> JsonResponse:  # noqa: ARG001 -- the framework's form
    return JsonResponse({"process": WELL})


@require_safe
@never_cache
def readyz(request: HttpRequest) -> JsonResponse:  # noqa: ARG001 -- the framework's form
    parts = {name: ask() for name, ask in PARTS.items()}
    whole = all(answer == WELL for answer in parts.values())
    return JsonResponse(parts, status=200 if whole else 503)


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
