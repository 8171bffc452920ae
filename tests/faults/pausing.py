"""Pausing a worker as a machine without breath would: alive, holding its run, and silent."""

from __future__ import annotations

import os
import signal
import sqlite3
from contextlib import contextmanager

from tests.config.site_copy import wait_until


def pause(number, database=None):
    """Stop a process; where its database is a file, between its writes.

    Stopped in the middle of a write it would hold the lock of the file for as long as it sleeps.
    """

    def stopped():
        os.kill(number, signal.SIGSTOP)
        if database is None or can_be_written(database):
            return True
        go_on(number)
        return False

    wait_until(stopped)


def go_on(number):
    os.kill(number, signal.SIGCONT)


@contextmanager
def paused(number, database=None):
    pause(number, database)
    try:
        yield
    finally:
        go_on(number)


def can_be_written(database):
    connection = sqlite3.connect(database, isolation_level=None, timeout=0)
    try:
        connection.execute("BEGIN IMMEDIATE")
        connection.execute("ROLLBACK")
    except sqlite3.OperationalError:
        return False
    finally:
        connection.close()
    return True
