"""A worker alone: carries out runs until it is told to stop."""

from __future__ import annotations

import os
import warnings

from celery.exceptions import SecurityWarning
from django.core.management.base import BaseCommand

import structures.runs.clock  # noqa: F401 -- listens for the worker's start
from config.celery import app, make_folder


class Command(BaseCommand):
    help = "Carry out runs until stopped. Start as many as wanted, on as many machines as wanted."
    requires_system_checks = ()

    def handle(self, *args: object, **options: object) -> None:
        make_folder()
        # It warns of root for the sake of pickled messages; ours are JSON and hold a number.
        warnings.simplefilter("ignore", SecurityWarning)
        app.worker_main(
            [
                "--quiet",
                "worker",
                # One process that dies whole: a claim and its lease never outlive half a worker.
                "--pool=solo",
                "--without-gossip",
                "--without-mingle",
                "--without-heartbeat",
                "--loglevel=WARNING",
                f"--hostname=worker-{os.getpid()}@%h",
            ]
        )
