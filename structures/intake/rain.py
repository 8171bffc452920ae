"""Rain by months or by days: sums of months, with what was not read kept apart from no rain."""

from __future__ import annotations

import calendar
from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.intake.builder import refusal
from structures.intake.fields import Field
from structures.intake.moments import read_day, read_month
from structures.intake.single_table import read_single_table, tell_columns
from structures.intake.tree import Ledger, Node
from structures.intake.values import read_value

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping
    from datetime import date

    from structures.errors import Finding
    from structures.intake.tables import Table

Month = tuple[int, int]  # year and month

DAY_NAMES: Final = ("day", "date")
GAUGE_NAMES: Final = ("gauge", "gauge_id")
MONTHLY: Final = Field("rain_mm", "rain of the month", unit="mm", low=0.0, high=5000.0)
DAILY: Final = Field("rain_mm", "rain of the day", unit="mm", low=0.0, high=2000.0)
ASK_OVER_MM: Final = 200.0  # a day's rain that is looked at again (field practice RN-02)
TRACE_WORDS: Final = frozenset({"trace", "tr", "t"})
TRACE_MM: Final = 0.05  # below 0.1 mm, half of it in a sum (project choice)
UNREAD_WORDS: Final = frozenset({"-", "not read", "nr"})


@dataclass(frozen=True, slots=True)
class Rain:
    """Rain of months in mm; a month that was not read whole is None, one never named is not here."""

    months: Mapping[Month, float | None]
    findings: tuple[Finding, ...] = ()

    def sum_mm(self, months: Iterable[Month]) -> float | None:
        """Rain of several months together; None where one of them is not known."""
        parts = [self.months.get(month) for month in months]
        return None if None in parts else float(sum(parts))


def months_to(last: Month, count: int = 12) -> list[Month]:
    """Give the months up to and with the last one, the earliest first."""
    year, month = last
    ends = [divmod(12 * year + month - 1 - back, 12) for back in range(count)]
    return [(whole, rest + 1) for whole, rest in reversed(ends)]


def read_rain(name: str, data: bytes) -> Rain:
    """Read a rain file of one gauge.

    Source: the interface of `assess_effect`; field practice, rules RN-01 to RN-04 and RN-06.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        CSV or XLSX with `month,rain_mm` (month as 2027-06) or `day,rain_mm`; millimetres.

    Raises
    ------
    Refused
        If the file cannot be used; `findings` names each line and field.
    """
    ledger = Ledger()
    table = read_single_table(name, data, "rain", ledger)
    if table is None:
        raise refusal(ledger, "rain file")
    key = next((one for one in ("month", *DAY_NAMES) if one in table.headings), "month")
    if tell_columns(table, (key, "rain_mm", *GAUGE_NAMES), (key, "rain_mm"), ledger):
        _check_gauge(table, ledger)
        months = _by_month(table, ledger) if key == "month" else _by_day(table, key, ledger)
    if ledger.blocks:
        raise refusal(ledger, "rain file")
    return Rain(months, tuple(ledger.findings))


def _check_gauge(table: Table, ledger: Ledger) -> None:
    for key in GAUGE_NAMES:
        if key not in table.headings:
            continue
        nodes = [table.node(row, "").named(key) for row in table.rows]
        names = {str(node.value).strip() for node in nodes}
        if len(names) > 1:
            what = f"Rain of {len(names)} gauges stands in this file."
            ledger.add(nodes[0], what, "Keep the one that speaks for the wells.")


def _by_month(table: Table, ledger: Ledger) -> dict[Month, float | None]:
    months: dict[Month, float | None] = {}
    for row in (table.node(row, "") for row in table.rows):
        month = read_month(row.named("month"), ledger)
        value = _amount(row.named("rain_mm"), MONTHLY, ledger)
        if month is not None:
            _put(months, month, value, row, ledger)
    blank = sum(value is None for value in months.values())
    if blank:
        what = f"{blank} months are blank. They are not counted as dry."
        ledger.add(Node(None, table.where, "rain_mm"), what, "", level="hold", rule="RN-01")
    return months


def _by_day(table: Table, key: str, ledger: Ledger) -> dict[Month, float | None]:
    days: dict[date, float | None] = {}
    for row in (table.node(row, "") for row in table.rows):
        day = read_day(row.named(key), ledger)
        value = _amount(row.named("rain_mm"), DAILY, ledger)
        if day is None:
            continue
        _put(days, day, value, row, ledger)
        if value is not None and value > ASK_OVER_MM:
            what = f"{value:g} mm on {day}."
            node = row.named("rain_mm")
            ledger.add(node, what, "Check with another gauge.", level="warn", rule="RN-02")
    blank = sum(value is None for value in days.values())
    if blank:
        what = (
            f"{blank} days are blank. They are not counted as dry days; their months have no sum."
        )
        ledger.add(Node(None, table.where, "rain_mm"), what, "", level="hold", rule="RN-01")
    return _sums(days)


def _sums(days: Mapping[date, float | None]) -> dict[Month, float | None]:
    """Add days up to months; a month with a day missing or blank has no sum."""
    parts: dict[Month, list[float | None]] = defaultdict(list)
    for day, value in days.items():
        parts[day.year, day.month].append(value)
    return {
        month: None
        if None in values or len(values) < calendar.monthrange(*month)[1]
        else float(sum(values))
        for month, values in parts.items()
    }


def _amount(node: Node, field: Field, ledger: Ledger) -> float | None:
    word = node.value.strip().lower() if isinstance(node.value, str) else ""
    if node.blank or word in UNREAD_WORDS:
        return None
    return TRACE_MM if word in TRACE_WORDS else read_value(node, field, ledger)


def _put(kept: dict, when: object, value: float | None, row: Node, ledger: Ledger) -> None:
    """Set an amount under its day or month; one that is there already with another value blocks."""
    if when in kept and kept[when] != value:
        what = "This day or month stands here twice with two amounts."
        ledger.add(row.named("rain_mm"), what, "Keep one.")
    kept[when] = value
