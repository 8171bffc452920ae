"""Wells, marks, readings and rain of the invented district, as its files give them."""

from __future__ import annotations

import csv
from datetime import date, datetime
from pathlib import Path

from structures.models import Gauge, GaugeWeight, MeasuringPoint, Move, RainDay, Reading, Well
from tests import factories as make

DEMO = Path("fixtures/demo")


def rows(name):
    with (DEMO / f"{name}.csv").open(encoding="utf-8", newline="") as lines:
        return list(csv.DictReader(lines))


def number(text):
    return float(text) if text else None


def day(text):
    return date.fromisoformat(text) if text else None


def a_demo_site(code="BI-01", completed=date(2024, 5, 20), *, but_marks=()):
    """A site with its wells and the rain of its gauge; marks named (well, mark) were never entered."""
    district = make.a_district(invented=True, as_of=date(2026, 4, 10))
    shed = make.a_watershed(district, code[:2])
    by = make.a_user(login="reader")
    site = make.a_site(shed, code, changed_by=by)
    site.structure.stage = "judged"
    site.structure.save()
    Move.objects.create(
        structure=site.structure,
        number=1,
        from_stage="rising",
        to_stage="covered",
        day=completed,
        by=by,
    )
    wells = {}
    for row in rows("wells"):
        if row["watershed"] == shed.code:
            wells[row["well_id"]] = Well.objects.create(
                watershed=shed,
                site=site if row["site_id"] == code else None,
                code=row["well_id"],
                name=row["name"],
                role=row["role"],
                kind={"observation pipe": "pipe"}.get(row["kind"], row["kind"]),
                ground_level_m=number(row["ground_level_m"]),
                bottom_below_ground_m=number(row["bottom_below_ground_m"]),
                bottom_sounded_on=day(row["bottom_sounded_on"]),
                upstream_of_wall_m=number(row["upstream_of_wall_m"]),
                changed_by=by,
            )
    marks = [row for row in rows("measuring_points") if row["well_id"] in wells]
    for row in marks:
        if (row["well_id"], row["mark_id"]) in but_marks:
            continue
        until = None if (row["well_id"], "M2") in but_marks else day(row["valid_to"])
        MeasuringPoint.objects.create(
            well=wells[row["well_id"]],
            mark=row["mark_id"],
            what=row["what"],
            height_above_ground_m=number(row["height_above_ground_m"]),
            level_m=number(row["level_m"]),
            valid_from=day(row["valid_from"]),
            valid_to=until,
            entered_on=day(row["entered_on"]),
            by=by,
        )
    known = list(MeasuringPoint.objects.filter(well__in=wells.values()).select_related("well"))
    named = {(one.well.code, one.mark): one for one in known}
    readings = []
    for row in rows("levels"):
        if row["well_id"] not in wells:
            continue
        at = datetime.fromisoformat(row["read_at"])
        valid = [
            one
            for one in known
            if one.well.code == row["well_id"]
            and one.valid_from <= at.date()
            and (one.valid_to is None or at.date() <= one.valid_to)
        ]
        depth = number(row["depth_below_mark_m"])
        level = None if depth is None or not valid else round(valid[0].level_m - depth, 3)
        readings.append(
            Reading(
                id=row["reading_id"],
                well=wells[row["well_id"]],
                mark=named.get((row["well_id"], row["mark_id"])),
                read_at=at,
                state=row["state"],
                dry=row["dry"] == "yes",
                depth_m=depth,
                level_m=level,
                by=by,
            )
        )
    Reading.objects.bulk_create(readings)
    gauge = Gauge.objects.create(district=district, code=f"{shed.code}-R1")
    GaugeWeight.objects.create(watershed=shed, gauge=gauge.code)
    RainDay.objects.bulk_create(
        RainDay(gauge=gauge, day=day(row["day"]), rain_mm=number(row["rain_mm"]), by=by)
        for row in rows("rain")
        if row["gauge_id"] == gauge.code
    )
    return site
