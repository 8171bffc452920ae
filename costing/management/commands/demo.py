"""The demo scenario, into an empty database."""

from __future__ import annotations

import secrets
from pathlib import Path
from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.core.management.base import BaseCommand

from costing.actions.demo import ROLES, load_demo
from structures.management.shell import refusals_end

if TYPE_CHECKING:
    from argparse import ArgumentParser

FOLDER: Final = Path("fixtures") / "demo"
WORD_BYTES: Final = 12  # of a password that is made up here: 96 bits


class Command(BaseCommand):
    help = "Load the invented demo district into an empty database and print how to sign in."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("--password", metavar="WORD", help="password of the demo accounts")

    def handle(self, *args: object, password: str | None, **options: object) -> None:
        word = password or settings.DEMO_PASSWORD or secrets.token_urlsafe(WORD_BYTES)
        with refusals_end(self.stderr):
            loaded = load_demo(folder=settings.ROOT / FOLDER, password=word)
        self.stdout.write(
            f"Loaded {loaded.district} (invented): {loaded.sites} sites, {loaded.surveys} surveys."
        )
        names = ", ".join(f"{role}-1" for role in ROLES)
        self.stdout.write(f"Sign in as {names}; the password of all is: {word}")
