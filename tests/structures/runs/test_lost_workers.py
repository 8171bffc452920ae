"""Workers that are killed in the middle of two hundred runs: each is done once, with one effect."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from urllib.parse import urlsplit

import psycopg
import pytest

from tests.config.site_copy import clean_environment, command, whole_copy

RUNS = 200
WORKERS = 2
PATIENCE_S = 180.0
KILLED_AT = (60, 140)  # runs done when a worker is killed from outside, whatever it is at

# Four runs kill their own worker at their first attempt: two while they compute, and two when
# result and effect are written but their transaction is still open.
BODIES = """

import os, signal, uuid
from django.utils import timezone
from structures.models.run import Run, WorkerPulse


def die_once(work):
    if Run.objects.get(pk=work.held.run_id).attempts == 1:
        os.kill(os.getpid(), signal.SIGKILL)


@register("test.strip", version="1")
def strip(work):
    number = work.params["number"]
    work.progress(0.5, "half way")
    if number in (20, 120):
        die_once(work)

    def effect():
        WorkerPulse.objects.create(name=f"effect {number} {uuid.uuid4()}", seen_at=timezone.now())
        if number in (80, 170):
            die_once(work)

    return Outcome({"number": number}, effect)
"""
SHORT_TIMES = """
RUN_LEASE_SECONDS = 2
RUN_RESEND_SECONDS = 2
RUN_SWEEP_SECONDS = 0.5
"""
DRIVER = """
import json, sys, time
import django
django.setup()
from django.db.models import Count
from structures.models.run import Run, WorkerPulse
from structures.runs.queue import start_run
count = int(sys.argv[1])
for number in range(count):
    start_run(kind="test.strip", params={"number": number}, subject=f"strip {number}")
done = -1
while done < count and not Run.objects.filter(state__in=("failed", "cancelled")).exists():
    done = Run.objects.filter(state="done").count()
    print(done, flush=True)
    time.sleep(0.1)
states = Run.objects.order_by().values_list("state").annotate(Count("pk"))
effects = WorkerPulse.objects.filter(name__startswith="effect ").values_list("name", flat=True)
again = Run.objects.filter(attempts__gt=1).values_list("result__number", flat=True)
told = {
    "states": dict(states),
    "effects": sorted(int(name.split()[1]) for name in effects),
    "again": sorted(again),
}
print(json.dumps(told), flush=True)
"""


@pytest.fixture
def servers():
    """Give where runs and messages lie: PostgreSQL and Redis where they are set, else nothing."""
    database, queue = os.environ.get("DATABASE_URL", ""), os.environ.get("QUEUE_URL", "")
    if not (database.startswith("postgres") and queue):
        yield {}
        return
    own = f"test_lost_workers_{os.getpid()}"
    with psycopg.connect(database, autocommit=True) as server:
        server.execute(f"CREATE DATABASE {own}")
        yield {
            "DATABASE_URL": urlsplit(database)._replace(path=f"/{own}").geturl(),
            "QUEUE_URL": queue,
        }
        server.execute(f"DROP DATABASE {own} WITH (FORCE)")


@pytest.fixture
def workers(tmp_path, servers):
    """Keep workers alive: `mend()` starts the dead ones again."""
    going = []

    def mend():
        going[:] = [one for one in going if one.poll() is None]
        while len(going) < WORKERS:
            going.append(process(tmp_path, servers, "manage.py", "worker"))
        return going

    yield mend
    for one in going:
        one.kill()
        one.wait()


def process(folder, servers, *arguments, **options):
    return subprocess.Popen(
        [sys.executable, *arguments],
        cwd=folder,
        env=clean_environment(DJANGO_SETTINGS_MODULE="config.settings", **servers),
        **options,
    )


@pytest.mark.fault
def test_two_hundred_runs_outlive_workers_killed_in_their_midst(tmp_path, servers, workers):
    folder = whole_copy(tmp_path)
    with (folder / "costing" / "tasks.py").open("a") as tasks:
        tasks.write(BODIES)
    with (folder / "config" / "settings.py").open("a") as settings:
        settings.write(SHORT_TIMES)
    made = command(folder, "set_up", "--empty", **servers)
    assert made.returncode == 0, made.stderr

    driver = process(folder, servers, "-c", DRIVER, str(RUNS), stdout=subprocess.PIPE, text=True)
    kills = list(KILLED_AT)
    began = time.monotonic()
    with driver:
        for line in driver.stdout:
            alive = workers()
            if line.startswith("{"):
                told = json.loads(line)
            elif kills and int(line) >= kills[0]:
                kills.pop(0)
                alive[0].send_signal(signal.SIGKILL)
            if time.monotonic() - began > PATIENCE_S:
                driver.kill()
    assert driver.returncode == 0
    assert kills == []
    assert told["states"] == {"done": RUNS}
    assert told["effects"] == list(range(RUNS))
    assert {20, 80, 120, 170} <= set(told["again"])
