"""The main job without a browser or a database: survey pack in, priced wall out."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from django.conf import settings
from django.core.management.base import BaseCommand
from django.utils import timezone

from costing.appraisal import appraise
from costing.documents.result import as_json
from costing.documents.screen import screen_text
from costing.price.rates import read_rates
from structures.intake.archive import FILE_MOST_BYTES
from structures.intake.survey_pack import read_pack
from structures.management.shell import json_text, read_file, refusals_end, write_files

if TYPE_CHECKING:
    from argparse import ArgumentParser


class Command(BaseCommand):
    help = (
        "Appraise one site's survey: rock line, wall, quantities, estimate, water and cautions. "
        "No database is used."
    )
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument(
            "pack",
            type=Path,
            metavar="PACK",
            help="survey pack: a JSON file, a folder or zip of CSV files, an XLSX workbook",
        )
        parser.add_argument("--rates", type=Path, metavar="FILE", help="rate schedule, CSV or JSON")
        parser.add_argument(
            "--out",
            type=Path,
            metavar="DIR",
            help="write the drawing (SVG), measurement sheet and estimate (XLSX), report (PDF) there",
        )
        parser.add_argument("--json", action="store_true", help="print one JSON document")

    def handle(
        self,
        *args: object,
        pack: Path,
        rates: Path | None,
        out: Path | None,
        **options: object,
    ) -> None:
        with refusals_end(self.stderr):
            survey = read_pack(pack)
            schedule = None
            if rates is not None:
                data = read_file(rates, most_bytes=FILE_MOST_BYTES)
                schedule = read_rates(rates.name, data, currency_default=settings.CURRENCY)
            found = appraise(survey, schedule=schedule, on=timezone.localdate())
            if out is not None:
                # Drawing, workbook and press take a while to load and are not always asked for.
                from costing.documents.bundle import documents_of  # noqa: PLC0415 -- see above

                write_files(out, documents_of(found))
        result = as_json(found)
        site = survey.site
        text = (
            json_text(result) + "\n"
            if options["json"]
            else screen_text(result, name=site.name, stream=site.stream)
        )
        self.stdout.write(text, ending="")
