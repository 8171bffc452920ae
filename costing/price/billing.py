"""Which line of a bill is paid, held or refused, and why: a hold sits on a line, never on a bill.

Source: the office's rules BL-01 to BL-07. A line is judged against one entry of the measurement
book and the contract; every finding is told, not the first alone.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal
from typing import TYPE_CHECKING, Final, Literal

from costing.price.money import line_amount, money_text, to_cents
from structures.errors import Finding
from structures.life.measuring import measured_late, unseen
from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping
    from datetime import date

    from costing.price.contract import ContractTerms
    from structures.errors import Level
    from structures.life.measuring import HoldSeen

Status = Literal["paid", "held", "refused"]
STATUS_OF: Final[dict[Level, Status]] = {"block": "refused", "hold": "held"}  # worst first


@dataclass(frozen=True, slots=True)
class Billed:
    """Where an entry was billed before; a line that was refused does not count."""

    bill_id: str
    line_no: int


@dataclass(frozen=True, slots=True)
class Measured:
    """One entry of the measurement book.

    `strip` is None for what belongs to the whole wall, `covered_on` None where nothing is covered
    yet or ever. `relies_on` names hold points ("H7" stands for all its layers), `holds` are those
    of the strip. `corrects` names the entry that this one mends by its difference.

    Raises
    ------
    ValueError
        If the item is not measured in this unit, the quantity is not one of whole hundredths, or
        it is negative and corrects nothing.
    """

    entry_id: str
    strip: int | None
    item: str
    from_m: float | None
    to_m: float | None
    quantity: Decimal
    unit: str
    measured_on: date
    covered_on: date | None
    measured_by: str
    checked_by: str | None
    relies_on: tuple[str, ...] = ()
    holds: tuple[HoldSeen, ...] = ()
    billed_in: Billed | None = None
    corrects: str | None = None

    def __post_init__(self) -> None:
        if ITEMS.get(self.item) != self.unit:
            raise ValueError(f"{self.item!r} is not measured in {self.unit!r}")
        if to_cents(self.quantity) != self.quantity:
            raise ValueError(f"{self.quantity} is not a quantity of whole hundredths")
        if self.quantity < 0 and self.corrects is None:
            raise ValueError(f"{self.entry_id} is negative and corrects nothing")

    @property
    def unseen(self) -> tuple[str, ...]:
        """Hold points relied on that nobody saw while they could be seen. Source: BL-06."""
        return unseen(self.relies_on, self.holds, self.covered_on)


@dataclass(frozen=True, slots=True)
class Release:
    """A decision that a held line is paid all the same; it lifts holds, never what blocks."""

    by: str
    on: date
    reason: str


@dataclass(frozen=True, slots=True)
class BillLineAsked:
    """One line as the bill has it; `amount` is the bill's own figure, None where it states none."""

    line_no: int
    entry_id: str
    quantity: Decimal
    rate: Decimal
    amount: Decimal | None = None
    release: Release | None = None


@dataclass(frozen=True, slots=True)
class JudgedLine:
    """One line with its status and all that was found; `amount` is quantity times rate.

    `entry` is the one it was judged against, less what open corrections take back of it.
    """

    asked: BillLineAsked
    entry: Measured | None
    status: Status
    amount: Decimal
    findings: tuple[Finding, ...] = ()

    @property
    def why(self) -> str:
        """All findings in one line; empty for a line that nothing speaks against."""
        return " ".join(f"{one.what} {one.remedy}" for one in self.findings)


def judge_line(asked: BillLineAsked, entry: Measured | None, terms: ContractTerms) -> JudgedLine:
    """Judge one line of a bill against its entry and the contract.

    Source: rules BL-01 to BL-06. What blocks refuses the line, what holds keeps it apart, and all
    of it is told. A release by somebody who neither measured nor checked lifts a hold; the
    findings stay with the line.

    Parameters
    ----------
    asked
        The line.
    entry
        The entry it names; None where the measurement book has none of that name.
    terms
        The contract.
    """
    amount = line_amount(asked.quantity, asked.rate)
    findings = tuple(_findings(asked, entry, terms, amount))
    levels = {one.level for one in findings}
    status = next((kept for level, kept in STATUS_OF.items() if level in levels), "paid")
    if status == "held" and asked.release is not None:
        by = asked.release.by
        if by in (entry.measured_by, entry.checked_by):
            what = f"{by} measured or checked entry {entry.entry_id} and released line {asked.line_no}."
            findings += (_found(asked, "release", what, "Another person must decide.", "hold", ""),)
        else:
            status = "paid"
    return JudgedLine(asked, entry, status, amount, findings)


def judge_lines(
    bill_id: str,
    lines: Iterable[BillLineAsked],
    entries: Mapping[str, Measured],
    terms: ContractTerms,
) -> tuple[JudgedLine, ...]:
    """Judge the lines of one bill, by their numbers; of two for one entry the later is refused.

    Source: rules BL-01 to BL-06; an entry belongs to the first line that is not refused. What a
    correction takes back, and no bill has taken, is not there to be billed.

    Parameters
    ----------
    bill_id
        As BL-01 names it; an entry that this same bill's line billed is judged again.
    lines
        In any order.
    entries
        The measurement book by entry; corrections that were sent back left out.
    terms
        The contract.

    Raises
    ------
    ValueError
        If two lines have one number.
    """
    in_order = sorted(lines, key=lambda one: one.line_no)
    if len({one.line_no for one in in_order}) < len(in_order):
        raise ValueError(f"two lines of bill {bill_id} have one number")
    book = dict(entries)
    judged: dict[int, JudgedLine] = {}
    # What gives money back goes first: it decides how much of the entry it mends is left.
    for asked in sorted(in_order, key=lambda one: not _takes_back(book.get(one.entry_id))):
        here = Billed(bill_id, asked.line_no)
        entry = book.get(asked.entry_id)
        if entry is not None and entry.billed_in == here:
            entry = book[asked.entry_id] = replace(entry, billed_in=None)
        line = judge_line(asked, _standing(entry, book), terms)
        if line.status != "refused":
            book[asked.entry_id] = replace(entry, billed_in=here)
        judged[asked.line_no] = line
    return tuple(judged[asked.line_no] for asked in in_order)


