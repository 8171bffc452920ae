"""The estimate as a workbook: an auditor can change a rate and see what follows.

Amounts, sums, percentages and the figure for sanction are live formulas of the chain of handbook
8.4; the measurement stands beside them row by row, with its own sums.
"""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from openpyxl.utils import get_column_letter

from costing.documents.screen import NOT_KNOWN, WATER_ROWS
from costing.documents.wording import answer, day_words, item_words, rests_on, unit_words
from costing.price.abstract import NOT_INCLUDED
from costing.price.money import HUNDRED, measured
from structures.documents.workbook import Book, Formula
from structures.intake.defaults import MONEY
from structures.life.cautions import CLOSING_SENTENCE, WORDS

if TYPE_CHECKING:
    from costing.appraisal import Appraisal
    from structures.documents.workbook import Leaf
    from structures.takeoff.sheet import SheetRow, SheetUpright

MONEY_FORM: Final = "0.00"
METRE_FORM: Final = "0.000"
# Uprights of a row as the sheet names them, with the heads of their columns.
UPRIGHT: Final = (
    ("offset_m", "offset m"),
    ("ground_m", "ground m"),
    ("top_m", "top m"),
    ("rock_m", "rock m"),
    ("bottom_m", "bottom of key m"),
    ("depth_m", "depth to rock m"),
    ("slope", "side slope"),
)
# Measures of a row whose sums are quantities or figures of the wall, with the heads.
MEASURES: Final = (
    ("length_m", "length m"),
    ("face_area_m2", "face with key m2"),
    ("face_above_rock_m2", "face above rock m2"),
    ("backfill_m3", "backfill m3"),
    ("rock_key_m3", "rock key m3"),
    ("clay_m3", "clay m3"),
    ("film_m2", "film m2"),
    ("centering_m2", "centering m2"),
    ("surplus_m3", "surplus m3"),
)


@dataclass(frozen=True, slots=True)
class PricedLine:
    """One line of the abstract before its formula."""

    words: str
    unit: str
    quantity: Decimal | None
    rate: Decimal | None
    amount: Decimal | None
    working: str


def estimate_xlsx(found: Appraisal) -> bytes:
    """Write abstract, measurement, water and cautions of an appraisal as a workbook.

    Returns
    -------
    bytes
        An XLSX file; the same appraisal gives the same bytes.
    """
    site = found.pack.site
    name = " ".join(part for part in (site.code, site.name) if part)
    book = Book.begin(f"{name}: estimate", found.on)
    _abstract(book.leaf("Abstract"), found, name)
    _measurement(book.leaf("Measurement", landscape=True), found)
    _water(book.leaf("Water"), found)
    _cautions(book.leaf("Cautions"), found)
    return book.save()


def _abstract(leaf: Leaf, found: Appraisal, name: str) -> None:
    leaf.widths(40, 8, 14, 14, 18, 60)
    leaf.say(name, bold=True)
    leaf.say(f"{day_words(found.on)}. {answer(found)}")
    leaf.say(CLOSING_SENTENCE)
    leaf.skip()
    if found.design is None:
        leaf.say(f"Quantities and cost are {NOT_KNOWN}: there is no wall.", bold=True)
        return
    currency = "" if found.estimate is None else f" {found.estimate.currency}"
    state = "" if found.complete else "INCOMPLETE: see the sheet Cautions"
    leaf.head("item", "unit", "quantity", f"rate{currency}", f"amount{currency}", "working")
    lines = _lines(found)
    first = leaf.row + 1
    for line in lines:
        row = leaf.row + 1
        known = line.quantity is not None and line.rate is not None
        product = f"ROUND(C{row}*D{row},2)"
        text = product if known else f'IF(COUNT(C{row}:D{row})=2,{product},"")'
        amount = Formula(text, "" if line.amount is None else line.amount)
        quantity = NOT_KNOWN if line.quantity is None else line.quantity
        leaf.add(line.words, line.unit, quantity, line.rate, amount, line.working, form=MONEY_FORM)
    _sums(leaf, found, first)
    leaf.skip()
    if state:
        leaf.say(state, bold=True)
    _spread(leaf, found)
    leaf.say(NOT_INCLUDED)
    leaf.say(rests_on(found))


def _lines(found: Appraisal) -> list[PricedLine]:
    """Give the lines of the estimate, or the quantities alone where no rates were given."""
    quantities = found.design.quantities
    if found.estimate is None:
        return [
            PricedLine(
                item_words(one),
                unit_words(one.unit),
                None if one.quantity is None else measured(one.quantity),
                None,
                None,
                one.working,
            )
            for one in quantities
        ]
    return [
        PricedLine(
            item_words(line),
            unit_words(line.unit),
            line.quantity,
            line.rate,
            line.amount,
            one.working,
        )
        for line, one in zip(found.estimate.lines, quantities, strict=True)
    ]


