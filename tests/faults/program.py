"""A copy of the program with trial runs, whose workers a test starts, kills and pauses."""

from __future__ import annotations

import shutil
import sqlite3
import subprocess
import sys
from functools import partial
from pathlib import Path

import psycopg

from tests.config import site_copy
from tests.config.site_copy import clean_environment, whole_copy

TRIAL = Path(__file__).with_name("trial")
# The environment is the one of this test run: a killed process must never be one that mends it.
RUN = "import sys, manage; sys.exit(manage.run_django(sys.argv[1:]))"
PATIENCE_S = 120  # a worker is up in two seconds, and in ten on a machine with other work
wait_until = partial(site_copy.wait_until, patience_s=PATIENCE_S)


class Program:
    """The copy, its database as a test may look at it, and the processes started in it."""

    def __init__(self, folder, **environ):
        self.folder = whole_copy(folder)
        shutil.copytree(TRIAL, folder / "trial", ignore=shutil.ignore_patterns("*.pyc"))
        self.environ = {"DJANGO_SETTINGS_MODULE": "trial.settings", **environ}
        self.processes = []
        self.command("set_up", "--empty")
        self.database = self.connect()
        self.sql("CREATE TABLE trial_effect (run text NOT NULL)")
        self.sql("CREATE TABLE trial_counter (value integer NOT NULL)")

    def connect(self):
        if address := self.environ.get("DATABASE_URL"):
            return psycopg.connect(address, autocommit=True)
        return sqlite3.connect(self.file, isolation_level=None, timeout=20)

    @property
    def file(self):
        """The file of an embedded database."""
        embedded = "DATABASE_URL" not in self.environ
        return self.folder / ".data" / "underbund.sqlite3" if embedded else None

    def sql(self, statement):
        cursor = self.database.execute(statement)
        return cursor.fetchall() if cursor.description else []

    def begin(self, *arguments):
        """Start a command; what it writes is kept in two files named after its number."""
        stem = self.folder / f"process-{len(self.processes)}"
        with stem.with_suffix(".out").open("w") as out, stem.with_suffix(".err").open("w") as err:
            process = subprocess.Popen(
                [sys.executable, "-c", RUN, *arguments],
                cwd=self.folder,
                env=clean_environment(**self.environ),
                stdin=subprocess.DEVNULL,
                stdout=out,
                stderr=err,
            )
        self.processes.append(process)
        return process

    def command(self, *arguments):
        process = self.begin(*arguments)
        try:
            status = process.wait(PATIENCE_S)
        finally:
            process.kill()
        assert status == 0, self.said(process, "err")

    def worker(self):
        return self.begin("worker")

    def said(self, process, suffix="out"):
        stem = self.folder / f"process-{self.processes.index(process)}"
        return stem.with_suffix(f".{suffix}").read_text()

    def states(self):
        return dict(self.sql("SELECT state, count(*) FROM structures_run GROUP BY state"))

    def effects(self):
        """How many effects there are, and of how many runs."""
        return self.sql("SELECT count(*), count(DISTINCT run) FROM trial_effect")[0]

    def run(self):
        """State, fence, progress and message of the one run there is."""
        (row,) = self.sql("SELECT state, fence, progress, message FROM structures_run")
        return row

    def empty(self):
        """End what still runs and forget every run, so that the next test begins anew."""
        for process in self.processes:
            process.kill()
            process.wait()
        for table in ("trial_effect", "trial_counter", "structures_run"):
            self.sql(f"DELETE FROM {table}")  # noqa: S608 -- three names of our own

    def close(self):
        self.empty()
        self.database.close()
