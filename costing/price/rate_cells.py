"""One cell of a rate schedule: its value, or a finding that says what is wrong and what to do."""

from __future__ import annotations

import difflib
import re
from dataclasses import replace
from datetime import date
from decimal import Decimal
from typing import TYPE_CHECKING, Final

from costing.price.money import to_cents
from structures.intake.defaults import MONEY
from structures.intake.fields import DEPTH_MOST_M, TEXT_MOST, Field
from structures.intake.tree import shown
from structures.intake.values import read_value
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from structures.intake.tree import Ledger, Node

BY_LIFTS: Final = "excavation"  # the one item that is measured and priced by lifts
PERCENT: Final = "percent"
PERCENT_DECIMALS: Final = 4  # project choice; a percentage of more digits is a slip
UNITS: Final = ITEMS | dict.fromkeys(MONEY, PERCENT)  # every item a schedule may hold -> its unit
DOUBT: Final = "rates-read"  # rule of what is kept and only doubted
RATE_MOST: Final = 1e8  # project choice; dearer by the unit is a slip of the decimal point
RATE: Final = Field(
    "rate",
    "rate of one unit",
    low=0.0,
    high=RATE_MOST,
    open_low=True,
    low_says=("{value:g} is not above zero.", "Leave the row out where the rate is not known."),
)
FROM: Final = Field(
    "from_m", "depth at which the lift begins", unit="m", low=0.0, high=DEPTH_MOST_M
)
PERCENTS: Final = {
    key: Field(key, default.words, unit=default.unit, low=default.low, high=default.high)
    for key, default in MONEY.items()
}
TEXT: Final = Field("text", "text", "text")
ISO_DATE: Final = re.compile(r"\d{4}-\d{2}-\d{2}", re.ASCII)
CURRENCY: Final = re.compile(r"[A-Za-z]{3}")  # letters of ISO 4217


def read_item(node: Node, ledger: Ledger) -> str | None:
    """Read an item's code; an unknown one is named with the nearest that is known."""
    text = node.value.strip().lower() if isinstance(node.value, str) else ""
    if text in UNITS:
        return text
    if node.blank:
        ledger.add(node, "This is missing.", f"Give one of: {', '.join(UNITS)}.")
        return None
    near = difflib.get_close_matches(text[:TEXT_MOST], UNITS, n=1)
    remedy = f"Was {near[0]} meant?" if near else f"One of: {', '.join(UNITS)}."
    ledger.add(node, f"There is no item {shown(node.value)}.", remedy)
    return None


def check_unit(node: Node, item: str, ledger: Ledger) -> None:
    """Insist that an item is priced in the unit in which it is measured."""
    wanted = UNITS[item]
    text = node.value.strip().lower() if isinstance(node.value, str) else node.value
    if node.blank:
        ledger.add(node, f"The unit of {item} is missing.", f"It is {wanted}.")
    elif text != wanted:
        what = f"{item} is measured in {wanted}, not {shown(node.value)}."
        ledger.add(node, what, f"Give the rate of one {wanted} and write {wanted}.")


def read_rate(node: Node, item: str, ledger: Ledger) -> Decimal | None:
    """Read the price of one unit, or a percentage; a price is one of whole hundredths."""
    if node.blank:
        remedy = "Give it, or leave the row out where it is not known."
        ledger.add(node, f"The rate of {item} is missing.", remedy)
        return None
    exact = read_decimal(node, PERCENTS.get(item, RATE), ledger)
    if exact is None:
        return None
    return _percent(node, exact, ledger) if item in PERCENTS else _price(node, exact, ledger)


def _percent(node: Node, exact: Decimal, ledger: Ledger) -> Decimal | None:
    if exact != round(exact, PERCENT_DECIMALS):
        ledger.add(node, f"{shown(node.value)} has more than four decimals.", "Write it shorter.")
        return None
    return exact


def _price(node: Node, exact: Decimal, ledger: Ledger) -> Decimal | None:
    cents = to_cents(exact)
    if not cents:
        ledger.add(
            node, f"{shown(node.value)} is less than a hundredth.", "Look for a slip of the point."
        )
        return None
    if cents != exact:
        what = f"{shown(node.value)} has more than two decimals; {cents} is taken."
        ledger.add(node, what, "Say so if that is wrong.", level="note", rule=DOUBT)
    return cents


def read_from(node: Node, item: str, ledger: Ledger) -> float | None:
    """Read the depth at which a lift begins; only the item measured by lifts has one."""
    if node.blank:
        return None
    if item != BY_LIFTS:
        ledger.add(node, f"{item} has no lifts.", f"Leave from_m empty; only {BY_LIFTS} has it.")
        return None
    depth = read_decimal(node, FROM, ledger)
    return None if depth is None else float(depth)


def read_text(node: Node, ledger: Ledger) -> str | None:
    """Read words; None where there are none."""
    return None if node.blank else read_value(node, TEXT, ledger)


def read_currency(node: Node, ledger: Ledger) -> str | None:
    """Read a currency as its three letters."""
    text = read_text(node, ledger)
    if text is None:
        return None
    if not CURRENCY.fullmatch(text):
        what = f"{shown(node.value)} is no currency."
        ledger.add(node, what, "Give its three letters, like INR.")
        return None
    return text.upper()


def read_date(node: Node, ledger: Ledger) -> date | None:
    """Read a day as year-month-day."""
    text = read_text(node, ledger)
    if text is None:
        return None
    try:
        if ISO_DATE.fullmatch(text):
            return date.fromisoformat(text)
    except ValueError:
        pass  # the thirtieth of February reads like a date and is none
    ledger.add(node, f"{shown(text)} is no date.", "Write year-month-day, like 2026-09-30.")
    return None


def read_decimal(node: Node, field: Field, ledger: Ledger) -> Decimal | None:
    """Read a number exactly; JSON may give it in quotes, as money is written there."""
    value = read_value(replace(node, tabular=True), field, ledger)
    if value is None:
        return None
    text = node.value.strip() if isinstance(node.value, str) else repr(node.value)
    return Decimal(text) + Decimal(0)  # no minus before a zero
