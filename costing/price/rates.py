"""A rate schedule: what one unit of each item costs, in one currency, for a stated time."""

from __future__ import annotations

import codecs
from dataclasses import dataclass, field
from decimal import Decimal
from pathlib import PurePosixPath
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from costing.price.money import gated, to_cents
from costing.price.rate_cells import (
    BY_LIFTS,
    DOUBT,
    PERCENT,
    PERCENT_DECIMALS,
    check_unit,
    read_currency,
    read_date,
    read_from,
    read_item,
    read_rate,
    read_text,
)
from structures.intake.archive import too_large
from structures.intake.builder import refusal
from structures.intake.defaults import MONEY
from structures.intake.delimited import read_delimited
from structures.intake.json_form import read_json
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import tell_spare
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping
    from datetime import date

    from structures.errors import Finding
    from structures.intake.pack import Note

CURRENCY: Final = "INR"  # interface: the setting's currency unless the office sets another
ROWS_MOST: Final = 1000  # project choice; ten items and some lifts make a schedule
NEEDED: Final = ("item", "unit", "rate")
ROW_KEYS: Final = (*NEEDED, "from_m", "currency", "description")
WHOLE: Final = {  # what is said of the whole schedule, in any row or beside them -> its reader
    "schedule_id": read_text,
    "currency": read_currency,
    "valid_from": read_date,
    "valid_to": read_date,
}
JSON_ROWS: Final = "rates"
HEADING: Final = "item,from_m,unit,rate,currency"


@dataclass(frozen=True, slots=True)
class Rate:
    """Price of one unit of an item; `from_m` is the depth at which the lift begins it serves.

    Excavation without `from_m` serves every lift that has no rate of its own.
    """

    item: str
    unit: str
    rate: Decimal
    from_m: float | None = None
    description: str | None = field(default=None, repr=False)

    def __post_init__(self) -> None:
        if ITEMS.get(self.item) != self.unit:
            raise ValueError(f"{self.item!r} is not priced in {self.unit!r}")
        if not self.rate > 0 or to_cents(self.rate) != self.rate:
            raise ValueError(f"{self.rate} is not a rate of whole hundredths above zero")
        if self.from_m is not None and self.item != BY_LIFTS:
            raise ValueError(f"{self.item!r} has no lifts")


@dataclass(frozen=True, slots=True)
class RateSchedule:
    """Rates of one currency with the two percentages on the sum of the lines.

    `valid_from` and `valid_to` are the first and last day, None where not stated. `findings` is
    what the reader doubts or took by default; `notes` holds columns that a schedule has no place
    for.
    """

    schedule_id: str
    currency: str
    rates: tuple[Rate, ...]
    contingency_percent: Decimal
    overhead_percent: Decimal
    valid_from: date | None = None
    valid_to: date | None = None
    findings: tuple[Finding, ...] = field(default=(), compare=False, repr=False)
    notes: tuple[Note, ...] = field(default=(), compare=False, repr=False)

    def __post_init__(self) -> None:
        places = [(rate.item, rate.from_m) for rate in self.rates]
        if len(set(places)) < len(places):
            raise ValueError("an item, or a lift of it, has two rates")
        for key, default in MONEY.items():
            if not default.low <= getattr(self, key) <= default.high:
                raise ValueError(f"{key} is outside {default.low:g} to {default.high:g}")
        if self.valid_from and self.valid_to and self.valid_to < self.valid_from:
            raise ValueError("the schedule ends before it begins")

    def rate_of(self, item: str, from_m: float | None = None) -> Decimal | None:
        """Rate of an item, or of the lift that begins at `from_m`; None where there is none.

        Source: the interface of rate schedules.
        """
        return serving_rate(self.rates, item, from_m)

    def rates_of(self, item: str) -> tuple[Rate, ...]:
        """Rates of an item, one for each lift that has its own."""
        return tuple(rate for rate in self.rates if rate.item == item)

    def ended(self, on: date) -> bool:
        """Has the schedule's last day passed."""
        return self.valid_to is not None and on > self.valid_to


