"""Queue trial runs, each a run of its own, by the program's own door."""

from __future__ import annotations

from django.core.management.base import BaseCommand

from structures.runs.queue import start_run


class Command(BaseCommand):
    def add_arguments(self, parser):
        parser.add_argument("kind")
        parser.add_argument("--count", type=int, default=1)
        parser.add_argument("--gate", default="")

    def handle(self, *_args, kind, count, gate, **_options):
        for number in range(count):
            start_run(kind=kind, params={"number": number, "gate": gate}, subject=str(number))
