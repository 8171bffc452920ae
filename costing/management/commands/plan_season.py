"""Which sites this season, and when: a plan with its bound. No database."""

from __future__ import annotations

import ctypes
import os
import sys
from argparse import RawDescriptionHelpFormatter
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Final

from django.core.management.base import BaseCommand

from costing.documents.season_plan import plan_json, plan_text
from costing.plan.clash import clash_refusal, clashes
from costing.plan.reading import read_season
from costing.plan.rounds import plan_season
from structures.intake.archive import FILE_MOST_BYTES
from structures.management.shell import json_text, read_file, refusals_end

if TYPE_CHECKING:
    from argparse import ArgumentParser
    from collections.abc import Iterator

STDOUT: Final = 1  # file descriptor
FORM: Final = """\
FILE is one JSON document:
  {"weeks": 30, "gangs": 6, "budget": "2400000.00", "sites": [
    {"site": "KE-04", "ready_week": 2, "latest_close_week": 24, "duration_weeks": 5,
     "gangs": 1, "cost": "310000.00", "benefit": 12.5}]}

Weeks count from 1. A site may open from ready_week; it closes duration_weeks - 1 weeks after it
opens, at the latest in latest_close_week. gangs: how many there are in any one week, and how many a
site keeps from opening to closing. budget: money for the season, null where it sets no limit.

Further limits, each given for the season and for every site, or for none:
  pumps     at hand in any one week; a site keeps its number from opening to closing
  clay_m3   proven for the season; a site takes its amount once

What if a date is moved: open_week of a site fixes its opening. Fixed openings that cannot stand
together are told, with the fewest sites between which it fails.

The plan maximises the sum of benefits of the sites that close in time. It is looked for in at most
25 seconds; "bound" is proven, and "gap" says how much better any plan could be at most.
"""


class Command(BaseCommand):
    help = (
        "Plan one season: which sites open in which week within gangs, budget and dates, and why "
        "the others are left out. No database is used."
    )
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.formatter_class = RawDescriptionHelpFormatter
        parser.epilog = FORM
        parser.add_argument("file", type=Path, metavar="FILE", help="season, JSON")
        parser.add_argument("--json", action="store_true", help="print one JSON document")

    def handle(self, *args: object, file: Path, **options: object) -> None:
        with refusals_end(self.stderr):
            season = read_season(file.name, read_file(file, most_bytes=FILE_MOST_BYTES))
            if found := clashes(season):
                raise clash_refusal(file.name, found)
        with solver_silenced():
            plan = plan_season(season)
        text = json_text(plan_json(plan)) + "\n" if options["json"] else plan_text(season, plan)
        self.stdout.write(text, ending="")


@contextmanager
def solver_silenced() -> Iterator[None]:
    """Keep off standard output what the solver's own code sometimes writes there past Python."""
    sys.stdout.flush()
    kept = os.dup(STDOUT)
    nowhere = os.open(os.devnull, os.O_WRONLY)
    try:
        os.dup2(nowhere, STDOUT)
        yield
    finally:
        ctypes.CDLL(None).fflush(None)  # else it would come out after the result, at the end
        os.dup2(kept, STDOUT)
        os.close(nowhere)
        os.close(kept)