def serving_rate(rates: Iterable[Rate], item: str, from_m: float | None = None) -> Decimal | None:
    """Rate of an item, or of the lift that begins at `from_m`; None where there is none.

    Source: the interface of rate schedules; a lift's own rate goes before the item's.
    """
    served = {
        None if one.from_m is None else gated(one.from_m): one.rate
        for one in rates
        if one.item == item
    }
    general = served.get(None)
    return general if from_m is None else served.get(gated(from_m), general)


def read_rates(
    name: str,
    data: bytes,
    *,
    currency_default: str = CURRENCY,
    percents_set: Mapping[str, float] = MappingProxyType({}),
) -> RateSchedule:
    """Read a rate schedule from CSV, or from JSON of the same rows.

    Source: the interface of rate schedules. JSON is a list of rows, or an object with the rows in
    `rates` and what is said of the whole schedule beside them.

    Parameters
    ----------
    name
        Name of the file, as findings name it; its stem names a schedule without `schedule_id`.
    data
        CSV with the columns `item,from_m,unit,rate,currency` or JSON rows of these keys.
    currency_default
        The currency where the file names none.
    percents_set
        What an office has set in place of the default percentages, which count where the file
        lacks one.

    Returns
    -------
    RateSchedule
        `findings` holds what was doubted or taken by default, `notes` columns nobody knows.

    Raises
    ------
    Refused
        If the schedule cannot be used; `findings` names each line and field.
    """
    ledger = Ledger()
    if what := too_large(len(data)):
        ledger.add(Node(None, name), what, "Send one rate schedule.")
        raise refusal(ledger, "rate schedule")
    sheet = _Sheet(ledger)
    for row in _rows(name, data, sheet):
        sheet.read_row(row)
    percents = {key: sheet.percent(key, name, percents_set) for key in MONEY}
    if not sheet.rates and not ledger.blocks:
        ledger.add(Node(None, name), "No item has a rate here.", f"Head the columns {HEADING}.")
    said = {key: sheet.agreed(key) for key in WHOLE}
    _check_days(said["valid_from"], said["valid_to"], Node(None, name, "valid_to"), ledger)
    if ledger.blocks:
        raise refusal(ledger, "rate schedule")
    return RateSchedule(
        schedule_id=said["schedule_id"] or PurePosixPath(name).stem,
        currency=said["currency"] or currency_default,
        rates=tuple(sheet.rates),
        **percents,
        valid_from=said["valid_from"],
        valid_to=said["valid_to"],
        findings=tuple(ledger.findings),
        notes=tuple(ledger.notes),
    )


