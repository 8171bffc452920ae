"""A contractor's bill as a file: CSV or XLSX with one line a row, read exactly or refused whole."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final

from costing.price.billing import BillLineAsked
from costing.price.rate_cells import read_decimal
from structures.intake.builder import refusal
from structures.intake.fields import Field
from structures.intake.single_table import read_single_table, tell_columns
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value

if TYPE_CHECKING:
    from structures.errors import Finding

COLUMNS: Final = ("bill", "line", "entry", "quantity", "rate", "amount")
NEEDED: Final = COLUMNS[:-1]
TEXT: Final = Field("text", "text", "text")
LINE: Final = Field("line", "number of the line", "whole", low=1, high=30_000)
MOST: Final = 1e12  # as `price.money`: beyond it a figure is a slip
FIGURE: Final = Field("figure", "figure", low=-MOST, high=MOST)


@dataclass(frozen=True, slots=True)
class BillFile:
    """One bill as it came; `findings` tell what was left out of it."""

    number: str
    lines: tuple[BillLineAsked, ...]
    findings: tuple[Finding, ...]


def read_bill(name: str, data: bytes) -> BillFile:
    """Read a bill; every row is a line of it.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        CSV or XLSX with `bill,line,entry,quantity,rate,amount`; `amount` may be left out.

    Raises
    ------
    Refused
        If a row cannot be read, or the rows name more than one bill; `findings` names each cell.
    """
    ledger = Ledger()
    table = read_single_table(name, data, "bill", ledger)
    if table is None or not tell_columns(table, COLUMNS, NEEDED, ledger):
        raise refusal(ledger, "bill")
    lines, numbers = [], {}
    for row in (table.node(one, "") for one in table.rows):
        numbers.setdefault(_needed(row, "bill", TEXT, ledger), row)
        lines.append(_line(row, ledger))
    if len(numbers) > 1:
        names = ", ".join(shown(one) for one in numbers)
        what = f"The rows name more than one bill: {names}."
        ledger.add(Node(None, name, "bill"), what, "Send one bill a file.")
    if ledger.blocks:
        raise refusal(ledger, "bill")
    (number,) = numbers
    return BillFile(number, tuple(lines), tuple(ledger.findings))


def _line(row: Node, ledger: Ledger) -> BillLineAsked | None:
    number = _needed(row, "line", LINE, ledger)
    entry = _needed(row, "entry", TEXT, ledger)
    quantity, rate = (_figure(row.named(key), ledger) for key in ("quantity", "rate"))
    amount = None if row.named("amount").blank else _figure(row.named("amount"), ledger)
    if None in (number, entry, quantity, rate):
        return None
    return BillLineAsked(int(number), str(entry).strip(), quantity, rate, amount)


def _needed(row: Node, key: str, field: Field, ledger: Ledger) -> object:
    node = row.named(key)
    if node.blank:
        ledger.add(node, "This is missing.", "Fill it in.")
        return None
    return read_value(node, field, ledger)


def _figure(node: Node, ledger: Ledger) -> Decimal | None:
    if node.blank:
        ledger.add(node, "This is missing.", "Fill it in.")
        return None
    return read_decimal(node, FIGURE, ledger)
