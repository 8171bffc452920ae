"""The whole state into one file."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from django.core.management.base import BaseCommand

from config.backup import write_backup
from structures.management.shell import refusals_end

if TYPE_CHECKING:
    from argparse import ArgumentParser


class Command(BaseCommand):
    help = "Write the whole state, files included, to a file that is not there yet."
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", type=Path)

    def handle(self, *args: object, file: Path, **options: object) -> None:
        with refusals_end(self.stderr):
            copied = write_backup(file)
            self.stdout.write(
                f"{file}: {copied.rows} rows, {copied.files} files, SHA-256 {copied.digest}. "
                f"Keep it as you keep money. Try it: python3 manage.py restore --trial {file}"
            )