def _takes_back(entry: Measured | None) -> bool:
    return entry is not None and entry.quantity < 0


def _standing(entry: Measured | None, book: Mapping[str, Measured]) -> Measured | None:
    """Give the entry less what its corrections take back and no bill has taken."""
    if entry is None or _takes_back(entry):
        return entry
    back = sum(
        (
            one.quantity
            for one in book.values()
            if one.corrects == entry.entry_id and _takes_back(one) and one.billed_in is None
        ),
        start=Decimal("0.00"),
    )
    return replace(entry, quantity=max(entry.quantity + back, Decimal("0.00"))) if back else entry


def add_up(lines: Iterable[BillLineAsked], total: Decimal) -> tuple[Finding, ...]:
    """Say where the lines of a bill do not add up to its total. Source: BL-07.

    Parameters
    ----------
    lines
        With the bill's own amounts; where a line states none, quantity times rate.
    total
        As the bill states it.
    """
    amounts = (
        line_amount(one.quantity, one.rate) if one.amount is None else one.amount for one in lines
    )
    whole = sum(amounts, start=Decimal("0.00"))
    if whole == total:
        return ()
    what = f"Lines add to {whole:f}, bill says {total:f}."
    return (
        Finding(
            "bill", "total", what, "Send the bill back to be added up again.", "block", "BL-07"
        ),
    )


def _findings(
    asked: BillLineAsked, entry: Measured | None, terms: ContractTerms, amount: Decimal
) -> Iterable[Finding]:
    if entry is None:
        what = f"Entry {asked.entry_id} is not in the measurement book."
        yield _found(asked, "entry", what, "Measure first, then bill.", "block", "BL-05")
        return
    yield from _once(asked, entry)
    yield from _checked(asked, entry)
    if not _takes_back(entry):  # a hold would keep money that was paid for nothing
        yield from _seen(asked, entry)
    yield from _rate(asked, entry, terms)
    yield from _quantity(asked, entry, amount)


def _once(asked: BillLineAsked, entry: Measured) -> Iterable[Finding]:
    before = entry.billed_in
    if before is not None:
        what = f"Entry {entry.entry_id} was billed in {before.bill_id}, line {before.line_no}."
        yield _found(asked, "entry", what, "Leave this line out.", "block", "BL-01")


def _checked(asked: BillLineAsked, entry: Measured) -> Iterable[Finding]:
    if entry.checked_by is None:
        what = f"Nobody has checked entry {entry.entry_id}."
    elif entry.checked_by == entry.measured_by:
        what = f"{entry.measured_by} measured and checked entry {entry.entry_id}."
    else:
        return
    yield _found(asked, "checked_by", what, "Another person must check.", "block", "BL-02")


def _seen(asked: BillLineAsked, entry: Measured) -> Iterable[Finding]:
    covered = entry.covered_on
    if measured_late(entry.measured_on, covered):
        what = (
            f"Entry {entry.entry_id}: measured {entry.measured_on}, covered {covered}. "
            "Nobody could see it."
        )
        yield _found(asked, "measured_on", what, "Line held.", "hold", "BL-03")
    if entry.unseen:
        holds = ", ".join(entry.unseen)
        strip = "" if entry.strip is None else f" of strip {entry.strip}"
        what = f"Line {asked.line_no} relies on {holds}{strip}, not seen."
        remedy = "Line held until the district decides."
        yield _found(asked, "relies_on", what, remedy, "hold", "BL-06")


def _rate(asked: BillLineAsked, entry: Measured, terms: ContractTerms) -> Iterable[Finding]:
    agreed = terms.rate_of(entry.item, entry.from_m)
    if asked.rate != agreed:
        words = "has none" if agreed is None else f"{agreed:f}"
        what = f"Line {asked.line_no}: rate {asked.rate:f}, contract {words}."
        yield _found(asked, "rate", what, "Bill at the contract's rate.", "block", "BL-04")


def _quantity(asked: BillLineAsked, entry: Measured, amount: Decimal) -> Iterable[Finding]:
    billed, unit = asked.quantity, entry.unit
    if _takes_back(entry):
        if billed != entry.quantity:
            what = f"Billed {billed:f}, measured {entry.quantity:f} {unit}."
            remedy = "A correction is taken whole."
            yield _found(asked, "quantity", what, remedy, "block", "BL-05")
    elif billed <= 0 or to_cents(billed) != billed:
        what = f"Billed {billed:f} {unit}: a line asks for whole hundredths above zero."
        yield _found(asked, "quantity", what, "Bill what was measured.", "block", "BL-05")
    elif billed > entry.quantity:
        what = f"Billed {billed:f}, measured {entry.quantity:f} {unit}."
        yield _found(asked, "quantity", what, "Bill no more than was measured.", "block", "BL-05")
    if asked.amount is not None and asked.amount != amount:
        what = f"{billed:f} {unit} x {asked.rate:f} is {money_text(amount)}, bill says {asked.amount:f}."
        yield _found(
            asked, "amount", what, "Send the line back to be reckoned again.", "block", "BL-07"
        )


def _found(
    asked: BillLineAsked, name: str, what: str, remedy: str, level: Level, rule: str
) -> Finding:
    return Finding(f"line {asked.line_no}", name, what, remedy, level, rule)
