"""Did levels change because of the wall: effect with interval, rivals, what could be seen."""

from __future__ import annotations

from argparse import ArgumentTypeError
from datetime import date
from pathlib import Path
from typing import TYPE_CHECKING, Any

from django.core.management.base import BaseCommand
from django.utils.timezone import get_default_timezone

from structures.documents.effect_result import effect_json, effect_text
from structures.intake.archive import FILE_MOST_BYTES
from structures.intake.defaults import EFFECT
from structures.intake.rain import read_rain
from structures.intake.readings import read_readings
from structures.life.verdict import from_readings
from structures.management.shell import json_text, read_file, refusals_end
from structures.water.effect import measure_effect
from structures.water.rules import EffectRules

if TYPE_CHECKING:
    from argparse import ArgumentParser


def day(text: str) -> date:
    try:
        return date.fromisoformat(text)
    except ValueError as error:
        raise ArgumentTypeError(f"'{text}' is no day; write it as 2027-06-03") from error


def month_and_day(text: str) -> tuple[int, int]:
    try:
        start = date.fromisoformat(f"2001-{text}")  # a year without 29 February
    except ValueError as error:
        raise ArgumentTypeError(f"'{text}' is no day of every year; write it as 06-01") from error
    return start.month, start.day


class Command(BaseCommand):
    help = "Say from readings of affected and control wells whether a wall changed their levels."
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument(
            "readings",
            type=Path,
            metavar="READINGS",
            help="CSV or XLSX with well,role,read_at,state,dry,depth_m,height_m; role is affected or "
            "control, height_m the level of the measuring point that day",
        )
        parser.add_argument(
            "--completed",
            type=day,
            required=True,
            metavar="DATE",
            help="day on which the wall was completed, as 2027-06-03",
        )
        parser.add_argument(
            "--rain",
            type=Path,
            metavar="FILE",
            help="CSV or XLSX with month,rain_mm (month as 2027-06) or day,rain_mm",
        )
        least = EFFECT["effect_least_full_years"]
        parser.add_argument(
            "--least-years",
            type=int,
            choices=range(int(least.low), int(least.high) + 1),
            default=int(least.value),
            metavar="N",
            help="full water years asked for on each side, %(default)s where left out",
        )
        parser.add_argument(
            "--year-starts",
            type=month_and_day,
            default=EffectRules().year_starts,
            metavar="MM-DD",
            help="day on which the water year begins, 06-01 where left out",
        )
        parser.add_argument("--json", action="store_true", help="print one JSON document")

    def handle(
        self, *args: object, readings: Path, completed: date, rain: Path | None, **options: Any
    ) -> None:
        rules = EffectRules(
            least_full_years=options["least_years"], year_starts=options["year_starts"]
        )
        with refusals_end(self.stderr):
            data = read_file(readings, most_bytes=FILE_MOST_BYTES)
            read = read_readings(readings.name, data, get_default_timezone())
            fallen = None
            if rain is not None:
                fallen = read_rain(rain.name, read_file(rain, most_bytes=FILE_MOST_BYTES))
        effect = measure_effect(read.readings, completed, rain=fallen, rules=rules)
        findings = (*read.findings, *(fallen.findings if fallen else ()))
        suggestion = from_readings(effect.measured, effect.limits)
        whole = effect_json(effect, suggestion, completed, findings)
        self.stdout.write(json_text(whole) if options["json"] else effect_text(whole), ending="")
