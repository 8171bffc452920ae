"""A table of rain as somebody keeps it: a day a line, a month a line, or days down and months across."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from datetime import date
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.intake.cells import comma_style, plain, read_date, read_figure
from structures.intake.rain import ASK_OVER_MM, TRACE_MM, TRACE_WORDS
from structures.intake.sheet_columns import DATE, propose_columns
from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping

    from structures.intake.grid import Grid
    from structures.intake.sheet_columns import Columns
    from structures.intake.tree import Ledger

TOTAL: Final = re.compile(r"(\d{1,2})[ -]*day total|total of (\d{1,2}) days", re.IGNORECASE)
GAUGE_ABOVE: Final = re.compile(r"gauge\s+([\w.\-]+)", re.IGNORECASE)
YEAR_ABOVE: Final = re.compile(r"\b((?:19|20)\d{2})\b")
MONTH: Final = re.compile(r"\d{4}-\d{2}", re.ASCII)
RAIN_MOST_MM: Final = 2000.0


@dataclass(frozen=True, slots=True)
class RainRow:
    """Rain of a day, of several days up to it, or of a month; `rain_mm` None is not read.

    `findings` say what is doubted; one that blocks keeps the row out.
    """

    where: str
    gauge: str
    day: date
    rain_mm: float | None
    trace: bool = False
    days: int = 1
    monthly: bool = False
    remark: str = ""
    findings: tuple[Finding, ...] = ()

    @property
    def blocked(self) -> bool:
        """Whether it cannot be kept."""
        return any(one.level == "block" for one in self.findings)


def is_rain(grids: Iterable[Grid]) -> bool:
    """Whether tables look like rain: a column of it, or days down and twelve months across."""
    for grid in grids:
        columns = propose_columns(grid, {})
        if columns is not None and ("rain" in columns.roles or _across(columns)):
            return "depth" not in columns.roles
    return False


def read_rain_sheet(grids: Iterable[Grid], ledger: Ledger, *, gauge: str = "") -> list[RainRow]:
    """Read tables of rain.

    Source: field practice 8, nos. 27 and 28; rules RN-01 to RN-04.

    Parameters
    ----------
    gauge
        Whose rain it is where no column and no line above the table says so.
    """
    rows: list[RainRow] = []
    for grid in grids:
        columns = propose_columns(grid, {})
        if columns is None:
            what = "No line looks like headings of rain."
            ledger.add(Node(None, grid.where), what, "Name the columns: gauge, day, mm.")
            continue
        above = " ".join(plain(cell) for line in grid.lines[: columns.first] for cell in line.cells)
        named = GAUGE_ABOVE.search(above)
        known = gauge or (named[1] if named else "")
        found = list(
            _grid(grid, columns, known, above, ledger)
            if _across(columns)
            else _long(grid, columns, known, ledger)
        )
        blank = sum(one.rain_mm is None and not one.blocked for one in found)
        if blank:
            what = f"{blank} days or months are blank. Not counted as dry days."
            ledger.add(Node(None, grid.where, "rain_mm"), what, "", level="hold", rule="RN-01")
        rows += found
    return _once(rows)


def _across(columns: Columns) -> bool:
    return len(columns.months) == 12 and columns.place(DATE) is not None


def _grid(
    grid: Grid, columns: Columns, gauge: str, above: str, ledger: Ledger
) -> Iterator[RainRow]:
    """Unfold days down and months across."""
    year = YEAR_ABOVE.search(above)
    if year is None or not gauge:
        lacking = "year" if year is None else "gauge"
        what = f"The table does not say of which {lacking} it is."
        ledger.add(Node(None, grid.where), what, "Write it above the headings.", rule="FI-03")
        return
    place = columns.place(DATE)
    comma = comma_style(cell for line in grid.lines for cell in line.cells) == "comma"
    for line in grid.lines[columns.first :]:
        number = plain(line.cell(place))
        if not number.isdigit() or not 1 <= int(number) <= 31:
            continue
        for column, (_, month) in columns.months.items():
            cell = line.cell(column)
            where = f"{grid.place(line)} column {columns.headings[column]}"
            try:
                day = date(int(year[1]), month, int(number))
            except ValueError:
                if plain(cell):
                    what = f"{number} {columns.headings[column]} {year[1]} does not exist."
                    wrong = Finding(where, "day", what, "Look at the sheet.", "block", "RN-04")
                    first = date(int(year[1]), month, 1)
                    yield RainRow(where, gauge, first, None, findings=(wrong,))
                continue
            yield _row(where, gauge, day, cell, "", comma=comma)


def _long(grid: Grid, columns: Columns, gauge: str, ledger: Ledger) -> Iterator[RainRow]:
    places: Mapping[str, int | None] = {
        role: columns.place(role) for role in ("gauge", DATE, "rain", "note")
    }
    if places["rain"] is None or (places["gauge"] is None and not gauge):
        lacking = "rain" if places["rain"] is None else "gauge"
        what = f"No column holds the {lacking}."
        ledger.add(Node(None, grid.where), what, "Name it gauge, day, mm.", rule="FI-03")
        return
    lines = grid.lines[columns.first :]
    comma = comma_style(line.cell(places["rain"]) for line in lines) == "comma"
    month_place = next(
        (place for place, name in enumerate(columns.headings) if name.lower() == "month"), None
    )
    for line in lines:
        where = grid.place(line)
        own = gauge if places["gauge"] is None else plain(line.cell(places["gauge"]))
        remark = "" if places["note"] is None else str(line.cell(places["note"])).strip()
        text = plain(line.cell(month_place if month_place is not None else places[DATE] or 0))
        monthly = MONTH.fullmatch(text) is not None
        try:
            day = date.fromisoformat(f"{text}-01") if monthly else read_date(text, day_first=None)
        except ValueError:
            what = f"{shown(text)} does not exist."
            wrong = Finding(where, "day", what, "Look at the sheet.", "block", "RN-04")
            yield RainRow(where, own, date.min, None, findings=(wrong,))
            continue
        if day is None or not own:
            what = f"{shown(text)} is no day of rain; the row is left out."
            ledger.add(Node(None, where), what, "Write it as 2027-06-03.", level="note")
            continue
        row = _row(where, own, day, line.cell(places["rain"]), remark, comma=comma)
        yield replace(row, monthly=monthly)


def _row(where: str, gauge: str, day: date, cell: object, remark: str, *, comma: bool) -> RainRow:
    word = plain(cell).lower()
    if word in TRACE_WORDS:
        return RainRow(where, gauge, day, TRACE_MM, trace=True, remark=remark)
    figure = read_figure(cell, comma=comma)
    value = figure.value
    if figure.unread:
        return RainRow(where, gauge, day, None, remark=remark)
    if value is None or not 0.0 <= value <= RAIN_MOST_MM:
        what = f"{shown(plain(cell))} is no rain in mm."
        wrong = Finding(where, "rain_mm", what, "Type it again.", "block")
        return RainRow(where, gauge, day, None, remark=remark, findings=(wrong,))
    matched = TOTAL.search(f"{remark}")
    days = int(matched[1] or matched[2]) if matched else 1
    found: list[Finding] = []
    if days > 1:
        what = f"{value:g} mm stands for {days} days. Monthly sum right, daily not."
        found.append(Finding(where, "rain_mm", what, "", "warn", "RN-03"))
    elif value > ASK_OVER_MM:
        what = f"{value:g} mm on {day}."
        found.append(Finding(where, "rain_mm", what, "Check with another gauge.", "hold", "RN-02"))
    return RainRow(where, gauge, day, value, days=days, remark=remark, findings=tuple(found))


def _once(rows: list[RainRow]) -> list[RainRow]:
    """Refuse a day that stands twice with two amounts."""
    first: dict[tuple[str, date, bool], RainRow] = {}
    kept = []
    for row in rows:
        key = (row.gauge, row.day, row.monthly)
        before = first.setdefault(key, row)
        if before is not row and not row.blocked and before.rain_mm != row.rain_mm:
            what = f"{row.gauge} has another amount of this day at {before.where}."
            wrong = Finding(row.where, "rain_mm", what, "Keep one.", "block", "LV-13")
            row = replace(row, findings=(*row.findings, wrong))  # noqa: PLW2901 -- the doubted form of it
        kept.append(row)
    return kept
