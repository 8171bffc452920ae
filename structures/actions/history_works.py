"""Strips, hold points, looks and the measurement book, as they were before the district was kept here."""

from __future__ import annotations

from collections import Counter, defaultdict
from dataclasses import replace
from datetime import datetime
from typing import TYPE_CHECKING, Any, Final

import numpy as np
from django.utils import timezone

from structures.actions.refusals import as_documents
from structures.errors import Finding, Refused
from structures.intake.field_records import HOLD_READINGS, point_of
from structures.life.holds import (
    NINE,
    HoldRecord,
    Sight,
    StripSoFar,
    covered_unseen,
    judge_hold,
)
from structures.life.strips import judge_found_rock
from structures.life.trench import WORDS, Look, judge_look
from structures.models import FoundLevel, HoldPoint, MeasurementEntry, Strip, TrenchLook
from structures.queries.trench_day import asked_of_trench
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from numpy.typing import NDArray

    from structures.actions.history import Taking
    from structures.intake.history import History, HistoryRow

Key = tuple[str, int]  # structure and number of the strip
Strips = dict[Key, Strip]
ROCK: Final = "H2"
RESULTS: Final = {words: result for result, words in WORDS.items()}
AT_ONCE: Final = 500  # rows of one statement
WHAT_MOST: Final = 200


def take_strips(taking: Taking, history: History) -> Strips:
    """Keep the strips; halted and covered unseen are read from their hold points.

    The deep limit of the drawn rock is that of the drawing's own points.
    """
    lines = _drawn_lines(history["drawings"])
    holds = _by_strip(history["hold_points"])
    strips = []
    for row in history["strips"]:
        key = row.names(("structure_id", "strip_no"))
        line = lines.get(key[0])
        so_far = StripSoFar(key[1], _records(holds[key], taking), row["covered_on"])
        unseen = covered_unseen(so_far)
        strips.append(
            Strip(
                structure=taking.structures[key[0]],
                number=key[1],
                from_m=row["from_m"],
                to_m=row["to_m"],
                drawn_rock_m=row["lowest_drawn_rock_m"],
                drawn_rock_low_m=None
                if line is None
                else line.lowest_m(row["from_m"], row["to_m"]),
                opened_on=row["opened_on"],
                covered_on=row["covered_on"],
                covered_unseen=bool(unseen),
                unseen_what=", ".join(f"{hold} {NINE[hold].name}" for hold in unseen)[:WHAT_MOST],
                halted=_halted(so_far),
            )
        )
    kept = Strip.objects.bulk_create(strips)
    return {(one.structure.site.code, one.number): one for one in kept}


def _halted(strip: StripSoFar) -> bool:
    """Tell whether rock was looked at, not let go, and the strip left open."""
    last = [one for one in strip.records if one.hold == ROCK and one.result]
    return strip.covered_on is None and bool(last) and last[-1].result == "no"


def take_holds(taking: Taking, history: History, strips: Strips) -> None:
    """Keep the hold points and the rock they found, each with what today's rules say of it."""
    lines = _drawn_lines(history["drawings"])
    points, levels = [], []
    for key, rows in _by_strip(history["hold_points"]).items():
        strip, line = strips[key], lines.get(key[0])
        said = _judge_in_order(strip, rows, taking)
        attempts: Counter[str] = Counter()
        for row in rows:
            attempts[row["hold"]] += 1
            found = _found_levels(strip, row, taking) if row["hold"] == ROCK else []
            levels += found
            findings = [*said[row.where], *_against_line(strip, line, found), *_photo_of(row)]
            points.append(_hold_point(strip, row, attempts[row["hold"]], findings, taking))
    HoldPoint.objects.bulk_create(points, batch_size=AT_ONCE)
    FoundLevel.objects.bulk_create(levels, batch_size=AT_ONCE)


def _hold_point(
    strip: Strip, row: HistoryRow, attempt: int, findings: Iterable[Finding], taking: Taking
) -> HoldPoint:
    fields = HOLD_READINGS[point_of(row["hold"])]
    values = row["reading_m"] or ()
    return HoldPoint(
        strip=strip,
        hold=row["hold"],
        attempt=attempt,
        asked_at=row["asked_at"],
        asked_by=taking.people[row["asked_by"]],
        readings={field.key: value for field, value in zip(fields, values, strict=False)},
        seen_at=row["seen_at"],
        seen_by=None if row["seen_by"] is None else taking.people[row["seen_by"]],
        result=row["result"] or "",
        findings=as_documents(findings),
    )


def _judge_in_order(
    strip: Strip, rows: Sequence[HistoryRow], taking: Taking
) -> dict[str, tuple[Finding, ...]]:
    """Judge each hold point by what had been seen before it; gives findings by where a row stood."""
    seen = sorted((row for row in rows if row["seen_at"]), key=lambda row: row["seen_at"])
    said: dict[str, tuple[Finding, ...]] = defaultdict(tuple)
    so_far = StripSoFar(strip.number)
    for row in seen:
        day = row["seen_at"].astimezone(taking.zone).date()
        late = strip.covered_on is not None and day > strip.covered_on
        sight = Sight(
            row["hold"],
            row["asked_by"],
            row["seen_by"],
            photos=int(row["photo"]),
            lets_go=row["result"] != "no",
        )
        said[row.where] = judge_hold(
            replace(so_far, covered_on=strip.covered_on if late else None), sight
        )
        so_far = replace(so_far, records=(*so_far.records, *_records([row], taking)))
    return said


def _records(rows: Iterable[HistoryRow], taking: Taking) -> tuple[HoldRecord, ...]:
    return tuple(
        HoldRecord(
            row["hold"],
            row["asked_by"],
            row["seen_by"] or "",
            None if row["seen_at"] is None else row["seen_at"].astimezone(taking.zone).date(),
            row["result"] or "",
        )
        for row in sorted(rows, key=lambda row: row["asked_at"])
    )


