"""An account made or reset from the machine's own shell, with its one-time word."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.core.management.base import BaseCommand

from structures.actions.people import WORD_HOURS, invite
from structures.errors import Refused
from structures.management.shell import refusals_end
from structures.models import District, Role

if TYPE_CHECKING:
    from argparse import ArgumentParser


class Command(BaseCommand):
    help = "Make an account, or reset one, and print the one-time word that opens it."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("login", metavar="LOGIN", help="the name to sign in with")
        parser.add_argument("--role", required=True, choices=Role.values)
        parser.add_argument(
            "--district", metavar="CODE", help="where; only an administrator serves without one"
        )

    def handle(
        self, *args: object, login: str, role: str, district: str | None, **options: object
    ) -> None:
        with refusals_end(self.stderr):
            word = invite(login=login, role=role, district=_district(district))
        self.stderr.write(
            f"Sign in at /welcome/ as {login} within {WORD_HOURS} hours; the word opens it once. "
            "An older password and every session of this account have ended."
        )
        self.stdout.write(word)


def _district(code: str | None) -> District | None:
    if code is None:
        return None
    found = District.objects.filter(code=code).first()
    if found is None:
        known = ", ".join(District.objects.values_list("code", flat=True)) or "none yet"
        raise Refused(
            f"There is no district {code}.", where="--district", remedy=f"Known: {known}."
        )
    return found
