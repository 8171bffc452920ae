"""A table of levels as somebody keeps it, long or wide: its rows as readings, and what to ask first.

Nothing is guessed: what two readings of the file fit is one question, asked once, and its answer is
kept with the file.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date, datetime, time
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.intake.cells import (
    Figure,
    comma_style,
    day_parts,
    is_serial,
    plain,
    read_clock,
    read_date,
    read_figure,
)
from structures.intake.level_records import LevelRecord, remark_doubts, tape_depth
from structures.intake.readings import STATES
from structures.intake.sheet_columns import DATE, DEPTH, TIME, VALUE, WELL, propose_columns
from structures.intake.tree import Ledger, Node, shown

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping
    from datetime import tzinfo

    from structures.intake.doubt import Doubt
    from structures.intake.grid import Grid, Line
    from structures.intake.sheet_columns import Columns

MONTH_DAY: Final = 15  # a column of a month names no day; its middle stands for it, and is told
YES: Final = "yes"
KEPT_APART: Final = frozenset({"total", "average", "mean", "sum", "min", "max"})


@dataclass(frozen=True, slots=True)
class Question:
    """One thing that only the sender knows; `choices` are (answer, words), `rows` depend on it."""

    key: str
    asks: str
    choices: tuple[tuple[str, str], ...]
    rows: int
    rule: str = "FI-04"


@dataclass(frozen=True, slots=True)
class Sheet:
    """One table with its columns as they are understood."""

    grid: Grid
    columns: Columns


@dataclass(frozen=True, slots=True)
class LevelSheet:
    """What a file of levels says: its rows, its open questions, and what is told of it."""

    records: tuple[LevelRecord, ...]
    questions: tuple[Question, ...]
    sheets: tuple[Sheet, ...]
    findings: tuple[Finding, ...]


@dataclass(frozen=True, slots=True)
class Office:
    """What the reader of a file knows of its place.

    `wells` gives codes by every name in small letters, `likely` the likely one of a name spelled
    otherwise, never used without being asked.
    """

    wells: Mapping[str, str]
    zone: tzinfo
    today: date
    likely: Mapping[str, str]


@dataclass(slots=True)
class _Reading:
    """A file on its way: answers given, questions that came up, what is told."""

    office: Office
    answers: Mapping[str, str]
    ledger: Ledger
    asked: dict[str, Question]

    def ask(self, question: Question) -> str:
        """Give the answer to a question; empty, and the question kept, where there is none."""
        answer = self.answers.get(question.key, "")
        if answer in {one for one, _ in question.choices}:
            return answer
        before = self.asked.get(question.key)
        rows = question.rows + (before.rows if before else 0)
        self.asked[question.key] = replace(question, rows=rows)
        return ""


def read_level_sheet(
    grids: Iterable[Grid],
    office: Office,
    *,
    columns: Mapping[str, str] | None = None,
    answers: Mapping[str, str] | None = None,
    ledger: Ledger | None = None,
) -> LevelSheet:
    """Read tables of levels.

    Source: field practice 8, nos. 1 to 18, 24 to 26, 34; rules FI-03, FI-04, LV-09, LV-12, LV-15.

    Parameters
    ----------
    columns
        What the sender said of columns: heading in small letters and role.
    answers
        What the sender answered to questions, by key.
    """
    reading = _Reading(office, answers or {}, ledger or Ledger(), {})
    sheets, records = [], []
    for grid in grids:
        found = propose_columns(grid, office.wells, columns)
        if found is None:
            what = "No line looks like headings of readings."
            remedy = "Name the columns: well, date, depth."
            reading.ledger.add(Node(None, grid.where), what, remedy, rule="FI-03")
            continue
        sheets.append(Sheet(grid, found))
        records += _Table(grid, found, reading).records()
    return LevelSheet(
        tuple(records),
        tuple(reading.asked.values()),
        tuple(sheets),
        tuple(reading.ledger.findings),
    )


class _Table:
    """One table with the style of its numbers and days."""

    def __init__(self, grid: Grid, columns: Columns, reading: _Reading) -> None:
        self.grid, self.columns, self.reading = grid, columns, reading
        self.lines = grid.lines[columns.first :]
        depth = columns.place(DEPTH)
        self.value = depth if depth is not None else columns.place(VALUE)
        self.day_first = self._day_first()
        self.base = self._base()
        self.comma = self._comma()
        self.unit = self._unit()
        self.minus = self._minus()
        self.state = self._state()

    def records(self) -> Iterator[LevelRecord]:
        """Give the rows; rows without well and day are left out and listed."""
        columns = self.columns
        tape = {columns.place("hold"), columns.place("wet")} if "hold" in columns.roles else set()
        many = columns.months or (columns.wells if len(columns.wells) > 1 else {})
        if self.value is None and not many and (not tape or None in tape):
            what = "No column holds a depth."
            node = Node(None, self.grid.where)
            self.reading.ledger.add(node, what, "Say which one does.", level="hold", rule="FI-03")
            return
        for role in columns.roles:
            if columns.roles.count(role) > 1 and role:
                self._tell_twice(role)
        moved: dict[str, Doubt] = {}
        for line in self.lines:
            for record in self._of_line(line):
                yield self._after_a_mark(record, moved)

    def _of_line(self, line: Line) -> Iterator[LevelRecord]:
        columns = self.columns
        where = self.grid.place(line)
        well = self._well(line)
        if columns.months:
            if well is None or not self._is_well(well):
                self._leave_out(line)
                return
            for column, (year, month) in columns.months.items():
                yield from self._of_month(line, column, well, year, month)
            return
        day, wrong = self._day(line, where)
        if len(columns.wells) > 1:
            if day is None and wrong is None:
                self._leave_out(line)
                return
            for column, code in columns.wells.items():
                if plain(line.cell(column)):
                    yield self._record(line, code, day, wrong, line.cell(column))
            return
        if (well is None or well.lower() in KEPT_APART) or (day is None and wrong is None):
            self._leave_out(line)
            return
        value = line.cell(self.value) if self.value is not None else ""
        yield self._record(line, well, day, wrong, value)

    def _of_month(
        self, line: Line, column: int, well: str, year: int | None, month: int
    ) -> Iterator[LevelRecord]:
        cell = line.cell(column)
        if not plain(cell):
            return  # blank is not read, and here not even a row of its own
        whole = year or self._year()
        if whole is None:
            return
        day = date(whole, month, MONTH_DAY)
        told = "zone and day"
        if told not in self.reading.ledger.told:
            self.reading.ledger.told.add(told)
            what = f"The columns name months only; the {MONTH_DAY}th stands for the day."
            node = Node(None, self.grid.where)
            self.reading.ledger.add(node, what, "Send days where you have them.", level="warn")
        yield self._record(line, well, day, None, cell)

    def _record(
        self, line: Line, well: str, day: date | None, wrong: Finding | None, cell: object
    ) -> LevelRecord:
        where = self.grid.place(line)
        findings = [wrong] if wrong else []
        figure, doubts = self._depth(line, cell, where, findings)
        note = self._text(line, "note")
        if figure.told and not figure.dry:
            note = f"{note} (sent as {figure.told})".strip()
        dry = figure.dry or self._text(line, "dry").lower() == YES
        state = self._text(line, "state").lower()
        if state not in STATES:
            state = self.state
        code = self._code(well, where, findings)
        read_at = None if day is None else self._moment(line, day)
        return LevelRecord(
            where=where,
            id=None,
            well=code,
            mark=self._text(line, "mark") or None,
            read_at=read_at,
            state=state,
            dry=dry,
            depth_m=figure.value,
            read_by=self._text(line, "read_by")[:60],
            note=note[:300],
            row=line.number,
            doubts=(*doubts, *remark_doubts(self._text(line, "note"))),
            findings=tuple(findings),
        )

    def _depth(
        self, line: Line, cell: object, where: str, findings: list[Finding]
    ) -> tuple[Figure, tuple[Doubt, ...]]:
        columns = self.columns
        hold, wet = columns.place("hold"), columns.place("wet")
        if hold is not None and wet is not None:
            held, came_up = (self._figure(line.cell(place)).value for place in (hold, wet))
            below = columns.place("below")
            under = None if below is None else self._figure(line.cell(below)).value
            if held is None or came_up is None:
                findings.append(_no_depth(where))
                return Figure(), ()
            depth_m, doubts = tape_depth(held, came_up, under)
            return Figure(depth_m), doubts
        figure = self._figure(cell)
        if figure.letters is not None:
            answer = self._ask_letters(figure)
            if answer == YES:
                return Figure(figure.letters, told=figure.told), ()
            findings.append(_no_number(where, figure.told))
        elif figure.unread:
            findings.append(_no_depth(where))
        elif figure.value is None and not figure.dry:
            findings.append(_no_number(where, figure.told))
        if figure.value is not None and self.minus:
            figure = replace(figure, value=-figure.value)
        return figure, ()

    def _figure(self, cell: object) -> Figure:
        return read_figure(cell, comma=self.comma, unit=self.unit)

    def _well(self, line: Line) -> str | None:
        place = self.columns.place(WELL)
        if place is not None:
            return plain(line.cell(place)) or None
        if len(self.columns.wells) > 1:
            return ""
        codes = tuple(sorted(set(self.reading.office.wells.values())))
        question = Question(
            "well",
            "No column names the well. Whose readings are these?",
            tuple((code, code) for code in codes),
            1,
            "FI-03",
        )
        return self.reading.ask(question) or None

    def _is_well(self, name: str) -> bool:
        word = name.lower()
        return word not in KEPT_APART and not word.startswith(("average", "total"))

    def _code(self, well: str, where: str, findings: list[Finding]) -> str | None:
        office = self.reading.office
        if well in office.wells.values():
            return well
        code = office.wells.get(well.lower())
        if code is None:
            likely = office.likely.get(well.lower())
            what = f"{shown(well)} is no well here."
            remedy = "Enter the well first, or correct the name."
            if likely:
                remedy = f"Is it {likely}? Then write that, or add the name to its other names."
            rule = "WL-03" if likely else ""
            findings.append(Finding(where, "well", what, remedy, "block", rule))
        return code

    def _day(self, line: Line, where: str) -> tuple[date | None, Finding | None]:
        place = self.columns.place(DATE)
        if place is None or not plain(line.cell(place)):
            return None, None
        cell = line.cell(place)
        try:
            day = read_date(cell, day_first=self.day_first, base=self.base)
        except ValueError:
            what = f"{shown(plain(cell))} does not exist."
            return None, Finding(where, "read_at", what, "Write the day anew.", "block", "RN-04")
        if day is None:
            waits = day_parts(cell) is not None or is_serial(cell)
            what = f"{shown(plain(cell))} is no day."
            remedy = "Answer the question about days." if waits else "Write it as 2027-06-03."
            return None, Finding(where, "read_at", what, remedy, "block", "FI-04")
        return day, None

    def _moment(self, line: Line, day: date) -> datetime:
        """Put day and time together; a mark of a zone in the cell counts before the place's own."""
        office = self.reading.office
        place, hour = self.columns.place(DATE), self.columns.place(TIME)
        text = plain(line.cell(place)) if place is not None else ""
        if len(text) > 10:
            try:
                found = datetime.fromisoformat(text.replace(" ", "T", 1).replace("Z", "+00:00"))
            except ValueError:
                found = None
            if found is not None and found.tzinfo is not None:
                self._tell_zone(found.astimezone(office.zone), text)
                return found.astimezone(office.zone)
        clock = read_clock(line.cell(hour)) if hour is not None else None
        if clock is None and place is not None:
            clock = read_clock(line.cell(place)) if len(text) > 10 or "." in text else None
        self._tell_no_zone(timed=clock is not None)
        return datetime.combine(day, clock or time(0), office.zone)

    def _tell_zone(self, moved: datetime, text: str) -> None:
        if "moved" not in self.reading.ledger.told and moved.isoformat()[:16] != text[:16]:
            self.reading.ledger.told.add("moved")
            what = f"{shown(text)} is read as {moved:%Y-%m-%dT%H:%M%z} of the place."
            node = Node(None, self.grid.where, "read_at")
            self.reading.ledger.add(
                node, what, "Say so if that is wrong.", level="note", rule="LV-12"
            )

    def _tell_no_zone(self, *, timed: bool) -> None:
        key = "no zone" if timed else "no time"
        if key in self.reading.ledger.told:
            return
        self.reading.ledger.told.add(key)
        zone = self.reading.office.zone
        what = f"Time without zone. Taken as {zone}, the setting of the district."
        if not timed:
            what = "No time of day stands with the readings; only the day counts."
        node = Node(None, self.grid.where, "read_at")
        self.reading.ledger.add(node, what, "", level="warn" if timed else "note", rule="LV-12")

    def _tell_twice(self, role: str) -> None:
        key = f"twice {role}"
        if key not in self.reading.ledger.told:
            self.reading.ledger.told.add(key)
            what = f"Two columns are the {role}; the first one is read."
            node = Node(None, self.grid.where)
            self.reading.ledger.add(node, what, "Choose.", level="warn", rule="FI-03")

    def _leave_out(self, line: Line) -> None:
        words = ", ".join(plain(cell) for cell in line.cells if plain(cell))
        what = f"{shown(words)} has no well and day of a reading; it is left out."
        node = Node(None, self.grid.place(line))
        self.reading.ledger.add(node, what, "", level="note", rule="FI-03")

    def _text(self, line: Line, role: str) -> str:
        place = self.columns.place(role)
        return "" if place is None else str(line.cell(place) or "").strip()

    def _cells(self) -> list[object]:
        """Cells that hold depths."""
        columns = self.columns
        places = [*columns.months, *(columns.wells if len(columns.wells) > 1 else ())]
        places += [self.value] if self.value is not None else []
        places += [place for role in ("hold", "wet") if (place := columns.place(role)) is not None]
        return [line.cell(place) for line in self.lines for place in places]

    def _day_first(self) -> bool | None:
        place = self.columns.place(DATE)
        if place is None:
            return None
        parts = [one for line in self.lines if (one := day_parts(line.cell(place)))]
        if not parts:
            return None
        first, second = (max(one[at] for one in parts) for at in (0, 1))
        if first > 12 or second > 12:
            style = "day" if first > 12 else "month"
            key = f"{style} first"
            if key not in self.reading.ledger.told:
                self.reading.ledger.told.add(key)
                example = next(
                    line.cell(place) for line in self.lines if day_parts(line.cell(place))
                )
                day = read_date(example, day_first=first > 12)
                what = f"Days are written with the {style} first: {plain(example)} is {day}."
                node = Node(None, self.grid.where, "read_at")
                self.reading.ledger.add(node, what, "Say so if not.", level="note", rule="FI-04")
            return first > 12
        example = plain(
            next(line.cell(place) for line in self.lines if day_parts(line.cell(place)))
        )
        both = [one for one in parts if one[0] != one[1]]
        question = Question(
            "days",
            f"{example}: day first or month first?",
            (("day", "day first"), ("month", "month first")),
            len(both),
        )
        answer = self.reading.ask(question) if both else "day"
        return {"day": True, "month": False}.get(answer)

    def _base(self) -> str:
        place = self.columns.place(DATE)
        if place is None:
            return ""
        cells = [line.cell(place) for line in self.lines if is_serial(line.cell(place))]
        if not cells:
            return ""
        days = {base: read_date(cells[0], day_first=None, base=base) for base in ("1900", "1904")}
        words = tuple((base, f"{day} (counted from {base})") for base, day in days.items())
        asks = f"{plain(cells[0])} looks like the day number of a spreadsheet. Which day is it?"
        return self.reading.ask(Question("serial", asks, words, len(cells)))

    def _comma(self) -> bool:
        style = comma_style(self._cells())
        if style == "unclear":
            example = next(plain(one) for one in self._cells() if "," in plain(one))
            question = Question(
                "comma",
                f"{example}: is the comma a decimal comma or a thousands mark?",
                (("decimal", "decimal comma"), ("thousands", "thousands mark")),
                sum("," in plain(one) for one in self._cells()),
            )
            return self.reading.ask(question) == "decimal"
        if style == "comma":
            example = next(plain(one) for one in self._cells() if "," in plain(one))
            what = f"Numbers have a decimal comma: {example} is {example.replace(',', '.')}."
            node = Node(None, self.grid.where)
            self.reading.ledger.add(node, what, "Say so if not.", level="note", rule="FI-04")
        return style == "comma"

    def _unit(self) -> str:
        """Give the unit of the column by its heading; marks in cells count cell by cell."""
        units = self.columns.units
        places = [self.value, *self.columns.months, *self.columns.wells]
        return next((units[place] for place in places if place in units), "m")

    def _minus(self) -> bool:
        """Whether depths are written with a minus; asked where most of a column is negative (16)."""
        values = [
            one.value for one in map(self._figure, self._cells()) if one.value not in (None, 0.0)
        ]
        below = [value for value in values if value < 0.0]
        if len(below) < 2 or 2 * len(below) <= len(values):
            return False
        question = Question(
            "minus",
            f"{below[0]:g} m: are depths written down as minus?",
            ((YES, "yes, depth down as minus"), ("no", "no, the sign is meant")),
            len(below),
            "LV-01",
        )
        return self.reading.ask(question) == YES

    def _state(self) -> str:
        if self.columns.place("state") is not None:
            return "not known"
        question = Question(
            "state",
            "No column says whether the pump was off. Were these readings static?",
            (
                ("static", "yes: pump off, water at rest"),
                ("not known", "not known: kept, not used for comparing years"),
            ),
            len(self.lines),
            "LV-04",
        )
        return self.reading.ask(question) or "not known"

    def _year(self) -> int | None:
        this = self.reading.office.today.year
        years = tuple((str(one), str(one)) for one in range(this, this - 6, -1))
        answer = self.reading.ask(Question("year", "Which year are the months of?", years, 1))
        return int(answer) if answer else None

    def _ask_letters(self, figure: Figure) -> str:
        question = Question(
            "letters",
            f"{shown(figure.told)} holds letters for digits. Is it {figure.letters:g}?",
            ((YES, "yes: read O as 0 and l as 1"), ("no", "no: refuse these rows")),
            1,
        )
        return self.reading.ask(question)

    def _after_a_mark(self, record: LevelRecord, moved: dict[str, Doubt]) -> LevelRecord:
        """Hold what a well was read after a remark of another mark (no. 10)."""
        well = record.well or ""
        own = next((one for one in record.doubts if one.field == "note"), None)
        if own is not None:
            moved.setdefault(well, own)
            return record
        before = moved.get(well)
        if before is None:
            return record
        doubt = replace(before, what=f"A reading before it: {before.what}")
        return replace(record, doubts=(*record.doubts, doubt))


def _no_depth(where: str) -> Finding:
    what = "No depth was read. A blank is not zero."
    return Finding(where, "depth_m", what, "Nothing to do if it was not read.", "block")


def _no_number(where: str, text: str) -> Finding:
    return Finding(where, "depth_m", f"{shown(text)} is not a number.", "Type the number.", "block")