def _sums(leaf: Leaf, found: Appraisal, first: int) -> None:
    """Write the sums under the lines: percentages on the rounded subtotal, each rounded once."""
    last, count = leaf.row, leaf.row - first + 1
    estimate, schedule = found.estimate, found.schedule
    nothing = Decimal("0.00")
    subtotal, contingency, overhead, total = (
        (nothing,) * 4
        if estimate is None
        else (estimate.subtotal, estimate.contingency, estimate.overhead, estimate.total)
    )
    leaf.skip()
    row = leaf.row + 1
    leaf.add(
        "subtotal",
        None,
        None,
        None,
        Formula(f"ROUND(SUM(E{first}:E{last}),2)", subtotal),
        form=MONEY_FORM,
        bold=True,
    )
    for place, (words, key, value) in enumerate(
        (
            ("contingency", "contingency_percent", contingency),
            ("overhead", "overhead_percent", overhead),
        ),
        1,
    ):
        percent = Decimal(str(MONEY[key].value)) if schedule is None else getattr(schedule, key)
        share = Formula(f"ROUND(E{row}*D{row + place}/100,2)", value)
        leaf.add(words, "%", None, percent, share, form=MONEY_FORM)
    leaf.add(
        "total",
        None,
        None,
        None,
        Formula(f"ROUND(SUM(E{row}:E{row + 2}),2)", total),
        form=MONEY_FORM,
        bold=True,
    )
    rounded = f"CEILING(E{row + 3},{HUNDRED:f})"
    sanction = None if estimate is None else estimate.sanction
    if sanction is None:
        text = f'IF(COUNT(E{first}:E{last})={count},{rounded},"{NOT_KNOWN}")'
        formula = Formula(text, NOT_KNOWN)
    else:
        formula = Formula(rounded, sanction)
    words = "for sanction, rounded up to the next 100"
    leaf.add(words, None, None, None, formula, form=MONEY_FORM, bold=True)


def _spread(leaf: Leaf, found: Appraisal) -> None:
    """Write the percentiles as values: they come from the draws and follow no rate."""
    if found.estimate is None:
        leaf.say("No rate schedule was given: fill in the rates above.")
        return
    spread = found.spread
    if spread is None or spread.p50 is None:
        leaf.say(f"P10, P50, P90 of the total: {NOT_KNOWN}, {found.spread_note}.")
        return
    leaf.say(
        f"Total over {spread.draws} draws of the rock line at the rates as given; it does not "
        "follow a rate changed here."
    )
    for words, value in (("P10", spread.p10), ("P50", spread.p50), ("P90", spread.p90)):
        leaf.add(words, None, None, None, value, form=MONEY_FORM)
    leaf.say(f"A flank opens in {100.0 * spread.open_flank_share:.0f} of 100 draws.")


def _measurement(leaf: Leaf, found: Appraisal) -> None:
    """Write the wall piece by piece; each sum is the quantity of the same name before rounding."""
    if found.design is None:
        leaf.say(f"Nothing is measured: the rock line is {NOT_KNOWN}.", bold=True)
        return
    limits = found.design.takings.limits_m.tolist()
    lifts = [f"excavation {a:g} to {b:g} m, m3" for a, b in pairwise(limits)]
    leaf.widths(*(11.0,) * (2 * len(UPRIGHT) + len(lifts) + len(MEASURES)))
    leaf.say("Pieces between two uprights, everything straight between them; left, then right.")
    words = [head for side in ("left", "right") for head in (f"{side} {h}" for _, h in UPRIGHT)]
    leaf.head(*words, *lifts, *(head for _, head in MEASURES))
    first = leaf.row + 1
    table = [_row(one) for one in found.design.sheet]
    for values in table:
        leaf.add(*values, form=METRE_FORM)
    if not table:
        leaf.say("No wall stands on this line.")
        return
    _measured_sums(leaf, table, first)


def _measured_sums(leaf: Leaf, table: list[list[float]], first: int) -> None:
    """Write the sum of each measure, and what goes from it into the abstract."""
    last, uprights = leaf.row, 2 * len(UPRIGHT)
    sums: list[Formula] = []
    rounded: list[Formula] = []
    for column in range(uprights, len(table[0])):
        letter = get_column_letter(column + 1)
        total = sum(values[column] for values in table)
        sums.append(Formula(f"SUM({letter}{first}:{letter}{last})", total))
        rounded.append(Formula(f"ROUND(ROUND({letter}{last + 1},6),2)", measured(total)))
    leaf.add("sum", *(None,) * (uprights - 1), *sums, bold=True, form=METRE_FORM)
    leaf.add("rounded", *(None,) * (uprights - 1), *rounded, form=MONEY_FORM)


def _row(one: SheetRow) -> list[float]:
    return [
        *_upright(one.start),
        *_upright(one.stop),
        *one.excavation_m3,
        *(getattr(one, name) for name, _ in MEASURES),
    ]


def _upright(upright: SheetUpright) -> list[float]:
    return [getattr(upright, name) for name, _ in UPRIGHT]


def _water(leaf: Leaf, found: Appraisal) -> None:
    leaf.widths(36, 16, 10, 70)
    leaf.head("water", "value", "unit", "why not known")
    for words, key, unit in WATER_ROWS:
        value = getattr(found.water, key)
        reason = found.water.reasons.get(key)
        leaf.add(
            words, NOT_KNOWN if value is None else value, unit_words(unit), reason, form="0.00##"
        )


def _cautions(leaf: Leaf, found: Appraisal) -> None:
    leaf.widths(10, 26, 110)
    leaf.head("level", "code", "caution")
    for one in found.cautions:
        leaf.add(WORDS[one.level], one.code, one.text)
    leaf.add(None, None, CLOSING_SENTENCE, bold=True)
