"""Times, days and months as they stand in cells: ISO 8601, or what a workbook holds as a date."""

from __future__ import annotations

import re
import unicodedata
from datetime import UTC, date, datetime
from typing import TYPE_CHECKING, Final

from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from datetime import tzinfo

    from structures.intake.tree import Ledger

_TIME: Final = re.compile(
    r"\d{4}-\d{2}-\d{2}([T ]\d{2}:\d{2}(:\d{2}([.]\d{1,6})?)?( ?(Z|[+-]\d{2}:?\d{2}))?)?", re.ASCII
)
_MONTH: Final = re.compile(r"(\d{4})-(\d{2})", re.ASCII)
_SLASHES: Final = re.compile(r"\d{1,2}[/.-]\d{1,2}[/.-]\d{2,4}.*", re.ASCII)
_SERIAL: Final = re.compile(r"\d{5}([.]\d+)?", re.ASCII)
TIME_REMEDY: Final = "Write it as 2027-06-03T06:40+05:30."
DAY_REMEDY: Final = "Write it as 2027-06-03."
LONGEST: Final = 40  # characters; no time is longer


def read_moment(node: Node, zone: tzinfo, ledger: Ledger) -> datetime | None:
    """Read a time with its zone; None, with a finding, where it cannot be used.

    A time without zone is taken in `zone`, told once a column (LV-12). A time in Z is turned into
    `zone` as well, since phones write it whatever the clock on the wall says; any other zone is
    kept, so that its day is the reader's day.
    """
    value = node.value
    if isinstance(value, datetime):
        return _placed(value, node, zone, ledger)
    if isinstance(value, date):
        return datetime(value.year, value.month, value.day, tzinfo=zone)
    text = _plain(value)
    if not _TIME.fullmatch(text):
        _tell_wrong(node, text, "time", TIME_REMEDY, ledger)
        return None
    try:
        found = datetime.fromisoformat(
            text.replace(" Z", "Z").replace(" +", "+").replace(" -", "-")
        )
    except ValueError:
        ledger.add(node, f"{shown(text)} does not exist.", TIME_REMEDY, rule="RN-04")
        return None
    if len(text) == len("2027-06-03"):
        return found.replace(tzinfo=zone)  # a day alone is the day of the place
    return _placed(found, node, zone, ledger)


def read_day(node: Node, ledger: Ledger) -> date | None:
    """Read a day; None, with a finding, where it cannot be used."""
    value = node.value
    if isinstance(value, datetime):
        return value.date()
    if isinstance(value, date):
        return value
    text = _plain(value)
    if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", text, re.ASCII):
        _tell_wrong(node, text, "day", DAY_REMEDY, ledger)
        return None
    try:
        return date.fromisoformat(text)
    except ValueError:
        ledger.add(node, f"{shown(text)} does not exist.", DAY_REMEDY, rule="RN-04")
        return None


def read_month(node: Node, ledger: Ledger) -> tuple[int, int] | None:
    """Read a month as (year, month); None, with a finding, where it cannot be used."""
    value = node.value
    if isinstance(value, date):
        return value.year, value.month
    text = _plain(value)
    matched = _MONTH.fullmatch(text)
    if not matched:
        _tell_wrong(node, text, "month", "Write it as 2027-06.", ledger)
        return None
    year, month = int(matched[1]), int(matched[2])
    if not 1 <= month <= 12 or year < 1:
        ledger.add(node, f"{shown(text)} does not exist.", "Write it as 2027-06.", rule="RN-04")
        return None
    return year, month


def _placed(found: datetime, node: Node, zone: tzinfo, ledger: Ledger) -> datetime:
    if found.tzinfo is None:
        told = f"zone of {node.field}"
        if told not in ledger.told:
            what = f"Time without zone. Taken as {zone}."
            ledger.add(node, what, "Write the zone behind it.", level="warn", rule="LV-12")
            ledger.told.add(told)
        return found.replace(tzinfo=zone)
    if found.tzinfo is not UTC:
        return found
    moved = found.astimezone(zone)
    told = f"moved {node.field}"
    if moved.utcoffset() and told not in ledger.told:
        what = f"{shown(node.value)} is read as {moved:%Y-%m-%dT%H:%M%z} of the place."
        ledger.add(node, what, "Say so if that is wrong.", level="note", rule="LV-12")
        ledger.told.add(told)
    return moved


def _plain(value: object) -> str:
    """Give the text of a cell with digits of any script as 0 to 9."""
    text = f"{value:.15g}" if isinstance(value, float) else str(value).strip()
    return "".join(str(unicodedata.decimal(sign, sign)) for sign in text[: LONGEST + 1])


def _tell_wrong(node: Node, text: str, kind: str, remedy: str, ledger: Ledger) -> None:
    if _SLASHES.fullmatch(text):
        what = f"{shown(text)}: day first or month first?"
        ledger.add(node, what, remedy, rule="FI-04")
    elif _SERIAL.fullmatch(text):
        what = f"{shown(text)} looks like the day number of a spreadsheet."
        ledger.add(node, what, f"Give the cells the form of a date. {remedy}", rule="FI-04")
    else:
        ledger.add(node, f"{shown(text)} is no {kind}.", remedy)
