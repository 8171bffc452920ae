"""What a wall will cost with the rock as found, against what was sanctioned and approved.

The day counts, not the final bill: as soon as a strip shows rock elsewhere than drawn, the same
walk is gone again with the levels seen, at the same rates.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Final

import numpy as np

from costing.appraisal import DRAWS, SEED, appraise
from costing.price.sanctioned import Sums
from costing.price.settlement import Worth, worth_of
from costing.risk import price_draws
from structures.ground.found import take_in
from structures.ground.found_lines import draw_around
from structures.intake.practice import HANDBOOK, Practice
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.sheet import measure
from structures.wall.cutoff import cut
from structures.wall.section import make_section

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date
    from decimal import Decimal

    from costing.appraisal import Appraisal
    from costing.price.billing import Measured
    from costing.price.rates import RateSchedule
    from costing.risk import Spread
    from structures.errors import Finding
    from structures.ground.found import AsFound, FoundLevel
    from structures.ground.found_lines import DrawnLines, DrawnRange
    from structures.intake.pack import SurveyPack

NO_BOOK: Final = (
    "Rock was found and nothing stands in the measurement book: what is done is not known."
)


@dataclass(frozen=True, slots=True)
class Drawn:
    """The survey by which a wall was drawn, with tests made since.

    `ranges` is what was recorded of a settled line; without it there is no P10 to P90.
    """

    pack: SurveyPack
    ranges: tuple[DrawnRange, ...] = ()


@dataclass(frozen=True, slots=True)
class Books:
    """Rates of the estimate that was sanctioned, the sums, and the measurement book."""

    schedule: RateSchedule
    sums: Sums = field(default_factory=Sums)
    entries: tuple[Measured, ...] = ()


@dataclass(frozen=True, slots=True)
class Surprise:
    """Rock found outside the range that was drawn at its place."""

    strip: int | None
    offset_m: float
    found_m: float
    low_m: float
    high_m: float


@dataclass(frozen=True, eq=False, slots=True)
class Forecast:
    """The cost with the rock as found; None is "not known", and `reasons` say why in words.

    `appraisal` is the walk along the as-found line, `spread` its P10 to P90 where a range exists.
    `findings` say what its excess over the two sums asks for.
    `to_complete` is the total less the worth of what was measured, at the same rates; contingency
    and overhead of the whole count as still to come.
    """

    appraisal: Appraisal
    as_found: AsFound
    surprises: tuple[Surprise, ...]
    total: Decimal | None
    spread: Spread | None
    sums: Sums
    measured: Worth | None
    to_complete: Decimal | None
    findings: tuple[Finding, ...]
    reasons: tuple[str, ...]

    @property
    def over_technical_percent(self) -> Decimal | None:
        """Excess over technical sanction; below zero where the total is less."""
        return self.sums.over_technical(self.total)

    @property
    def over_administrative_percent(self) -> Decimal | None:
        """Excess over administrative approval."""
        return self.sums.over_administrative(self.total)

    @property
    def asks_for_paper(self) -> bool:
        """Does work stand until a paper is decided: rock outside its range, or a sum exceeded."""
        return bool(self.surprises or self.findings)


def forecast(
    drawn: Drawn,
    found: Iterable[FoundLevel],
    books: Books,
    *,
    on: date,
    draws: int = DRAWS,
    seed: int = SEED,
    practice: Practice = HANDBOOK,
) -> Forecast:
    """Price the wall with the levels that the trench showed.

    Source: the office's practice, "rock runs deeper"; handbook 4 (the as-dug line replaces the
    estimate), 8.6 (strictly greater) and 8.9. Without a settled line the levels enter the estimate
    as pits and its range narrows; with one they replace it (`ground.found`), and its recorded range
    gives the draws (`ground.found_lines`).

    Parameters
    ----------
    drawn
        The survey by which the wall was drawn.
    found
        Rock seen, strip by strip.
    books
        Rates, sums and the measurement book.
    on
        The day of the forecast.
    draws, seed, practice
        As for an appraisal.

    Raises
    ------
    Refused
        If a level cannot be so, or a lift has no rate.
    """
    as_found = take_in(drawn.pack, found)
    walk = appraise(
        as_found.pack, schedule=books.schedule, on=on, draws=draws, seed=seed, practice=practice
    )
    lines, spread = None, walk.spread
    if as_found.pack.rock_line is not None and drawn.ranges:
        lines = draw_around(as_found, drawn.ranges, draws=draws, seed=seed, practice=practice)
        if walk.estimate is not None and walk.estimate.complete:
            spread = _price(lines, walk)
    total = walk.estimate.total if walk.complete else None
    surprises = _surprises(as_found, drawn.ranges)
    measured, why_not = _measured(books, as_found)
    return Forecast(
        appraisal=walk,
        as_found=as_found,
        surprises=surprises,
        total=total,
        spread=spread,
        sums=books.sums,
        measured=measured,
        to_complete=None if total is None or measured is None else total - measured.amount,
        findings=books.sums.findings(total),
        reasons=(
            *_why_no_total(walk),
            *_of_the_line(as_found, lines),
            *_of_the_range(surprises, len(as_found.found)),
            *_off_the_middle(total, spread),
            *((f"P10 to P90 are not known: {spread.why}.",) if spread and spread.why else ()),
            *books.sums.lacking,
            *why_not,
        ),
    )


def _price(lines: DrawnLines, walk: Appraisal) -> Spread:
    """Price every line drawn around the as-found one at the same rates. Source: handbook 8.9."""
    pack = walk.pack
    cutoff = cut(make_section(pack.ground, pack.toes, lines.offset_m, lines.draws_m, pack.wall))
    pumping = plan_pumping(cutoff, pack.ground_water, pack.works, practice=walk.practice)
    takings = measure(cutoff, pack.wall)
    return price_draws(takings, pumping, cutoff.ends, walk.schedule, seed=lines.seed)


def _measured(books: Books, as_found: AsFound) -> tuple[Worth | None, tuple[str, ...]]:
    """Price what was measured; None, with the reason, where that is not the whole of it."""
    if not books.entries and any(one.strip is not None for one in as_found.found):
        return None, (NO_BOOK,)
    worth = worth_of(books.entries, books.schedule.rate_of)
    if not worth.complete:
        return None, (f"Measured and without a rate: {', '.join(worth.unpriced)}.",)
    return worth, ()


def _surprises(as_found: AsFound, ranges: tuple[DrawnRange, ...]) -> tuple[Surprise, ...]:
    """List the levels outside the drawn range, to a hundredth of a metre as levels are booked."""
    if not ranges:
        return ()
    x = [one.offset_m for one in ranges]
    surprises = []
    for one in as_found.found:
        low, high = (
            round(float(np.interp(one.offset_m, x, levels)), 2)
            for levels in ([r.low_m for r in ranges], [r.high_m for r in ranges])
        )
        if not low <= round(one.level_m, 2) <= high:
            surprises.append(Surprise(one.strip, one.offset_m, one.level_m, low, high))
    return tuple(surprises)


def _why_no_total(walk: Appraisal) -> Iterable[str]:
    if walk.complete:
        return
    words = [one.text for one in walk.cautions if one.level == "block"]
    yield " ".join(["The total is not known.", *words])


def _of_the_line(as_found: AsFound, lines: DrawnLines | None) -> Iterable[str]:
    for one in as_found.lowered:
        yield (
            f"At {one.offset_m:.2f} m the line is lowered to the foot of a test at "
            f"{one.level_m:.2f} m; rock lies there or deeper."
        )
    for one in as_found.over_found:
        yield (
            f"At {one.offset_m:.2f} m a test went down to {one.level_m:.2f} m, below the rock found "
            "close by. The level found stands; look at both records."
        )
    if as_found.pack.rock_line is not None and lines is None:
        yield "No range was recorded with the drawn line: there is no P10 and no P90."


def _off_the_middle(total: Decimal | None, spread: Spread | None) -> Iterable[str]:
    """Say that a total lies outside its own percentiles, as where a line stands on its bounds."""
    if None in (total, spread) or None in (spread.p10, spread.p90):
        return
    if not spread.p10 <= total <= spread.p90:
        yield (
            "The exact total lies outside P10 to P90: the line stands where rock may only lie "
            "deeper, or only higher. The exact total is compared; reckon with the range."
        )


def _of_the_range(surprises: tuple[Surprise, ...], count: int) -> Iterable[str]:
    """Doubt a recorded range that the trench has shown not to hold."""
    if surprises:
        worst = max(
            surprises, key=lambda one: max(one.low_m - one.found_m, one.found_m - one.high_m)
        )
        yield (
            f"The drawn range did not hold at {len(surprises)} of {count} levels found, worst at "
            f"{worst.offset_m:.2f} m: {worst.found_m:.2f} m, drawn {worst.low_m:.2f} to "
            f"{worst.high_m:.2f}. Where nothing is dug it is taken as drawn and may be too narrow: "
            "probe there before the paper is decided."
        )
