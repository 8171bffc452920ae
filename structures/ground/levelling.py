"""A level book reduced two ways in exact decimals, with its check and its misclosure.

Symbols follow handbook section 1: BS back sight, IS intermediate sight, FS fore sight, HI height of
instrument, RL reduced level.
"""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from structures.errors import Finding, Refused
from structures.intake.defaults import GROUND

if TYPE_CHECKING:
    from collections.abc import Sequence

MM_PER_M: Final = 1000  # exact
STAFF_M: Final = 5  # [A] a longer reading is doubted; handbook 1.7


@dataclass(frozen=True, slots=True)
class BookLine:
    """One line of the level book; sights in m, `distance_km` run since the start.

    The first line has only a back sight, the last only a fore sight, a change point both, every
    other an intermediate sight.
    """

    point: str
    distance_km: Decimal
    back: Decimal | None = None
    between: Decimal | None = None
    fore: Decimal | None = None


@dataclass(frozen=True, slots=True)
class LevelRun:
    """A level run that closed within its limit.

    `levels_m` are as reduced, `adjusted_m` exact after the misclosure was shared out by distance;
    `findings` holds sights that are doubted but kept.
    """

    points: tuple[str, ...]
    levels_m: tuple[Decimal, ...]
    adjusted_m: tuple[Fraction, ...]
    sum_back_m: Decimal
    sum_fore_m: Decimal
    misclosure_m: Decimal
    allowable_mm: float
    findings: tuple[Finding, ...] = ()


def reduce_by_instrument_height(book: Sequence[BookLine], start_m: Decimal) -> tuple[Decimal, ...]:
    """Reduce a level book by the height of instrument. Source: handbook 1.1.

    Parameters
    ----------
    book
        Lines as booked.
    start_m
        Known level of the first point.
    """
    levels = [start_m]
    height = start_m + book[0].back
    for line in book[1:]:
        sight = line.between if line.fore is None else line.fore
        levels.append(height - sight)
        if line.back is not None:
            height = levels[-1] + line.back
    return tuple(levels)


def reduce_by_rise_and_fall(book: Sequence[BookLine], start_m: Decimal) -> tuple[Decimal, ...]:
    """Reduce a level book by rises and falls. Source: handbook 1.2."""
    levels = [start_m]
    before = book[0].back
    for line in book[1:]:
        sight = line.between if line.fore is None else line.fore
        levels.append(levels[-1] + before - sight)
        before = sight if line.back is None else line.back
    return tuple(levels)


def allowable_misclosure_mm(
    distance_km: Decimal, constant_mm: float = GROUND["misclosure_mm"].value
) -> float:
    """Misclosure that is allowed, constant * sqrt(K). Source: handbook 1.5."""
    return constant_mm * float(distance_km) ** 0.5


def reduce_run(
    book: Sequence[BookLine],
    *,
    start_m: Decimal,
    close_m: Decimal,
    constant_mm: float = GROUND["misclosure_mm"].value,
) -> LevelRun:
    """Reduce, check and adjust a level run that closes on a known point.

    Source: handbook 1.1 to 1.5.

    Parameters
    ----------
    book
        Lines as booked, at least two.
    start_m, close_m
        Known levels of the first and the last point.
    constant_mm
        Allowed misclosure of a run of one kilometre.

    Raises
    ------
    Refused
        If a line lacks its sight, distances do not grow, the two methods or the arithmetic check
        differ, or the run does not close within its limit: it is run again, never adjusted.
    """
    _check_sights(book)
    _check_distances(book)
    levels = reduce_by_instrument_height(book, start_m)
    sum_back = sum((line.back for line in book if line.back is not None), start=Decimal(0))
    sum_fore = sum((line.fore for line in book if line.fore is not None), start=Decimal(0))
    if levels != reduce_by_rise_and_fall(book, start_m) or (
        sum_back - sum_fore != levels[-1] - levels[0]
    ):
        raise Refused(
            "The arithmetic check does not hold.",
            where="level book",
            remedy="Look for a sight in the wrong column.",
        )
    misclosure = levels[-1] - close_m
    length_km = book[-1].distance_km
    allowable = allowable_misclosure_mm(length_km, constant_mm)
    if abs(misclosure) * MM_PER_M > Decimal(repr(allowable)):
        raise Refused(
            f"The level run closes {abs(misclosure) * MM_PER_M:.1f} mm off, allowed {allowable:.1f}.",
            where=f"closing on {book[-1].point}",
            remedy="Over the limit nothing is adjusted: run it again from the worst set-up.",
        )
    shared = [Fraction(line.distance_km) / Fraction(length_km) for line in book]
    return LevelRun(
        points=tuple(line.point for line in book),
        levels_m=levels,
        adjusted_m=tuple(
            Fraction(level) - Fraction(misclosure) * share
            for level, share in zip(levels, shared, strict=True)
        ),
        sum_back_m=sum_back,
        sum_fore_m=sum_fore,
        misclosure_m=misclosure,
        allowable_mm=allowable,
        findings=_long_sights(book),
    )


def _check_sights(book: Sequence[BookLine]) -> None:
    for number, line in enumerate(book):
        first, last = number == 0, number == len(book) - 1
        wanted = (first or (line.back is not None and not last), not first)
        sights = (line.back is not None, line.between is not None or line.fore is not None)
        both = line.between is not None and line.fore is not None
        turning = line.between is not None and line.back is not None
        if sights != wanted or both or turning or (last and line.fore is None):
            raise Refused(
                f"The sights of {line.point} are not those of its place in the book.",
                where=f"level book line {number + 1}",
                remedy="First a back sight, last a fore sight, both at a change point.",
            )


def _check_distances(book: Sequence[BookLine]) -> None:
    distances = [line.distance_km for line in book]
    if not any(distances):
        raise Refused(
            "The run has no length.",
            where="level book",
            remedy="Book the distance run since the start; the limit depends on it.",
        )
    if distances[0] or any(after < before for before, after in pairwise(distances)):
        raise Refused(
            "Distances do not grow from 0 at the first line.",
            where="level book",
            remedy="Book the distance run since the start, in km.",
        )


def _long_sights(book: Sequence[BookLine]) -> tuple[Finding, ...]:
    """Doubt readings longer than a staff."""
    return tuple(
        Finding(
            f"level book line {number}",
            name,
            f"A reading of {sight} m is longer than a staff of {STAFF_M} m.",
            "Look at the book.",
            level="warn",
        )
        for number, line in enumerate(book, 1)
        for name in ("back", "between", "fore")
        if (sight := getattr(line, name)) is not None and sight > STAFF_M
    )
