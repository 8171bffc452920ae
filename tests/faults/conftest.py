"""Programs to break: one with everything embedded, one on PostgreSQL and Redis."""

from __future__ import annotations

import os
from contextlib import contextmanager

import psycopg
import pytest
import redis

from tests.faults.program import Program

DATABASE = os.environ.get("CI_DATABASE_URL", "postgres://postgres@127.0.0.1:5432/postgres")
QUEUE = os.environ.get("CI_QUEUE_URL", "redis://127.0.0.1:6379/9")
OWN_NUMBERS = range(12, 16)  # of Redis; other tests use lower ones
PATIENCE_S = 2


@pytest.fixture(scope="session")
def embedded(tmp_path_factory):
    program = Program(tmp_path_factory.mktemp("embedded"))
    yield program
    program.close()


@pytest.fixture(scope="session")
def servers(tmp_path_factory):
    with own_database() as database, own_queue() as queue:
        folder = tmp_path_factory.mktemp("servers")
        program = Program(folder, DATABASE_URL=database, QUEUE_URL=queue)
        yield program
        program.close()


@pytest.fixture(params=["embedded", "servers"])
def program(request):
    found = request.getfixturevalue(request.param)
    yield found
    found.empty()


@contextmanager
def own_database():
    """Make a database for this test run alone, and drop it."""
    name = f"underbund_fault_{os.getpid()}"
    try:
        server = psycopg.connect(DATABASE, autocommit=True, connect_timeout=PATIENCE_S)
    except psycopg.OperationalError as error:
        pytest.skip(f"PostgreSQL does not answer: {error}")
    with server:
        server.execute(f"CREATE DATABASE {name}")
        try:
            yield address(server.info, name)
        finally:
            server.execute(f"DROP DATABASE {name} WITH (FORCE)")


def address(info, name):
    password = f":{info.password}" if info.password else ""
    return f"postgres://{info.user}{password}@{info.host}:{info.port}/{name}"


@contextmanager
def own_queue():
    """Take a number of Redis under which nobody keeps anything, and leave it as empty."""
    host = QUEUE.rpartition("/")[0]
    try:
        number = next(n for n in OWN_NUMBERS if redis.from_url(f"{host}/{n}").dbsize() == 0)
    except redis.ConnectionError as error:
        pytest.skip(f"Redis does not answer: {error}")
    yield f"{host}/{number}"
    with redis.from_url(f"{host}/{number}") as own:
        own.flushdb()
