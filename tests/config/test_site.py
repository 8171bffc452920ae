"""The whole site under one command, with its children killed and its supervisor stopped."""

from __future__ import annotations

import json
import os
import re
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from contextlib import contextmanager
from pathlib import Path

import pytest

from tests.config.site_copy import clean_environment, command, processes_in, wait_until, whole_copy

pytestmark = pytest.mark.fault


def free_port():
    with socket.create_server(("127.0.0.1", 0)) as trial:
        return trial.getsockname()[1]


class Site:
    """A started site; what it says is kept in a file beside it."""

    def __init__(self, folder, *options, **environ):
        self.folder = folder
        self.port = free_port()
        self.said = folder / "said.txt"
        with self.said.open("w") as out:
            self.process = subprocess.Popen(
                [sys.executable, "manage.py", "start", *options, "--port", str(self.port)],
                cwd=folder,
                env=clean_environment(**environ),
                stdout=out,
                stderr=subprocess.STDOUT,
            )

    def answer(self, path):
        try:
            with urllib.request.urlopen(f"http://127.0.0.1:{self.port}{path}", timeout=5) as page:
                return page.status, json.load(page)
        except urllib.error.HTTPError as refusal:
            return refusal.code, json.load(refusal)
        except OSError:
            return None, None

    def is_ready(self):
        return self.answer("/readyz")[0] == 200

    def child(self, word):
        for number in processes_in(self.folder):
            line = Path(f"/proc/{number}/cmdline").read_bytes().decode().split("\0")
            if word in line:
                return number
        return None

    def stop(self, number=signal.SIGTERM):
        """Stop it and tell how many seconds that took."""
        began = time.monotonic()
        self.process.send_signal(number)
        self.process.wait(timeout=20)
        return time.monotonic() - began


@contextmanager
def started(folder, options=("--empty",), **environ):
    site = Site(folder, *options, **environ)
    try:
        yield site
    finally:
        site.process.kill()
        site.process.wait()


def test_children_come_back_and_one_signal_ends_everything(tmp_path):
    folder = whole_copy(tmp_path)
    with started(folder) as site:
        wait_until(site.is_ready)
        assert f"Underbund is at http://127.0.0.1:{site.port}/" in site.said.read_text()

        for word in ("waitress", "worker"):
            killed = site.child(word)
            os.kill(killed, signal.SIGKILL)
            wait_until(lambda old=killed, name=word: site.child(name) not in (None, old))
        wait_until(site.is_ready)

        second = command(folder, "start", "--port", str(free_port()))
        assert second.returncode == 1
        assert second.stderr.startswith("Underbund already runs from this folder")

        assert site.stop() < 5.0
        assert site.process.returncode == 0
        wait_until(lambda: not processes_in(folder), patience_s=1.0)


def test_state_lies_in_one_folder_and_the_database_keeps_a_log(tmp_path):
    """Oracle: byte 18 of an SQLite file is 2 in WAL mode (SQLite's file format, 1.3)."""
    folder = whole_copy(tmp_path)
    assert command(folder, "set_up", "--empty").returncode == 0
    made = {one.name for one in (folder / ".data").iterdir()}
    assert made == {"files", "queue", "secret", "static", "underbund.sqlite3"}
    assert (folder / ".data" / "underbund.sqlite3").read_bytes()[18] == 2
    assert command(folder, "set_up", "--empty").returncode == 0


def test_a_signal_during_a_pause_ends_it_at_once(tmp_path):
    folder = whole_copy(tmp_path)
    (folder / "config" / "wsgi.py").write_text("raise SystemExit(3)\n")
    with started(folder) as site:
        wait_until(lambda: "starts again in 4 s" in site.said.read_text(), patience_s=60.0)
        assert site.stop(signal.SIGINT) < 5.0
        assert site.process.returncode == 0
        assert re.findall(r"web server .* again in (\d+) s", site.said.read_text())[:3] == [
            *("1", "2", "4")
        ]
        wait_until(lambda: not processes_in(folder), patience_s=1.0)


def test_a_killed_supervisor_leaves_nothing_behind(tmp_path):
    folder = whole_copy(tmp_path)
    with started(folder) as site:
        wait_until(site.is_ready)
        site.stop(signal.SIGKILL)
        wait_until(lambda: not processes_in(folder), patience_s=5.0)


def test_a_set_up_that_fails_ends_the_start_with_its_sentence(tmp_path):
    folder = whole_copy(tmp_path)
    done = command(folder, "start", "--port", str(free_port()), DEBUG="perhaps")
    assert done.returncode == 1
    assert done.stderr.splitlines() == [
        "DEBUG is 'perhaps'. Write yes or no.",
        "The set-up did not come to its end; the lines above say why.",
    ]
