"""The register walked from its first entry to its last, and whether all of it still fits."""

from __future__ import annotations

import sys

from django.core.management.base import BaseCommand

from structures.queries.register import check_registers


class Command(BaseCommand):
    help = (
        "Check every register: that no entry was altered, removed, put in or moved, and that the "
        "papers it names are those that were filed. Ends with status 1 at the first misfit."
    )

    def handle(self, *args: object, **options: object) -> None:
        wrong = False
        for one in check_registers():
            if one.whole:
                self.stdout.write(f"{one.where}: {one.count} entries, all fit.")
                continue
            wrong = True
            self.stderr.write(
                f"{one.where}: entry {one.number} does not fit: {one.why}. "
                "Compare it with the printed documents and the last backup."
            )
        if wrong:
            sys.exit(1)
