"""One sounding: layers, depth of rock with its range, misfit. No database."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from django.core.management.base import BaseCommand

from structures.documents.sounding_result import sounding_text, sounding_whole_json
from structures.ground.sounding import interpret
from structures.intake.archive import FILE_MOST_BYTES
from structures.intake.sounding_file import read_sounding
from structures.management.shell import json_text, read_file, refusals_end

if TYPE_CHECKING:
    from argparse import ArgumentParser


class Command(BaseCommand):
    help = "Read one electrical sounding: layers, depth of rock with its range, misfit."
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument(
            "file",
            type=Path,
            metavar="FILE",
            help="CSV with ab2_m,mn2_m,apparent_resistivity_ohm_m; for Wenner a_m in place of both",
        )
        parser.add_argument("--array", choices=("schlumberger", "wenner"), default="schlumberger")
        parser.add_argument("--json", action="store_true", help="print one JSON document")

    def handle(self, *args: object, file: Path, array: str, **options: object) -> None:
        with refusals_end(self.stderr):
            data = read_file(file, most_bytes=FILE_MOST_BYTES)
            sounding = read_sounding(file.name, data, array)
        whole = sounding_whole_json(interpret(sounding), sounding)
        self.stdout.write(json_text(whole) if options["json"] else sounding_text(whole), ending="")