def _found_levels(strip: Strip, row: HistoryRow, taking: Taking) -> list[FoundLevel]:
    """Give the levels of a look at the rock: at the start of the strip, in its middle, at its end."""
    places = (strip.from_m, round((strip.from_m + strip.to_m) / 2, 3), strip.to_m)
    return [
        FoundLevel(
            strip=strip,
            offset_m=offset_m,
            level_m=level_m,
            measured_on=row["asked_at"].astimezone(taking.zone).date(),
            by=taking.people[row["asked_by"]],
        )
        for offset_m, level_m in zip(places, row["reading_m"] or (), strict=False)
    ]


def _against_line(strip: Strip, line: _Drawn | None, found: Iterable[FoundLevel]) -> list[Finding]:
    if line is None:
        return []
    said = (
        judge_found_rock(strip.number, one.level_m, *line.range_at(one.offset_m)) for one in found
    )
    return [one for one in said if one is not None]


def _photo_of(row: HistoryRow) -> list[Finding]:
    if not row["photo"]:
        return []
    what = "A photo was taken; it is not among what was taken over."
    return [Finding(row["hold"], "photo", what, "Add it where it is found.", "note")]


def take_looks(taking: Taking, rows: Sequence[HistoryRow], strips: Strips) -> None:
    """Keep the looks with the result that was ticked; what the rules say of it stands beside it."""
    asked = {code: asked_of_trench(one, None) for code, one in taking.structures.items()}
    looks = []
    for row in rows:
        strip = strips[row.names(("structure_id", "strip_no"))]
        result = RESULTS.get(row["result"])
        if result is None:
            what = f"There is no result {row['result']!r} of a look."
            raise Refused(what, where=row.where, remedy=f"One of: {', '.join(RESULTS)}.")
        seen: dict[str, Any] = {
            "spoil_back_m": row["spoil_back_m"],
            "ladder_within_m": row["ladder_within_m"],
            "sides": row["sides"] or "",
            "water": row["water"] or "",
            "rain_since_last": row["rain_since_last"],
        }
        at = datetime.combine(row["day"], row["time_local"], taking.zone)
        look = Look(row["day"], at, result, **seen)
        judged = judge_look(look, asked[row["structure_id"]], str(strip))
        looks.append(
            TrenchLook(
                structure=strip.structure,
                strip=strip,
                day=row["day"],
                looked_at=row["time_local"],
                by=taking.people[row["looked_by"]],
                result=result,
                findings=as_documents(judged.findings),
                **seen,
            )
        )
    TrenchLook.objects.bulk_create(looks, batch_size=AT_ONCE)


def take_measurements(taking: Taking, rows: Sequence[HistoryRow], strips: Strips) -> None:
    """Keep the measurement book.

    The tables name who checked an entry, not when: the check counts from the taking over.
    """
    now = timezone.now()
    entries = []
    for row in rows:
        if ITEMS.get(row["item"]) != row["unit"]:
            what = f"{row['item']} is not measured in {row['unit']}."
            raise Refused(what, where=row.where, remedy="Look at item and unit.")
        checked = row["checked_by"]
        entries.append(
            MeasurementEntry(
                structure=taking.structures[row["structure_id"]],
                strip=strips.get(row.names(("structure_id", "strip_no"))),
                code=row["entry_id"],
                item=row["item"],
                from_m=row["from_m"],
                to_m=row["to_m"],
                unit=row["unit"],
                quantity=row["quantity"],
                relies_on=list(row["relies_on"] or ()),
                measured_on=row["measured_on"],
                covered_on=row["covered_on"],
                measured_by=taking.people[row["measured_by"]],
                checked_by=None if checked is None else taking.people[checked],
                checked_at=None if checked is None else now,
            )
        )
    MeasurementEntry.objects.bulk_create(entries, batch_size=AT_ONCE)


def _by_strip(rows: Iterable[HistoryRow]) -> dict[Key, list[HistoryRow]]:
    found: dict[Key, list[HistoryRow]] = defaultdict(list)
    for row in rows:
        found[row.names(("structure_id", "strip_no"))].append(row)
    return found


class _Drawn:
    """The rock as the newest drawing of a site has it, with its limits."""

    def __init__(self, rows: Sequence[HistoryRow]) -> None:
        ordered = sorted(rows, key=lambda row: row["offset_m"])
        self.offset_m, self.low_m, self.high_m = (
            np.array([row[key] for row in ordered])
            for key in ("offset_m", "rock_low_m", "rock_high_m")
        )

    def range_at(self, offset_m: float) -> tuple[float, float]:
        return tuple(float(np.interp(offset_m, self.offset_m, one)) for one in self._limits)

    def lowest_m(self, from_m: float, to_m: float) -> float:
        inside = (self.offset_m >= from_m) & (self.offset_m <= to_m)
        places = [from_m, to_m, *self.offset_m[inside]]
        return round(min(self.range_at(one)[0] for one in places), 3)

    @property
    def _limits(self) -> tuple[NDArray[np.float64], ...]:
        return self.low_m, self.high_m


def _drawn_lines(rows: Sequence[HistoryRow]) -> Mapping[str, _Drawn]:
    newest = {}
    for row in rows:
        newest[row["site_id"]] = max(row["version"], newest.get(row["site_id"], 0))
    of_site: dict[str, list[HistoryRow]] = defaultdict(list)
    for row in rows:
        if row["version"] == newest[row["site_id"]]:
            of_site[row["site_id"]].append(row)
    return {code: _Drawn(points) for code, points in of_site.items()}
