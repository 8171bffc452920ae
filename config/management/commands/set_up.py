"""What must be there before the site is served; harmless when it is there already."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.core.management import call_command, get_commands
from django.core.management.base import BaseCommand, CommandError
from django.db import connection

from config.celery import make_folder
from config.static_files import collect
from structures.actions.people import WORD_HOURS, invite
from structures.queries.accounts import anyone_has_a_password

if TYPE_CHECKING:
    from argparse import ArgumentParser

FIRST_LOGIN: Final = "admin"
FIRST_ROLE: Final = "admin"  # of the whole office, who lets everybody else in


class Command(BaseCommand):
    help = "Make or bring up to date the database, the queue's folder and the static files."
    requires_system_checks = ()

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("--empty", action="store_true", help="load no demo data")

    def handle(self, *args: object, empty: bool, **options: object) -> None:
        try:
            self.set_up(empty=empty)
        except OSError as error:
            raise CommandError(
                f"The set-up cannot write {error.filename}: {error.strerror}. "
                "Free room or look at who may write there, then start again."
            ) from error

    def set_up(self, *, empty: bool) -> None:
        settings.MEDIA_ROOT.mkdir(mode=0o700, parents=True, exist_ok=True)
        make_folder()
        call_command("migrate", interactive=False, verbosity=0)
        if connection.vendor == "sqlite":
            with connection.cursor() as cursor:
                # Kept in the file itself: readers no longer wait for the writer.
                cursor.execute("PRAGMA journal_mode=WAL")
        collect()
        if not empty and "demo" in get_commands() and not has_people():
            call_command("demo")
        if empty:
            self.open_first_account()

    def open_first_account(self) -> None:
        """Make the first administrator; as long as nobody has a password, each start gives a word."""
        if anyone_has_a_password():
            return
        word = invite(login=FIRST_LOGIN, role=FIRST_ROLE)
        self.stdout.write(
            f"Nobody has a password yet. Come in at /welcome/ as {FIRST_LOGIN} with the one-time word "
            f"{word} within {WORD_HOURS} hours."
        )


def has_people() -> bool:
    with connection.cursor() as cursor:
        cursor.execute("SELECT 1 FROM structures_user LIMIT 1")
        return cursor.fetchone() is not None
