"""From the judged lines of a bill to the amount payable, each step with its working in words."""

from __future__ import annotations

from dataclasses import dataclass, field
from decimal import Decimal
from typing import TYPE_CHECKING, Final, Literal

from costing.price.billing import Status, add_up, judge_lines
from costing.price.money import percentage
from costing.price.revision import index_amount
from structures.errors import Finding

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from costing.price.billing import BillLineAsked, JudgedLine, Measured
    from costing.price.contract import ContractTerms, PriceIndex

Kind = Literal["running", "final"]
Code = Literal["gross", "released", "held", "refused", "retention", "advance", "index", "deduction"]
NOTHING: Final = Decimal("0.00")


@dataclass(frozen=True, slots=True)
class BillAsked:
    """One bill as it came: `total` is its own figure, `indices_now` the indices of its month.

    `recovered_before` is what earlier bills took back of the advance. `released` are lines that
    earlier bills held and that are paid with this one; its own total does not count them.

    Raises
    ------
    ValueError
        If a released line is not paid, or two of them pay one entry.
    """

    bill_id: str
    kind: Kind
    currency: str
    lines: tuple[BillLineAsked, ...]
    total: Decimal
    indices_now: Mapping[str, Decimal] = field(default_factory=dict)
    recovered_before: Decimal = NOTHING
    released: tuple[JudgedLine, ...] = ()

    def __post_init__(self) -> None:
        names = [line.asked.entry_id for line in self.released]
        if len(set(names)) < len(names) or any(one.status != "paid" for one in self.released):
            raise ValueError("a released line is paid, and pays an entry once")


@dataclass(frozen=True, slots=True)
class Step:
    """One step on the way to the amount payable, with sign; None is "not known".

    A step that stands `apart` is told and not counted: what is held or refused.
    """

    code: Code
    words: str
    working: str
    amount: Decimal | None
    apart: bool = False


@dataclass(frozen=True, slots=True)
class Payable:
    """Steps in their order; those that are not apart add up to `amount`.

    `amount` is None where a step is not known, and `why` says which. Below zero it is owed back.
    """

    currency: str
    steps: tuple[Step, ...]
    amount: Decimal | None
    why: str = ""

    def taken(self, code: Code) -> Decimal | None:
        """Sum of the steps of one code, as they stand; None where one is not known."""
        return _sum(step.amount for step in self.steps if step.code == code)


@dataclass(frozen=True, slots=True)
class JudgedBill:
    """One bill with its lines by number and what is payable.

    With a finding about the bill as a whole it is not to be decided until that is mended.
    """

    asked: BillAsked
    lines: tuple[JudgedLine, ...]
    payable: Payable
    findings: tuple[Finding, ...]

    def of(self, status: Status) -> tuple[JudgedLine, ...]:
        """Lines of one status, by their numbers."""
        return tuple(line for line in self.lines if line.status == status)


def judge_bill(
    asked: BillAsked, entries: Mapping[str, Measured], terms: ContractTerms
) -> JudgedBill:
    """Judge every line, add up, and explain the amount payable.

    Source: rules BL-01 to BL-07 and ES-05.

    Parameters
    ----------
    asked
        The bill as it came.
    entries
        The measurement book by entry.
    terms
        The contract.

    Raises
    ------
    ValueError
        If two lines have one number, or a line asks for what a released one pays.
    """
    lines = judge_lines(asked.bill_id, asked.lines, entries, terms)
    released = {line.asked.entry_id for line in asked.released}
    if any(one.asked.entry_id in released and one.status != "refused" for one in lines):
        raise ValueError(f"a line of bill {asked.bill_id} asks for what a released one pays")
    findings = add_up(asked.lines, asked.total)
    if asked.currency != terms.currency:
        what = f"Bill in {asked.currency}, contract in {terms.currency}."
        remedy = "One currency a contract: bill in that one."
        findings += (Finding("bill", "currency", what, remedy, "block", "ES-05"),)
    payable = explain(asked, lines, terms)
    return JudgedBill(asked, lines, payable, findings)


