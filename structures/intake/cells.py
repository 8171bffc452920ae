"""Single cells as people write them: numbers with their marks and units, days, words for dry."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from typing import TYPE_CHECKING, Final

from structures.intake.readings import DRY_WORDS, UNREAD_WORDS
from structures.units import FOOT_M

if TYPE_CHECKING:
    from collections.abc import Iterable

INCHES: Final = 12.0  # of a foot, exact
UNITS: Final = {"m": 1.0, "ft": FOOT_M, "cm": 0.01, "mm": 0.001}  # exact
CENTURY_TURNS: Final = 70  # two digits below are of this century (field practice 8, no. 3)
SERIAL_FIRST: Final = {"1900": date(1899, 12, 30), "1904": date(1904, 1, 1)}
# 1900 counts a 29 February that never was; its serials of this century start from 30 December 1899.
NUMBER: Final = re.compile(r"[+-]?(\d+([.]\d*)?|[.]\d+)", re.ASCII)
FEET: Final = re.compile(
    r"(\d+(?:[.]\d+)?)\s*(?:'|ft|feet|\u2032)\s*(?:(\d+(?:[.]\d+)?)\s*(?:\"|''|in|\u2033)?)?",
    re.ASCII | re.IGNORECASE,
)
WITH_UNIT: Final = re.compile(
    r"([+-]?\d+(?:[.]\d+)?)\s*(m|cm|mm|mtr|metres?|meters?)[.]?", re.ASCII | re.IGNORECASE
)
LETTERS: Final = str.maketrans({"O": "0", "o": "0", "l": "1", "I": "1"})
DAY: Final = re.compile(r"(\d{1,2})[/.-](\d{1,2})[/.-](\d{2}|\d{4})(?:[ T]+(.*))?", re.ASCII)
WORDY: Final = re.compile(
    r"(\d{1,2})[ -]+([^\W\d_.]+|[\u0900-\u097f]+)[.]?[ ,-]*(\d{2}|\d{4})?", re.UNICODE
)
SERIAL: Final = re.compile(r"[2-6]\d{4}([.]\d+)?", re.ASCII)
CLOCK: Final = re.compile(r"(\d{1,2})[:.](\d{2})(?::(\d{2}))?\s*([ap]m)?", re.ASCII | re.IGNORECASE)
MONTHS: Final = (
    ("jan", "जन"), ("feb", "फर", "फ़र"), ("mar", "मार"), ("apr", "अप्र"), ("may", "मई"), ("jun", "जून"),
    ("jul", "जुल"), ("aug", "अग"), ("sep", "सित"), ("oct", "अक्टू", "अक्तू"), ("nov", "नव"), ("dec", "दिस"),
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Figure:
    """What a cell of a depth says: a number, dry, or nothing; `told` how an unusual one was read.

    `letters` is the number that letters in the place of digits were likely meant to be.
    """

    value: float | None = None
    dry: bool = False
    unread: bool = False
    told: str = ""
    letters: float | None = None


def plain(cell: object) -> str:
    """Give the text of a cell with digits of any script as 0 to 9."""
    if isinstance(cell, float):
        return f"{cell:.15g}"
    text = str(cell if cell is not None else "").strip()
    return "".join(str(unicodedata.decimal(sign, sign)) for sign in text)


def read_figure(cell: object, *, comma: bool, unit: str = "m") -> Figure:
    """Read a depth, a level or an amount.

    Source: field practice 8, nos. 1, 2, 13, 14, 17 and 18.

    Parameters
    ----------
    comma
        Whether the column writes decimal commas.
    unit
        Unit of the column: m, cm, mm or ft; a mark in the cell itself counts before it.
    """
    if isinstance(cell, int | float) and not isinstance(cell, bool):
        return Figure(_scaled(float(cell), unit))
    text = plain(cell)
    word = text.lower().rstrip("?! ")
    if not text or word in UNREAD_WORDS:
        return Figure(unread=True)
    if word in DRY_WORDS:
        return Figure(dry=True, told=text)
    pointed = text.replace(",", ".") if comma else text.replace(",", "")
    if NUMBER.fullmatch(pointed):
        return Figure(_scaled(float(pointed), unit))
    if matched := FEET.fullmatch(pointed):
        feet = float(matched[1]) + float(matched[2] or 0.0) / INCHES
        return Figure(round(feet * FOOT_M, 4), told=text)
    if matched := WITH_UNIT.fullmatch(pointed):
        named = matched[2].lower()
        return Figure(_scaled(float(matched[1]), named if named in UNITS else "m"), told=text)
    swapped = pointed.translate(LETTERS)
    if NUMBER.fullmatch(swapped):
        return Figure(letters=_scaled(float(swapped), unit), told=text)
    return Figure(told=text)


def _scaled(value: float, unit: str) -> float:
    return value if unit == "m" else round(value * UNITS[unit], 4)


def comma_style(cells: Iterable[object]) -> str:
    """Tell whether a column writes decimal commas: "comma", "point", or "unclear" (no. 2)."""
    texts = [plain(cell) for cell in cells if isinstance(cell, str)]
    commas = [text for text in texts if re.fullmatch(r"[+-]?\d+,\d+", text, re.ASCII)]
    points = [text for text in texts if re.fullmatch(r"[+-]?[\d,]*\d[.]\d+", text, re.ASCII)]
    if not commas:
        return "point"
    thousands = all(len(text.split(",")[1]) == 3 for text in commas)
    if not thousands and not points:
        return "comma"
    return "point" if thousands and points else "unclear"


def day_parts(cell: object) -> tuple[int, int, int] | None:
    """Give the two short parts and the year of a day written with strokes; None for any other."""
    matched = DAY.fullmatch(plain(cell))
    if not matched:
        return None
    return int(matched[1]), int(matched[2]), whole_year(matched[3])


def whole_year(text: str) -> int:
    """Give a year of two digits its century."""
    year = int(text)
    if len(text) > 2:
        return year
    return year + (2000 if year < CENTURY_TURNS else 1900)


def month_named(text: str) -> int | None:
    """Give the month that a word names, in the languages that are read."""
    word = text.strip().lower()
    if len(word) < 2:
        return None
    for number, starts in enumerate(MONTHS, start=1):
        if any(word.startswith(start) for start in starts):
            return number
    return None


def read_date(
    cell: object, *, day_first: bool | None, base: str = "", year: int | None = None
) -> date | None:
    """Read a day as it was written; None where it is none, or only a question settles it.

    Raises
    ------
    ValueError
        If the day is written like one and does not exist.
    """
    if isinstance(cell, datetime):
        return cell.date()
    if isinstance(cell, date):
        return cell
    text = plain(cell)
    head = text[:10]
    if re.fullmatch(r"\d{4}-\d{2}-\d{2}", head, re.ASCII):
        return date.fromisoformat(head)
    if parts := day_parts(text):
        first, second, whole = parts
        if day_first is None and first <= 12 and second <= 12 and first != second:
            return None
        late = day_first is not False if first <= 12 and second <= 12 else first > 12
        return date(whole, second, first) if late else date(whole, first, second)
    if SERIAL.fullmatch(text):
        return SERIAL_FIRST[base] + timedelta(days=int(float(text))) if base else None
    matched = WORDY.fullmatch(text)
    month = month_named(matched[2]) if matched else None
    whole = whole_year(matched[3]) if matched and matched[3] else year
    return date(whole, month, int(matched[1])) if month and whole else None


def is_serial(cell: object) -> bool:
    """Whether a cell looks like the day number of a spreadsheet."""
    return SERIAL.fullmatch(plain(cell)) is not None


def read_clock(cell: object) -> time | None:
    """Read the time of day of a cell; None where it has none."""
    if isinstance(cell, datetime):
        return cell.time()
    if isinstance(cell, time):
        return cell
    text = plain(cell)
    if SERIAL.fullmatch(text) and "." in text:
        minutes = round(float(f"0.{text.split('.')[1]}") * 24 * 60)
        return time(*divmod(min(minutes, 24 * 60 - 1), 60))
    found = CLOCK.search(text[11:] if re.match(r"\d{4}-\d{2}-\d{2}[T ]", text) else text)
    if not found:
        return None
    hour, minute = int(found[1]), int(found[2])
    half = (found[4] or "").lower()
    hour = hour % 12 + (12 if half == "pm" else 0) if half else hour
    return time(hour, minute) if hour < 24 and minute < 60 else None
