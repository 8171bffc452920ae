"""What the trial runs do. Their effect is a row in a table without keys, so that doubles show."""

from __future__ import annotations

import os
import signal
import time
from functools import partial
from pathlib import Path

from django.db import connection

from structures.models.run import Run
from structures.runs.queue import Outcome, register

STEPS = 4
STEP_S = 0.005  # a short run takes 20 ms
LOOK_S = 0.02
LONG_STEPS = 1200
LONG_STEP_S = 0.05  # a long run takes a minute


@register("trial.short", version="1")
def short(work):
    for step in range(STEPS):
        time.sleep(STEP_S)
        work.progress(step / STEPS, "at work")
    return ended(work)


@register("trial.gated", version="1")
def gated(work):
    """Say nothing until a file appears, as a body deep in a solver would."""
    while not Path(work.params["gate"]).exists():
        time.sleep(LOOK_S)
    return ended(work)


@register("trial.long", version="1")
def long(work):
    for step in range(LONG_STEPS):
        time.sleep(LONG_STEP_S)
        work.progress(step / LONG_STEPS, "at work")
    return ended(work)


@register("trial.fatal", version="1")
def fatal(work):
    """Take the worker down once: an even run while it computes, an odd one in its open effect."""
    odd = work.params["number"] % 2
    if not odd:
        die_once(work)

    def effect():
        keep(str(work.held.run_id))
        if odd:
            die_once(work)

    return Outcome({"worker": os.getpid()}, effect)


def die_once(work):
    if Run.objects.get(pk=work.held.run_id).attempts == 1:
        os.kill(os.getpid(), signal.SIGKILL)


def ended(work):
    return Outcome({"worker": os.getpid()}, partial(keep, str(work.held.run_id)))


def keep(run_id):
    with connection.cursor() as cursor:
        cursor.execute("INSERT INTO trial_effect (run) VALUES (%s)", [run_id])
