"""What every test stands on: one hypothesis profile, and no file of the running site."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest
from django.conf import settings
from django.db import connection
from django.test import override_settings
from hypothesis import settings as hypothesis_settings

from config.celery import app, folder_options

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pytest_django import DjangoDbBlocker

# The same examples every time: a law that fails must fail for everyone.
hypothesis_settings.register_profile("underbund", deadline=None, derandomize=True)
hypothesis_settings.load_profile("underbund")

PLAIN_FILES = {"BACKEND": "django.contrib.staticfiles.storage.StaticFilesStorage"}


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    if settings.DATABASES["default"]["ENGINE"].endswith("postgresql"):
        return
    for item in items:
        if item.get_closest_marker("postgres"):
            item.add_marker(pytest.mark.skip(reason="DATABASE_URL does not name PostgreSQL"))


@pytest.fixture(scope="session", autouse=True)
def apart_from_the_running_site(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Uploads, static files and the local queue of the tests lie in a folder of their own."""
    folder = tmp_path_factory.mktemp("state")
    queue, static = folder / "queue", folder / "static"
    queue.mkdir()
    static.mkdir()
    if not settings.QUEUE_URL:
        app.conf.broker_transport_options = folder_options(queue)
    storages = {**settings.STORAGES, "staticfiles": PLAIN_FILES}
    with override_settings(
        MEDIA_ROOT=folder / "files",
        STATIC_ROOT=static,
        QUEUE_FOLDER=queue,
        STORAGES=storages,
    ):
        yield


@pytest.fixture(scope="session")
def django_db_setup(django_db_setup: None, django_db_blocker: DjangoDbBlocker) -> None:
    """Let SQLite empty the register between tests; the test of its trigger puts it back."""
    with django_db_blocker.unblock(), connection.cursor() as cursor:
        if connection.vendor == "sqlite":
            cursor.execute("SELECT name FROM sqlite_master WHERE name LIKE '%\\_kept' ESCAPE '\\'")
            for (name,) in cursor.fetchall():
                cursor.execute(f"DROP TRIGGER {name}")
