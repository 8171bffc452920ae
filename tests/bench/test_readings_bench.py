"""Storing checked readings: beside a plain COPY with the same unique index, in one run."""

from __future__ import annotations

import resource
import time
from datetime import UTC, datetime, timedelta
from itertools import islice
from uuid import UUID

import pytest
from django.db import connection, transaction

from structures.actions.reading_store import COLUMNS, _row, store_readings
from structures.models import Reading, Role
from tests import factories as make
from tests.structures.wells import a_well

pytestmark = [pytest.mark.benchmark, pytest.mark.postgres, pytest.mark.django_db]
COUNT = 200_000  # the ratio is that of a million, in a fifth of the time
MOST_TIMES = 3.0
FLAT_MB = 60.0  # how far memory may grow while the rows go by


def rows(well, mark, by, count, first=0):
    start = datetime(2000, 1, 1, tzinfo=UTC)
    for place in range(first, first + count):
        yield Reading(
            id=UUID(int=(1 << 127) + place),
            well=well,
            mark=mark,
            read_at=start + timedelta(minutes=place),
            state="static",
            depth_m=8.0 + (place % 400) / 100.0,
            level_m=418.8 - (place % 400) / 100.0,
            by=by,
        )


def plainly(readings):
    """COPY straight into a table with the same unique index; nothing is there to stand aside for."""
    names = ", ".join(f'"{one}"' for one in COLUMNS)
    table = Reading._meta.db_table
    with transaction.atomic(), connection.cursor() as cursor:
        cursor.execute(f'CREATE TABLE plain_readings (LIKE "{table}" INCLUDING ALL)')
        at = datetime.now(UTC)
        with cursor.copy(f"COPY plain_readings ({names}) FROM STDIN") as copy:
            for one in readings:
                copy.write_row(_row(one, at))


def timed(work):
    begun = time.perf_counter()
    work()
    return time.perf_counter() - begun


def memory_mb():
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0


def test_many_readings_are_stored_beside_a_plain_copy(capsys):
    """Oracle: a plain COPY of the same rows on the same machine; three times is the office's limit."""
    shed = make.a_watershed()
    by = make.a_user(Role.FIELD, shed.district)
    well = a_well(shed, by)
    mark = well.marks.get()
    store_readings(
        islice(rows(well, mark, by, 1000, first=5_000_000), 1000)
    )  # everything is loaded
    plain_s = timed(lambda: plainly(rows(well, mark, by, COUNT)))
    before = memory_mb()
    stored = []
    own_s = timed(lambda: stored.append(store_readings(rows(well, mark, by, COUNT))))
    grown = memory_mb() - before
    again_s = timed(lambda: stored.append(store_readings(rows(well, mark, by, COUNT))))
    with capsys.disabled():
        print(  # noqa: T201 -- a benchmark is there to be read
            f"\n{COUNT:,} readings: plain COPY {plain_s:.1f} s, stored {own_s:.1f} s "
            f"({own_s / plain_s:.2f} times), the same again {again_s:.1f} s, "
            f"memory grew by {grown:.0f} MB"
        )
    assert stored == [COUNT, 0]
    assert own_s < MOST_TIMES * plain_s
    assert grown < FLAT_MB
