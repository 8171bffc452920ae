"""Ask every run to stop, by the program's own door."""

from __future__ import annotations

from django.core.management.base import BaseCommand

from structures.models.run import Run
from structures.runs.book import ask_cancel


class Command(BaseCommand):
    def handle(self, *_args, **_options):
        for run in Run.objects.all():
            ask_cancel(run.pk)
