"""Storing many readings: COPY into a table of the session, then in, what is there already left alone.

Memory stays flat: rows are taken one by one from whoever makes them.
"""

from __future__ import annotations

import json
from itertools import islice
from typing import TYPE_CHECKING, Final

from django.db import connection, transaction
from django.utils import timezone

from structures.models import Reading

if TYPE_CHECKING:
    from collections.abc import Iterable

COLUMNS: Final = (
    "id",
    "well_id",
    "mark_id",
    "read_at",
    "state",
    "dry",
    "depth_m",
    "level_m",
    "standing",
    "rules",
    "read_by",
    "note",
    "upload_id",
    "row",
    "photo_id",
    "by_id",
    "received_at",
)
AT_ONCE: Final = 1000  # rows of one statement where there is no COPY


def store_readings(readings: Iterable[Reading]) -> int:
    """Keep readings that are not there already; gives how many were new.

    One that is there with the same well, time, state and depth, or under the same identifier, is
    left as it stands.
    """
    with transaction.atomic():
        if connection.vendor == "postgresql":
            return _copied(readings)
        before = Reading.objects.count()
        rows = iter(readings)
        while part := list(islice(rows, AT_ONCE)):
            Reading.objects.bulk_create(part, ignore_conflicts=True)
        return Reading.objects.count() - before


def _copied(readings: Iterable[Reading]) -> int:
    # Names of this program's own table and columns; no word of a sender comes into the statement.
    table = Reading._meta.db_table
    names = ", ".join(f'"{one}"' for one in COLUMNS)
    at = timezone.now()
    with connection.cursor() as cursor:
        cursor.execute(
            f'CREATE TEMP TABLE arriving (LIKE "{table}" INCLUDING DEFAULTS) ON COMMIT DROP'
        )
        with cursor.copy(f"COPY arriving ({names}) FROM STDIN") as copy:
            for one in readings:
                copy.write_row(_row(one, at))
        cursor.execute(
            f'INSERT INTO "{table}" ({names}) SELECT {names} FROM arriving ON CONFLICT DO NOTHING'  # noqa: S608 -- see above
        )
        count: int = cursor.rowcount
        cursor.execute("DROP TABLE arriving")
    return count


def _row(one: Reading, at: object) -> tuple[object, ...]:
    return tuple(
        json.dumps(one.rules)
        if name == "rules"
        else at
        if name == "received_at"
        else getattr(one, name)
        for name in COLUMNS
    )