def explain(asked: BillAsked, lines: Iterable[JudgedLine], terms: ContractTerms) -> Payable:
    """Lead from the lines to the amount payable, as the contract states and no further.

    Source: handbook 8.7 (index) and 8.4 (each step rounded once). Retention, recovery and index
    are taken on the lines paid and released together.

    Parameters
    ----------
    asked
        The bill.
    lines
        Its lines, judged.
    terms
        The contract.

    Raises
    ------
    ValueError
        If more was recovered before than was advanced.
    """
    judged = tuple(lines)
    of = {
        status: [line for line in judged if line.status == status]
        for status in ("paid", "held", "refused")
    }
    paid, freed = _amount(of["paid"]), _amount(asked.released)
    gross = paid + freed
    steps = [Step("gross", "Lines paid", _lines(of["paid"]), paid)]
    if asked.released:
        working = f"{_lines(asked.released)} of earlier bills"
        steps.append(Step("released", "Held lines released", working, freed))
    steps += [
        Step(
            status,
            f"Lines {status}",
            f"{_lines(of[status])}, not in it",
            _amount(of[status]),
            apart=True,
        )
        for status in ("held", "refused")
        if of[status]
    ]
    steps += _retention(gross, terms)
    steps += _advance(gross, terms, asked.recovered_before)
    index = _index(gross, terms.price_index, asked.indices_now)
    steps += index
    steps += _deductions(_sum([gross, *(step.amount for step in index)]), terms)
    amount = _sum(step.amount for step in steps if not step.apart)
    why = "; ".join(step.working for step in steps if step.amount is None)
    return Payable(terms.currency, tuple(steps), amount, why)


def _retention(gross: Decimal, terms: ContractTerms) -> list[Step]:
    percent = terms.retention_percent
    if percent is None:
        return []
    kept = percentage(gross, percent)
    return [Step("retention", "Retention", f"{percent:f} % of {gross:f} is kept back", -kept)]


def _advance(gross: Decimal, terms: ContractTerms, before: Decimal) -> list[Step]:
    advance = terms.advance
    if advance is None:
        if before:
            raise ValueError("an advance was recovered that the contract does not state")
        return []
    rest = advance.amount - before
    if rest < 0:
        raise ValueError(f"{before} was recovered of an advance of {advance.amount}")
    share = percentage(gross, advance.recovery_percent)
    back = min(share, rest)
    working = f"{advance.recovery_percent:f} % of {gross:f} is {share:f}"
    if back < share:
        working += f"; of {advance.amount:f} only {rest:f} is left to recover"
    else:
        working += f"; {rest - back:f} of {advance.amount:f} is left after it"
    return [Step("advance", "Advance recovered", working, -back)]


def _index(
    gross: Decimal, index: PriceIndex | None, indices_now: Mapping[str, Decimal]
) -> list[Step]:
    if index is None:
        return []
    lacking = index.lacking(indices_now)
    if lacking:
        why = f"the index of {', '.join(lacking)} for this bill is not given"
        return [Step("index", "Price index", why, None)]
    factor = index.factor(indices_now)
    shares = [f"{index.fixed_share:f}"]
    shares += [
        f"{part.share:f} x {indices_now[part.words]:f}/{part.index_then:f} {part.words}"
        for part in index.parts
    ]
    working = f"{gross:f} x ({' + '.join(shares)}) - {gross:f}"
    return [Step("index", "Price index", working, index_amount(gross, factor) - gross)]


def _deductions(value: Decimal | None, terms: ContractTerms) -> list[Step]:
    """Take off what the contract takes; in per cent of a value not known it is not known."""
    steps = []
    for one in terms.deductions:
        if one.percent is None:
            steps.append(Step("deduction", one.words, "fixed by the contract", -one.amount))
        elif value is None:
            why = f"{one.words}: {one.percent:f} % of a value that is not known"
            steps.append(Step("deduction", one.words, why, None))
        else:
            working = f"{one.percent:f} % of {value:f}"
            steps.append(Step("deduction", one.words, working, -one.of(value)))
    return steps


def _sum(amounts: Iterable[Decimal | None]) -> Decimal | None:
    """Add amounts up; one that is not known makes the sum not known."""
    whole = NOTHING
    for amount in amounts:
        if amount is None:
            return None
        whole += amount
    return whole


def _amount(lines: Iterable[JudgedLine]) -> Decimal:
    return sum((line.amount for line in lines), start=NOTHING)


def _lines(lines: Sequence[JudgedLine]) -> str:
    return "1 line" if len(lines) == 1 else f"{len(lines)} lines"
