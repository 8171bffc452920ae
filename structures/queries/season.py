"""The dry-season clock of structures: first flows of their streams, days needed, reserve.

The season sheet of a structure counts where it speaks of a season still to come; before there is
one, the days follow from quantities that are handed in, at the progress rates of the district.
"""

from __future__ import annotations

from collections import defaultdict
from datetime import date
from typing import TYPE_CHECKING, Final

from structures.life.first_flow import EarlyFlow, early_first_flow
from structures.life.progress import ITEMS, Progress, StripWork, days_needed
from structures.life.season import Clock, Plan, read_clock
from structures.life.stages import DIGGING, RISING
from structures.models import FirstRun, Paper
from structures.queries.districts import today_of
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from structures.models import District, Structure

Quantities = "Mapping[str, float | None]"
TRENCH_OPEN: Final = (DIGGING, RISING)


def clocks_of(
    structures: Iterable[Structure], quantities: Mapping[int, Quantities]
) -> dict[int, Clock]:
    """Give the clock of each structure by its number, in a few queries for all of them.

    Parameters
    ----------
    quantities
        Work by item code (m3; film m2) of each structure's wall, by the structure's number.
    """
    rows = list(structures)
    runs = _first_runs(rows)
    sheets = _season_sheets(rows)
    progress: dict[int, tuple[Progress, int]] = {}
    clocks = {}
    for row in rows:
        district = row.site.watershed.district
        if district.pk not in progress:
            progress[district.pk] = _rates(district)
        today = today_of(district)
        early = early_first_flow(runs.get(row.site.stream_id, ()), today)
        sheet = sheets.get(row.pk)
        plan = (
            _computed(early, quantities.get(row.pk), *progress[district.pk])
            if sheet is None
            else _planned(early, sheet, today)
        )
        clocks[row.pk] = read_clock(plan, today, trench_open=row.stage in TRENCH_OPEN)
    return clocks


def plan_of(structure: Structure) -> tuple[Plan, Progress]:
    """Give first flow and reserve of one structure with the district's rates of progress.

    The days needed are those of its season sheet, or not known.
    """
    district, today = structure.site.watershed.district, today_of(structure.site.watershed.district)
    early = early_first_flow(_first_runs([structure]).get(structure.site.stream_id, ()), today)
    progress, reserve = _rates(district)
    sheet = _season_sheets([structure]).get(structure.pk)
    plan = Plan(early, None, reserve) if sheet is None else _planned(early, sheet, today)
    return plan, progress


def _first_runs(rows: list[Structure]) -> dict[int | None, list[date]]:
    found: dict[int | None, list[date]] = defaultdict(list)
    streams = {row.site.stream_id for row in rows} - {None}
    for stream, day in FirstRun.objects.filter(stream__in=streams).values_list(
        "stream", "first_run_on"
    ):
        found[stream].append(day)
    return found


def _season_sheets(rows: list[Structure]) -> dict[int, Paper]:
    """Give the newest season sheet of each structure."""
    found = Paper.objects.filter(structure__in=rows, kind="season").order_by("at", "version")
    return {paper.structure_id: paper for paper in found}


def _rates(district: District) -> tuple[Progress, int]:
    lines = settings_in_force(district)
    rates = Progress(
        excavation=lines["progress_excavation_m3_per_day"].value,
        rock_key=lines["progress_rock_key_m3_per_day"].value,
        clay=lines["progress_clay_m3_per_day"].value,
        film=lines["progress_film_m2_per_day"].value,
        backfill=lines["progress_backfill_m3_per_day"].value,
    )
    return rates, int(lines["season_reserve_days"].value)


def _planned(early: EarlyFlow | None, sheet: Paper, today: date) -> Plan:
    """Take days and reserve from the sheet; its date of first flow where no list is kept."""
    said = sheet.content
    on = date.fromisoformat(said["early_flow_on"])
    # Of the list and the sheet the earlier day counts.
    if on >= today and (early is None or on < early.on):
        early = EarlyFlow(on, 0 if early is None else early.years)
    return Plan(early, said["days_needed"], said["reserve_days"], said["days_needed_deep"])


def _computed(
    early: EarlyFlow | None, work: Quantities | None, progress: Progress, reserve: int
) -> Plan:
    if work is None:
        return Plan(early, None, reserve)
    strip = StripWork(**{item: work.get(item) for item in ITEMS})
    return Plan(early, days_needed([strip], progress), reserve)
