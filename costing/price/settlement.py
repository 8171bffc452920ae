"""What a contract still has open when its final bill is decided, and what the work is worth."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final

from costing.price.money import line_amount

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping

    from costing.price.billing import JudgedLine, Measured
    from costing.price.contract import ContractTerms

NOTHING: Final = Decimal("0.00")


@dataclass(frozen=True, slots=True)
class Worth:
    """Worth of measured work at given rates; `unpriced` names entries without a rate.

    `amount` is the sum of the priced ones; with an unpriced entry it is incomplete.
    """

    amount: Decimal
    entries: int
    unpriced: tuple[str, ...]

    @property
    def complete(self) -> bool:
        """Has every entry a rate."""
        return not self.unpriced


def worth_of(
    entries: Iterable[Measured], rate_of: Callable[[str, float | None], Decimal | None]
) -> Worth:
    """Price measured entries, each amount rounded once. Source: handbook 8.4.

    Parameters
    ----------
    entries
        Of the measurement book.
    rate_of
        Rate of an item and the lift that begins at a depth, of a schedule or a contract.
    """
    amount, count, unpriced = NOTHING, 0, []
    for entry in entries:
        count += 1
        rate = rate_of(entry.item, entry.from_m)
        if rate is None:
            unpriced.append(entry.entry_id)
        else:
            amount += line_amount(entry.quantity, rate)
    return Worth(amount, count, tuple(unpriced))


@dataclass(frozen=True, slots=True)
class OpenEntry:
    """An entry of which some quantity was never billed; `amount` None where it has no rate.

    Of a correction that takes back both are negative.
    """

    entry_id: str
    quantity: Decimal
    unit: str
    amount: Decimal | None


@dataclass(frozen=True, slots=True)
class Settlement:
    """What a final bill leaves unsettled; each with its own list or amount, never netted.

    `not_billed` were measured and stand in no bill, `billed_short` in part; `held` lines wait for
    a decision; `retention_to_release` is still kept back, `advance_to_recover` not yet back.
    """

    not_billed: tuple[OpenEntry, ...]
    billed_short: tuple[OpenEntry, ...]
    held: tuple[JudgedLine, ...]
    retention_to_release: Decimal
    advance_to_recover: Decimal

    @property
    def settled(self) -> bool:
        """Is nothing open."""
        return not (
            self.not_billed
            or self.billed_short
            or self.held
            or self.retention_to_release
            or self.advance_to_recover
        )

    @property
    def sentences(self) -> tuple[str, ...]:
        """Say in words what is open; empty where nothing is."""
        held = sum((line.amount for line in self.held), start=NOTHING)
        told = (
            (self.not_billed, f"Measured and not billed: {_names(self.not_billed)}."),
            (self.billed_short, f"Billed below what was measured: {_names(self.billed_short)}."),
            (self.held, f"Held and not decided: {_count(len(self.held), 'line')}, {held:f}."),
            (self.retention_to_release, f"Retention to release: {self.retention_to_release:f}."),
            (self.advance_to_recover, f"Advance not recovered: {self.advance_to_recover:f}."),
        )
        return tuple(words for there, words in told if there)


def settle(
    entries: Mapping[str, Measured],
    lines: Iterable[JudgedLine],
    terms: ContractTerms,
    *,
    retention_kept: Decimal = NOTHING,
    advance_recovered: Decimal = NOTHING,
) -> Settlement:
    """Say what is open once all bills of a contract are judged.

    Source: the stage "measured-up" asks that nothing is left undecided.

    Parameters
    ----------
    entries
        The whole measurement book of the contract.
    lines
        Lines of all its bills; a refused line bills nothing.
    terms
        The contract.
    retention_kept
        Kept back by all bills and not released.
    advance_recovered
        Taken back of the advance by all bills.

    Raises
    ------
    ValueError
        If more was recovered than was advanced, or retention is kept that is below zero.
    """
    advanced = NOTHING if terms.advance is None else terms.advance.amount
    if advance_recovered > advanced or retention_kept < 0:
        raise ValueError("retention kept or advance recovered cannot be so")
    billing = [line for line in lines if line.status != "refused"]
    billed: dict[str, Decimal] = {}
    for line in billing:
        name = line.asked.entry_id
        billed[name] = billed.get(name, NOTHING) + line.asked.quantity
    nothing, short = [], []
    for name, entry in entries.items():
        rest = entry.quantity - billed.get(name, NOTHING)
        if rest:
            rate = terms.rate_of(entry.item, entry.from_m)
            amount = None if rate is None else line_amount(rest, rate)
            (short if name in billed else nothing).append(OpenEntry(name, rest, entry.unit, amount))
    return Settlement(
        not_billed=tuple(nothing),
        billed_short=tuple(short),
        held=tuple(line for line in billing if line.status == "held"),
        retention_to_release=retention_kept,
        advance_to_recover=advanced - advance_recovered,
    )


def _names(entries: tuple[OpenEntry, ...]) -> str:
    known = sum((one.amount for one in entries if one.amount is not None), start=NOTHING)
    without = sum(one.amount is None for one in entries)
    rest = f" and {_count(without, 'entry')} without a rate" if without else ""
    return f"{', '.join(one.entry_id for one in entries)}; {known:f}{rest}"


def _count(count: int, noun: str) -> str:
    plural = f"{noun[:-1]}ies" if noun.endswith("y") else f"{noun}s"
    return f"{count} {noun if count == 1 else plural}"
