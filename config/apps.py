"""The configuration as an app, so that its commands and checks are found."""

from __future__ import annotations

import sys
from typing import Final

from django.apps import AppConfig

# They work on values alone and start no run: without the queue a cold start takes a third less.
WITHOUT_QUEUE: Final = frozenset({"appraise", "interpret_sounding", "assess_effect", "plan_season"})


class ConfigConfig(AppConfig):
    name = "config"

    def ready(self) -> None:
        import config.checks  # noqa: PLC0415 -- registers checks once apps exist

        if WITHOUT_QUEUE.isdisjoint(sys.argv[1:2]):
            # A shared task without this would ask for a queue at Celery's own default address.
            import config.celery  # noqa: F401, PLC0415 -- the queue, in every process that sends
            import costing.tasks  # noqa: F401, PLC0415 -- kinds of run, once models exist
