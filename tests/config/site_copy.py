"""A copy of the program in a folder of its own, so that its state and processes are its own."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
SYSTEM_PYTHON = getattr(sys, "_base_executable", sys.executable)
VARIABLES = (
    *("DATABASE_URL", "QUEUE_URL", "SECRET_KEY", "ALLOWED_HOSTS", "MEDIA_ROOT", "DEBUG"),
    *("PYTHONWARNINGS", "DJANGO_SETTINGS_MODULE"),
)


def clean_environment(**more):
    kept = {name: value for name, value in os.environ.items() if name not in VARIABLES}
    return {**kept, **more}


def bare_copy(folder, requirements=""):
    """Only what the first command needs, with a list of packages of the test's own."""
    shutil.copytree(ROOT / "config", folder / "config", ignore=shutil.ignore_patterns("*.pyc"))
    shutil.copy(ROOT / "manage.py", folder)
    (folder / "requirements.txt").write_text(requirements)
    return folder


def whole_copy(folder):
    """Everything but the tests; the environment is the one of this test run."""
    for name in ("config", "structures", "costing", "templates", "fixtures"):
        shutil.copytree(ROOT / name, folder / name, ignore=shutil.ignore_patterns("*.pyc"))
    for name in ("manage.py", "requirements.txt"):
        shutil.copy(ROOT / name, folder)
    (folder / ".venv").symlink_to(ROOT / ".venv")
    return folder


def command(folder, *arguments, **environ):
    return subprocess.run(
        [SYSTEM_PYTHON, "manage.py", *arguments],
        cwd=folder,
        env=clean_environment(**environ),
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
    )


def processes_in(folder):
    """Numbers of living processes that work in a folder (Linux)."""
    found = []
    for entry in Path("/proc").iterdir():
        if entry.name.isdigit() and int(entry.name) != os.getpid():
            try:
                if (entry / "cwd").readlink() == folder:
                    found.append(int(entry.name))
            except OSError:
                continue
    return found


def wait_until(true, patience_s=30.0):
    until = time.monotonic() + patience_s
    while not true():
        assert time.monotonic() < until, "waited too long"
        time.sleep(0.05)
