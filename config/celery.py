"""The queue: a folder in .data/, or Redis or RabbitMQ by QUEUE_URL. Only numbers travel on it."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING, Any

from celery import Celery
from django.conf import settings

if TYPE_CHECKING:
    from pathlib import Path

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")


def folder_options(folder: Path) -> dict[str, Any]:
    """Give what the filesystem transport needs: one folder, written and read by everyone."""
    return {
        "data_folder_in": str(folder),
        "data_folder_out": str(folder),
        "control_folder": str(folder / "control"),
    }


def make_folder() -> None:
    """Make the local queue's folder, readable by its owner alone; a server needs none."""
    if not settings.QUEUE_URL:
        (settings.QUEUE_FOLDER / "control").mkdir(mode=0o700, parents=True, exist_ok=True)


app = Celery("underbund", set_as_current=True)
app.conf.update(
    broker_url=settings.QUEUE_URL or "filesystem://localhost/",
    broker_transport_options=(
        {"socket_connect_timeout": 5}
        if settings.QUEUE_URL
        else folder_options(settings.QUEUE_FOLDER)
    ),
    broker_connection_retry_on_startup=True,
    broker_connection_max_retries=None,  # a queue that was away for a night is found again
    task_default_queue="underbund",
    task_serializer="json",
    accept_content=["json"],
    task_ignore_result=True,
    # A message is done with only after its run; a run that is sent twice is claimed once.
    task_acks_late=True,
    worker_prefetch_multiplier=1,
    worker_hijack_root_logger=False,
    timezone=settings.TIME_ZONE,
    enable_utc=True,
)
