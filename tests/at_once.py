"""Several people at the same moment, each with a connection of their own."""

from __future__ import annotations

import threading
from concurrent.futures import ThreadPoolExecutor

from django.db import connection

from structures.errors import Refused


def at_once(*acts):
    """Do all of it at the same moment; give what each gave, or its refusal."""
    gate = threading.Barrier(len(acts))

    def go(act):
        try:
            gate.wait()
            return act()
        except Refused as refused:
            return refused
        finally:
            connection.close()

    with ThreadPoolExecutor(len(acts)) as hands:
        return list(hands.map(go, acts))


def refusals(answers):
    return [answer.what for answer in answers if isinstance(answer, Refused)]
