"""A backup brought back, or only tried."""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
from pathlib import Path
from typing import TYPE_CHECKING

from django.conf import settings
from django.core.management.base import BaseCommand

from config.backup import read_backup
from structures.actions.upkeep import note_trial
from structures.errors import Refused
from structures.management.shell import refusals_end

if TYPE_CHECKING:
    from argparse import ArgumentParser


class Command(BaseCommand):
    help = (
        "Restore a backup into an empty database and an empty folder of files, whole or not at "
        "all. With --trial into a place of its own that is thrown away; the page of people then "
        "says when it was last tried."
    )
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", type=Path)
        parser.add_argument("--trial", action="store_true", help="try it, and keep nothing of it")

    def handle(self, *args: object, file: Path, trial: bool, **options: object) -> None:
        with refusals_end(self.stderr):
            self.stdout.write(self._try(file) if trial else self._restore(file))

    def _restore(self, file: Path) -> str:
        copied = read_backup(file)
        told = (
            f"Restored as of {copied.made_at:%Y-%m-%d %H:%M} UTC: {copied.rows} rows, "
            f"{copied.files} files; the register fits."
        )
        note_trial(whole=True, told=told, copied=copied)
        return f"{told} Everybody signs in anew."

    def _try(self, file: Path) -> str:
        with tempfile.TemporaryDirectory(prefix="restore-") as place:
            done = subprocess.run(  # noqa: S603 -- this program itself, in a place of its own
                [sys.executable, "manage.py", "restore", str(file.resolve())],
                cwd=settings.ROOT,
                env={
                    **os.environ,
                    "DATABASE_URL": f"sqlite:///{place}/trial.sqlite3",
                    "MEDIA_ROOT": f"{place}/files",
                },
                capture_output=True,
                check=False,
                text=True,
            )
        told = (done.stdout if done.returncode == 0 else done.stderr).strip()
        note_trial(whole=done.returncode == 0, told=told)
        if done.returncode:
            raise Refused("The trial failed.", remedy=told)
        return f"Tried, and nothing of it kept. {told}"
