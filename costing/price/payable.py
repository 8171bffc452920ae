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
    from collections.abc import Iterable, Mapping

    from costing.price.billing import BillLineAsked, JudgedLine, Measured
    from costing.price.contract import ContractTerms, PriceIndex

Kind = Literal["running", "final"]
Code = Literal["gross", "held", "refused", "retention", "advance", "index", "deduction", "payable"]
NOTHING: Final = Decimal("0.00")


@dataclass(frozen=True, slots=True)
class BillAsked:
    """One bill as it came: `total` is its own figure, `indices_now` the indices of its month.

    `recovered_before` is what earlier bills took back of the advance.
    """

    bill_id: str
    kind: Kind
    currency: str
    lines: tuple[BillLineAsked, ...]
    total: Decimal
    indices_now: Mapping[str, Decimal] = field(default_factory=dict)
    recovered_before: Decimal = NOTHING


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
        If two lines have one number.
    """
    lines = judge_lines(asked.bill_id, asked.lines, entries, terms)
    findings = add_up(asked.lines, asked.total)
    if asked.currency != terms.currency:
        what = f"Bill in {asked.currency}, contract in {terms.currency}."
        remedy = "One currency a contract: bill in that one."
        findings += (Finding("bill", "currency", what, remedy, "block", "ES-05"),)
    payable = explain(
        lines, terms, indices_now=asked.indices_now, recovered_before=asked.recovered_before
    )
    return JudgedBill(asked, lines, payable, findings)


def explain(
    lines: Iterable[JudgedLine],
    terms: ContractTerms,
    *,
    indices_now: Mapping[str, Decimal],
    recovered_before: Decimal = NOTHING,
) -> Payable:
    """Lead from the lines to the amount payable, as the contract states and no further.

    Source: handbook 8.7 (index) and 8.4 (each step rounded once).

    Parameters
    ----------
    lines
        Judged lines of one bill.
    terms
        The contract.
    indices_now
        Indices of the bill's month by name, where the contract follows some.
    recovered_before
        What earlier bills took back of the advance.

    Raises
    ------
    ValueError
        If more was recovered before than was advanced.
    """
    judged = tuple(lines)
    sums = {
        status: sum((one.amount for one in judged if one.status == status), start=NOTHING)
        for status in ("paid", "held", "refused")
    }
    counts = {status: sum(one.status == status for one in judged) for status in sums}
    gross = sums["paid"]
    steps = [
        Step("gross", "Lines paid", _lines(counts["paid"]), gross),
        *(
            Step(
                status,
                f"Lines {status}",
                f"{_lines(counts[status])}, not in it",
                sums[status],
                apart=True,
            )
            for status in ("held", "refused")
            if counts[status]
        ),
    ]
    steps += _retention(gross, terms)
    steps += _advance(gross, terms, recovered_before)
    index = _index(gross, terms.price_index, indices_now)
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


def _lines(count: int) -> str:
    return f"{count} line" if count == 1 else f"{count} lines"
