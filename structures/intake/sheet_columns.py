"""What the columns of somebody's table mean: proposed from headings and cells, confirmed by them."""

from __future__ import annotations

import hashlib
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.intake.cells import month_named, plain, read_clock, whole_year

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.intake.grid import Grid, Line

HEADING_WITHIN: Final = 15  # lines in which the headings stand
WELL, DATE, TIME, DEPTH, VALUE = "well", "date", "time", "depth", "value"
SPARE: Final = ""
# What a column may be, with the words for it and the headings that say so.
ROLES: Final[dict[str, tuple[str, tuple[str, ...]]]] = {
    WELL: ("well", ("well", "wellid", "wellno", "wellcode", "nameofwell", "station", "borehole")),
    DATE: ("day", ("date", "day", "readon", "dateofreading", "readat", "datetime", "timestamp")),
    TIME: ("time of day", ("time", "hour", "timelocal")),
    DEPTH: (
        "depth below the mark",
        (
            "depth",
            "depthbelowparapet",
            "depthtowater",
            "waterdepth",
            "depthbelowmark",
            "swl",
            "dtw",
        ),
    ),
    VALUE: ("depth or level, row by row", ("value", "reading", "level", "waterlevel")),
    "hold": ("tape held", ("hold", "held", "tapehold")),
    "wet": ("tape wet", ("wet", "wetmark", "tapewet")),
    "below": (
        "tape held below the mark",
        ("tapezerobelowparapet", "tapebelowmark", "belowparapet"),
    ),
    "dry": ("dry, yes or no", ("dry",)),
    "state": ("state of the well", ("state", "pump", "pumpstate")),
    "mark": ("measuring point", ("mark", "markid", "measuringpoint", "mp")),
    "note": ("remark", ("remark", "remarks", "note", "notes", "comment")),
    "read_by": ("reader", ("readby", "reader", "by", "observer")),
    "id": ("identifier", ("id", "readingid")),
    "gauge": ("rain gauge", ("gauge", "gaugeid", "raingauge")),
    "rain": ("rain", ("rain", "rainmm", "mm", "rainfall", "precipitation")),
}
UNIT_WORDS: Final = {
    "m": "m", "metre": "m", "metres": "m", "meter": "m", "cm": "cm", "mm": "mm",
    "ft": "ft", "feet": "ft", "foot": "ft",
}  # fmt: skip
MONTH: Final = re.compile(r"([^\W\d_]+)[ .'-]*(\d{2}|\d{4})?", re.UNICODE)


@dataclass(frozen=True, slots=True)
class Columns:
    """The columns of one table. `heading` and `first` are places in its lines, `roles` by column.

    `months` are columns that hold a month (year None where the table does not say), `wells` columns
    that hold a well; `units` by column where the heading says one.
    """

    headings: tuple[str, ...]
    first: int
    roles: tuple[str, ...]
    units: Mapping[int, str]
    months: Mapping[int, tuple[int | None, int]]
    wells: Mapping[int, str]

    def place(self, role: str) -> int | None:
        """Give the column of a role; None where there is none."""
        return self.roles.index(role) if role in self.roles else None

    @property
    def digest(self) -> str:
        """What tells the same headings again."""
        return hashlib.sha256("\n".join(self.headings).lower().encode()).hexdigest()


def propose_columns(
    grid: Grid, wells: Mapping[str, str], said: Mapping[str, str] | None = None
) -> Columns | None:
    """Propose what each column is; None where no line looks like headings.

    Source: field practice 8, nos. 24 and 25; FI-03.

    Parameters
    ----------
    wells
        Codes of wells by every name they go under, in small letters.
    said
        What somebody said of columns before or on the page: the heading in small letters and a role.
    """
    scores = [_score(line, wells) for line in grid.lines[:HEADING_WITHIN]]
    if not scores or max(scores) < 2:
        return None
    place = scores.index(max(scores))
    top = grid.lines[place]
    width = max(len(line.cells) for line in grid.lines)
    headings = [plain(top.cell(column)) for column in range(width)]
    first = place + 1
    below = grid.lines[first] if first < len(grid.lines) else None
    if below is not None and _has_months(below) and not _has_months(top):
        # Headings over two lines: months stand under one merged cell (no. 24).
        headings = [plain(below.cell(column)) or headings[column] for column in range(width)]
        first += 1
    known = said or {}
    roles = [known.get(name.lower(), _role(name)) for name in headings]
    months = {
        column: month for column, name in enumerate(headings) if (month := _month(name)) is not None
    }
    by_well = {
        column: wells[name.lower()] for column, name in enumerate(headings) if name.lower() in wells
    }
    roles = [
        SPARE if column in months or (column in by_well and len(by_well) > 1) else role
        for column, role in enumerate(roles)
    ]
    roles = _dates_in_time(roles, grid, first)
    units = {column: unit for column, name in enumerate(headings) if (unit := _unit(name))}
    return Columns(tuple(headings), first, tuple(roles), units, months, by_well)


def _score(line: Line, wells: Mapping[str, str]) -> int:
    names = [plain(cell) for cell in line.cells]
    known = sum(bool(_role(name)) for name in names)
    months = sum(_month(name) is not None for name in names)
    return known + months + sum(name.lower() in wells for name in names[1:])


def _has_months(line: Line) -> bool:
    return sum(_month(plain(cell)) is not None for cell in line.cells) >= 2


def _role(name: str) -> str:
    word = re.sub(r"\(.*?\)|\[.*?\]", "", name.lower())
    word = re.sub(r"[\W_]", "", word)
    bare = re.sub(r"[\W_]", "", name.lower())
    for role, (_, names) in ROLES.items():
        if word in names or bare in names or word.removesuffix("m") in names:
            return role
    return SPARE


def _unit(name: str) -> str:
    found = re.search(r"[(\[ _]([a-z]+)[)\]]?$", name.lower())
    return UNIT_WORDS.get(found[1], "") if found else ""


def _month(name: str) -> tuple[int | None, int] | None:
    matched = MONTH.fullmatch(name.strip())
    month = month_named(matched[1]) if matched else None
    if month is None or len(matched[1]) > 9 or _role(name):
        return None
    return (whole_year(matched[2]) if matched[2] else None), month


def _dates_in_time(roles: list[str], grid: Grid, first: int) -> list[str]:
    """Take a column called time that holds days as day and time in one."""
    if DATE in roles or TIME not in roles:
        return roles
    place = roles.index(TIME)
    cells = [plain(line.cell(place)) for line in grid.lines[first : first + 20]]
    dated = [cell for cell in cells if cell and (len(cell) > 8 or read_clock(cell) is None)]
    return [DATE if one == TIME else one for one in roles] if dated else roles
