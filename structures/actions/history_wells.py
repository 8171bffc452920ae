"""Wells, marks, readings, rain and first flows, as they were before the district was kept here."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from simple_history.utils import bulk_create_with_history

from structures.actions.refusals import as_documents
from structures.errors import Finding
from structures.intake.rain import ASK_OVER_MM
from structures.models import (
    FirstRun,
    Gauge,
    MeasuringPoint,
    RainDay,
    RainMonth,
    Reading,
    Stream,
    Watershed,
    Well,
)

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from datetime import date

    from structures.actions.history import Taking
    from structures.intake.history import History, HistoryRow

KINDS: Final = {"observation pipe": Well.Kind.PIPE}
LEVEL_DECIMALS: Final = 3  # of a level of water: a millimetre, as marks are levelled
AT_ONCE: Final = 500  # rows of one statement
NOT_READ: Final = "RN-01"
GREAT: Final = "RN-02"


def take_wells(taking: Taking, history: History) -> dict[str, Well]:
    """Keep wells and their measuring points; gives the wells by code."""
    watersheds = {one.code: one for one in Watershed.objects.filter(district=taking.district)}
    rows = [
        Well(
            watershed=watersheds[row["watershed"]],
            site=None if row["site_id"] is None else taking.structures[row["site_id"]].site,
            code=row["well_id"],
            name=row["name"] or "",
            role=row["role"],
            kind=KINDS.get(row["kind"], row["kind"]),
            lat=row["lat"],
            lon=row["lon"],
            diameter_m=row["diameter_m"],
            ground_level_m=row["ground_level_m"],
            bottom_below_ground_m=row["bottom_below_ground_m"],
            bottom_sounded_on=row["bottom_sounded_on"],
            upstream_of_wall_m=row["upstream_of_wall_m"],
            changed_by=taking.by,
        )
        for row in history["wells"]
    ]
    kept = bulk_create_with_history(rows, Well, default_user=taking.by)
    wells = {one.code: one for one in kept}
    _take_marks(taking, history["measuring_points"], wells)
    return wells


def _take_marks(taking: Taking, rows: Sequence[HistoryRow], wells: Mapping[str, Well]) -> None:
    marks = [
        MeasuringPoint(
            well=wells[row["well_id"]],
            mark=row["mark_id"],
            what=row["what"],
            height_above_ground_m=row["height_above_ground_m"],
            level_m=row["level_m"],
            valid_from=row["valid_from"],
            valid_to=row["valid_to"],
            by=taking.people[row["entered_by"]],
            entered_on=row["entered_on"],
            findings=as_documents(_photo_of(row)),
        )
        for row in rows
    ]
    bulk_create_with_history(marks, MeasuringPoint, default_user=taking.by)


def _photo_of(row: HistoryRow) -> list[Finding]:
    if not row["photo"]:
        return []
    what = "A photo of the mark was taken; it is not among what was taken over."
    return [Finding(row["well_id"], "photo", what, "Add it where it is found.", "note")]


def take_readings(taking: Taking, rows: Sequence[HistoryRow], wells: Mapping[str, Well]) -> None:
    """Keep readings under the identifiers of the phones; the level is by the mark of that day.

    A reading that names another mark than the one valid that day keeps the mark that it names: what
    that means is for whoever decides on it.
    """
    marks: dict[str, list[MeasuringPoint]] = {code: [] for code in wells}
    named: dict[tuple[str, str], MeasuringPoint] = {}
    for mark in MeasuringPoint.objects.filter(well__in=wells.values()).select_related("well"):
        marks[mark.well.code].append(mark)
        named[mark.well.code, mark.mark] = mark
    Reading.objects.bulk_create(
        (
            Reading(
                id=row["reading_id"],
                well=wells[row["well_id"]],
                mark=named[row["well_id"], row["mark_id"]],
                read_at=row["read_at"],
                state=row["state"],
                dry=row["dry"],
                depth_m=row["depth_below_mark_m"],
                level_m=_level_m(row, marks[row["well_id"]], taking),
                read_by=row["read_by"],
                note=row["note"] or "",
                by=taking.people[row["read_by"]],
            )
            for row in rows
        ),
        batch_size=AT_ONCE,
    )


def _level_m(row: HistoryRow, marks: Sequence[MeasuringPoint], taking: Taking) -> float | None:
    day: date = row["read_at"].astimezone(taking.zone).date()
    for mark in marks:
        if mark.valid_from <= day and (mark.valid_to is None or day <= mark.valid_to):
            level_m = mark.level_m
            break
    else:
        return None
    return None if level_m is None else round(level_m - row["depth_below_mark_m"], LEVEL_DECIMALS)


def take_rain(taking: Taking, history: History) -> None:
    """Keep the gauges, their days and, where only months are known, months; blank stays not read."""
    days, months = history["rain"], history["rain_monthly"]
    codes = dict.fromkeys(row["gauge_id"] for row in (*days, *months))
    kept = Gauge.objects.bulk_create(Gauge(district=taking.district, code=code) for code in codes)
    gauges = {one.code: one for one in kept}
    RainDay.objects.bulk_create(
        (
            RainDay(
                gauge=gauges[row["gauge_id"]],
                day=row["day"],
                rain_mm=row["rain_mm"],
                remark=row["remark"] or "",
                rules=_rules_of(row["rain_mm"]),
                by=taking.by,
            )
            for row in days
        ),
        batch_size=AT_ONCE,
    )
    RainMonth.objects.bulk_create(
        RainMonth(
            gauge=gauges[row["gauge_id"]],
            month=row["month"],
            rain_mm=row["rain_mm"],
            by=taking.by,
        )
        for row in months
    )


def _rules_of(rain_mm: float | None) -> list[str]:
    if rain_mm is None:
        return [NOT_READ]
    return [GREAT] if rain_mm > ASK_OVER_MM else []


def take_season_starts(taking: Taking, rows: Sequence[HistoryRow]) -> None:
    """Keep the days on which streams first ran."""
    streams = {
        (one.watershed.code, one.name): one
        for one in Stream.objects.filter(watershed__district=taking.district).select_related(
            "watershed"
        )
    }
    FirstRun.objects.bulk_create(
        FirstRun(
            stream=streams[row["watershed"], row["stream"]],
            year=row["year"],
            first_run_on=row["first_run_on"],
        )
        for row in rows
    )