@dataclass(slots=True)
class _Sheet:
    """What the rows said so far: rates, percentages, and what is meant for the whole schedule."""

    ledger: Ledger
    rates: list[Rate] = field(default_factory=list)
    percents: dict[str, Decimal] = field(default_factory=dict)
    places: dict[tuple[str, float | None], str] = field(default_factory=dict)
    said: dict[str, list[tuple[object, Node]]] = field(
        default_factory=lambda: {key: [] for key in WHOLE}
    )

    def read_head(self, head: Node) -> None:
        """Read what JSON says beside its rows; a percentage there is a row in short."""
        self._hear(head)
        self._keep(head, (*WHOLE, *MONEY, JSON_ROWS))
        for key in MONEY:
            value = head.named(key)
            if not value.blank:
                row = {"item": key, "unit": PERCENT, "rate": value.value}
                self.read_row(Node(row, head.where))

    def read_row(self, row: Node) -> None:
        """Read one row."""
        ledger = self.ledger
        if not isinstance(row.value, dict):
            ledger.add(row, f"A row is wanted, not {shown(row.value)}.", f"Give {HEADING}.")
            return
        blocks = ledger.blocks
        self._hear(row)
        self._keep(row, (*ROW_KEYS, *WHOLE))
        item = read_item(row.named("item"), ledger)
        if item is None:
            return
        check_unit(row.named("unit"), item, ledger)
        rate = read_rate(row.named("rate"), item, ledger)
        from_m = read_from(row.named("from_m"), item, ledger)
        words = read_text(row.named("description"), ledger)
        if rate is None or ledger.blocks > blocks:
            return
        place = (item, from_m)
        if place in self.places:
            lift = "" if from_m is None else f" from {from_m:g} m"
            what = f"{item}{lift} has a rate already, at {self.places[place]}."
            ledger.add(row.named("item"), what, "Keep one of them.")
            return
        self.places[place] = row.where
        if item in MONEY:
            self.percents[item] = rate
        else:
            self.rates.append(Rate(item, ITEMS[item], rate, from_m, words))

    def percent(self, key: str, name: str, percents_set: Mapping[str, float]) -> Decimal:
        """Percentage of the schedule, or what counts without it with a note that it was taken."""
        if key in self.percents:
            return self.percents[key]
        default = MONEY[key]
        value = percents_set.get(key, default.value)
        if not self.ledger.blocks:
            source = default.source if value == default.value else "setting"
            what = f"Not given: {value:g} % is taken ({source})."
            remedy = f"Give it as a row with the unit {PERCENT}."
            node = Node(None, name, key)
            self.ledger.add(node, what, remedy, level="note", rule="default-used")
        return Decimal(repr(round(value, PERCENT_DECIMALS)))

    def agreed(self, key: str) -> object:
        """Give what all rows say of the whole schedule; None where none says anything."""
        if not self.said[key]:
            return None
        (first, start), *rest = self.said[key]
        others = {value: node for value, node in reversed(rest) if value != first}
        for value, node in others.items():
            what = f"{value} differs from {first} at {start.where}."
            self.ledger.add(node, what, "One schedule has one; send two files.")
        return first

    def _hear(self, node: Node) -> None:
        for key, read in WHOLE.items():
            value = read(node.named(key), self.ledger)
            if value is not None:
                self.said[key].append((value, node.named(key)))

    def _keep(self, node: Node, known: tuple[str, ...]) -> None:
        """Keep what nobody knows as notes and tell of each name once."""
        for key, member in node.members().items():
            if key in known or member.value in ("", None):
                continue
            self.ledger.keep(member)
            what = "A rate schedule has no such column; kept as a note."
            tell_spare(key, member, known, self.ledger, what=what, rule=DOUBT)


def _rows(name: str, data: bytes, sheet: _Sheet) -> list[Node]:
    """Give the rows of either form; none, with a finding, where they cannot be read."""
    rows = _json_rows(name, data, sheet) if _is_json(name, data) else _csv_rows(name, data, sheet)
    if len(rows) > ROWS_MOST:
        what = f"{len(rows)} rows are more than {ROWS_MOST}."
        sheet.ledger.add(Node(None, name), what, "Send one rate schedule.")
        return []
    return rows


def _is_json(name: str, data: bytes) -> bool:
    suffix = PurePosixPath(name).suffix.lower()
    start = data.removeprefix(codecs.BOM_UTF8).lstrip()[:1]
    return suffix == ".json" or (suffix != ".csv" and start in (b"{", b"["))


def _json_rows(name: str, data: bytes, sheet: _Sheet) -> list[Node]:
    node = read_json(name, data)
    if isinstance(node.value, dict):
        sheet.read_head(node)
        node = node.named(JSON_ROWS)
    if not isinstance(node.value, list):
        what = f"Rows are wanted, not {shown(node.value)}."
        sheet.ledger.add(node, what, f"Write a list of rows with {HEADING}.")
        return []
    return node.elements()


def _csv_rows(name: str, data: bytes, sheet: _Sheet) -> list[Node]:
    table = read_delimited(PurePosixPath(name).stem, name, data, sheet.ledger)
    if table is None:
        return []
    lacking = [key for key in NEEDED if key not in table.headings]
    for key in lacking:
        sheet.ledger.add(Node(None, name, key), "No column is headed so.", f"Write {HEADING}.")
    return [] if lacking else [table.node(row, "") for row in table.rows]


def _check_days(first: date | None, last: date | None, node: Node, ledger: Ledger) -> None:
    if first and last and last < first:
        what = f"The schedule ends on {last}, before it begins on {first}."
        ledger.add(node, what, "Look at both dates.")
