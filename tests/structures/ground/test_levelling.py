"""Level book of the handbook, section 1: the printed reduced and adjusted levels."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.ground.levelling import (
    BookLine,
    allowable_misclosure_mm,
    reduce_by_instrument_height,
    reduce_by_rise_and_fall,
    reduce_run,
)

D = Decimal
START = D("100.000")
# point, back, between, fore, distance km, reduced level, adjusted level: handbook section 1
PRINTED = (
    ("BM", "1.425", None, None, "0.00", "100.000", "100.00000"),
    ("1", None, "1.980", None, "0.02", "99.445", "99.44480"),
    ("2", None, "2.365", None, "0.04", "99.060", "99.05960"),
    ("CP1", "0.870", None, "2.740", "0.06", "98.685", "98.68440"),
    ("3", None, "1.560", None, "0.09", "97.995", "97.99410"),
    ("4", None, "1.905", None, "0.11", "97.650", "97.64890"),
    ("CP2", "2.310", None, "1.215", "0.14", "98.340", "98.33860"),
    ("5", None, "1.100", None, "0.17", "99.550", "99.54830"),
    ("BM", None, None, "0.648", "0.20", "100.002", "100.00000"),
)


def exact(text: str | None) -> Decimal | None:
    return None if text is None else D(text)


BOOK = tuple(
    BookLine(point, D(km), exact(back), exact(between), exact(fore))
    for point, back, between, fore, km, *_ in PRINTED
)


@pytest.mark.parametrize("reduce", [reduce_by_instrument_height, reduce_by_rise_and_fall])
def test_both_methods_give_the_printed_levels(reduce):
    """Oracle: check value 1.a, exact decimals."""
    assert reduce(BOOK, START) == tuple(D(row[5]) for row in PRINTED)


def test_the_sums_and_the_adjusted_levels_are_the_printed_ones():
    """Oracle: check values 1.a (adjusted), 1.b and 1.c."""
    run = reduce_run(BOOK, start_m=START, close_m=START)
    assert (run.sum_back_m, run.sum_fore_m) == (D("4.605"), D("4.603"))
    assert run.misclosure_m == D("0.002")
    assert run.adjusted_m == tuple(Fraction(row[6]) for row in PRINTED)
    assert run.allowable_mm == pytest.approx(5.3666, abs=5e-5)


def test_a_run_over_its_limit_is_refused_and_never_adjusted():
    """Oracle: check value 1.d, 6 mm against 5.3666 mm."""
    with pytest.raises(Refused, match=r"closes 6\.0 mm off, allowed 5\.4.*run it again"):
        reduce_run(BOOK, start_m=START, close_m=START - D("0.004"))


def test_the_limit_grows_with_the_root_of_the_distance():
    """Oracle: the rule 12 sqrt(K) mm itself: four times as far, twice as much."""
    assert allowable_misclosure_mm(D("4")) == pytest.approx(24.0)
    assert allowable_misclosure_mm(D("1"), 25.0) == pytest.approx(25.0)


@pytest.mark.parametrize(
    ("number", "line"),
    [
        (0, BookLine("BM", D("0.00"))),
        (3, BookLine("CP1", D("0.06"), between=D("2.740"), fore=D("2.740"))),
        (3, BookLine("CP1", D("0.06"), back=D("0.870"))),
        (8, BookLine("BM", D("0.20"), between=D("0.648"))),
    ],
)
def test_a_sight_out_of_its_place_is_named(number, line):
    book = (*BOOK[:number], line, *BOOK[number + 1 :])
    with pytest.raises(Refused, match=f"level book line {number + 1}"):
        reduce_run(book, start_m=START, close_m=START)


@pytest.mark.parametrize(
    ("kilometres", "said"),
    [
        (("0", "0.1", "0.05"), "do not grow"),
        (("0.1", "0.2", "0.3"), "do not grow from 0"),
        (("0", "0", "0"), "no length"),
    ],
)
def test_distances_that_share_nothing_out_are_refused(kilometres, said):
    sights = ((D("1.5"), None), (D("1.2"), D("1.1")), (None, D("1.6")))
    book = [
        BookLine(str(i), D(km), back=back, fore=fore)
        for i, (km, (back, fore)) in enumerate(zip(kilometres, sights, strict=True))
    ]
    with pytest.raises(Refused, match=said):
        reduce_run(book, start_m=START, close_m=START)


def test_an_empty_book_is_refused():
    with pytest.raises(Refused, match="no length"):
        reduce_run([], start_m=START, close_m=START)


def test_a_sight_in_the_wrong_column_breaks_the_arithmetic_check():
    """A fore sight where an intermediate belongs: no new height, yet it is summed up."""
    wrong = BookLine("1", D("0.02"), fore=D("1.980"))
    with pytest.raises(Refused, match="wrong column"):
        reduce_run((BOOK[0], wrong, *BOOK[2:]), start_m=START, close_m=START)


def test_a_reading_longer_than_a_staff_is_doubted():
    """Oracle: handbook 1.7, 5 m."""
    long = (BOOK[0], replace(BOOK[1], between=D("5.001")), *BOOK[2:])
    (finding,) = reduce_run(long, start_m=START, close_m=START).findings
    assert (finding.where, finding.field, finding.level) == ("level book line 2", "between", "warn")
    assert reduce_run(BOOK, start_m=START, close_m=START).findings == ()


sights = st.integers(0, 4999).map(lambda mm: D(mm) / 1000)


@given(st.lists(st.tuples(sights, sights), min_size=1, max_size=12), st.integers(-9999, 9999))
def test_both_methods_agree_on_any_book(turns, start_mm):
    """Law: handbook 1.2 and 1.3; the book is any chain of change points."""
    lines = [BookLine("0", D(0), back=turns[0][0])]
    for number, (_, fore) in enumerate(turns):
        back = turns[number + 1][0] if number + 1 < len(turns) else None
        lines.append(BookLine(str(number + 1), D(number + 1), back=back, fore=fore))
    start = D(start_mm) / 1000
    levels = reduce_by_instrument_height(lines, start)
    assert levels == reduce_by_rise_and_fall(lines, start)
    fall = sum(back for back, _ in turns) - sum(fore for _, fore in turns)
    assert levels[-1] - start == fall
