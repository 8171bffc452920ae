"""Read a counter, write it back one higher with a row, and say so once it is committed."""

from __future__ import annotations

from django.core.management.base import BaseCommand
from django.db import connection, transaction


class Command(BaseCommand):
    def add_arguments(self, parser):
        parser.add_argument("writer")
        parser.add_argument("--count", type=int, required=True)

    def handle(self, *_args, writer, count, **_options):
        for number in range(count):
            name = f"{writer}-{number}"
            with transaction.atomic(), connection.cursor() as cursor:
                cursor.execute("SELECT value FROM trial_counter")
                (value,) = cursor.fetchone()
                cursor.execute("UPDATE trial_counter SET value = %s", [value + 1])
                cursor.execute("INSERT INTO trial_effect (run) VALUES (%s)", [name])
            self.stdout.write(name)
            self.stdout.flush()
