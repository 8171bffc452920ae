"""A well whose parapet was raised, with readings, for tests that hold readings against it."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta

from structures.intake.level_records import LevelRecord
from structures.models import MeasuringPoint, Reading, Well

FIRST = date(2024, 1, 3)


def a_well(watershed, by, code="OD-W01", *, site=None, level_m=426.8, **changes):
    values = {
        "role": "upstream",
        "kind": "dug",
        "lat": 15.7249,
        "lon": 77.4433,
        "ground_level_m": level_m - 0.8,
        "bottom_below_ground_m": 11.5,
        "bottom_sounded_on": date(2025, 5, 20),
        **changes,
    }
    well = Well.objects.create(watershed=watershed, site=site, code=code, changed_by=by, **values)
    MeasuringPoint.objects.create(
        well=well,
        mark="M1",
        what="parapet, north side, red mark",
        height_above_ground_m=0.8,
        level_m=level_m,
        valid_from=date(2022, 5, 20),
        entered_on=date(2022, 5, 28),
        by=by,
    )
    return well


def readings_of(well, by, *, depth_m=8.0, count=30, first=FIRST, every=15):
    """Readings of one depth or nearly, at fixed times, that count."""
    mark = well.marks.get(mark="M1")
    rows = []
    for place in range(count):
        day = first + timedelta(days=every * place)
        depth = round(depth_m + 0.02 * (place % 3), 2)
        rows.append(
            Reading(
                well=well,
                mark=mark,
                read_at=datetime(day.year, day.month, day.day, 1, 0, tzinfo=UTC),
                state="static",
                depth_m=depth,
                level_m=round(mark.level_m - depth, 3),
                by=by,
            )
        )
    return Reading.objects.bulk_create(rows)


def a_record(well="OD-W01", at="2025-04-02T06:30+05:30", depth_m=8.02, **changes):
    values = {
        "where": "record 1",
        "id": None,
        "well": well,
        "mark": None,
        "read_at": datetime.fromisoformat(at),
        "state": "static",
        "dry": False,
        "depth_m": depth_m,
        **changes,
    }
    return LevelRecord(**values)
