"""The gate from computed numbers into money, and rounding half away from zero."""

import math
from decimal import Decimal
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.money import (
    GREATEST,
    gated,
    line_amount,
    measured,
    money_text,
    percentage,
    sanction_figure,
    to_cents,
)
from tests.costing.oracle import MONEY

AMOUNTS = st.decimals(-(10**9), 10**9, places=4)


def half_away(value, step):
    """Rounding of handbook 8.4 in fractions: whole steps of |value| + half a step, sign kept."""
    exact, unit = Fraction(value), Fraction(step)
    steps = math.floor(abs(exact) / unit + Fraction(1, 2))
    return steps * unit * (1 if exact >= 0 else -1)


@pytest.mark.parametrize("case", MONEY["8.b"], ids=lambda case: case["quantity"])
def test_amounts_are_rounded_half_away_from_zero(case):
    """Oracle: check value 8.b."""
    amount = line_amount(Decimal(case["quantity"]), Decimal(case["rate"]))
    assert str(amount) == case["amount"]


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (950.775, "950.78"),  # handbook 8.4 names these three of example B: all go up
        (586.275, "586.28"),
        (160.155, "160.16"),
        (np.nextafter(160.155, 0.0), "160.16"),  # a last bit lost in a sum does not turn a tie
        (0.0049999999, "0.01"),  # to six decimals first: 0.005000
        (0.004999, "0.00"),
        (-0.005, "-0.01"),
        (-0.001, "0.00"),  # what rounds to nothing has no sign
    ],
)
def test_gate_keeps_exact_ties(value, text):
    """Oracle: handbook 8.4, to six decimals and then to two, half away from zero."""
    assert str(measured(value)) == text


def test_gate_takes_numbers_of_arrays():
    """Oracle: handbook 8.4; the text of a numpy scalar is not the text of its number."""
    assert measured(np.float64(950.775)) == Decimal("950.78")
    assert measured(np.int64(7)) == Decimal("7.00")


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 10 * GREATEST])
def test_gate_takes_no_number_without_hundredths(value):
    with pytest.raises(ValueError, match="no exact hundredths"):
        measured(value)


@given(st.floats(-1e9, 1e9))
def test_gate_rounds_the_shortest_text_of_a_number(value):
    """Law: both roundings of handbook 8.4, in fractions."""
    sixth = half_away(Decimal(repr(value)), "0.000001")
    assert Fraction(gated(value)) == sixth
    assert Fraction(measured(value)) == half_away(sixth, "0.01")


@given(AMOUNTS)
def test_cents_are_half_away_from_zero(amount):
    """Law: handbook 8.4 in fractions."""
    assert Fraction(to_cents(amount)) == half_away(amount, "0.01")


@given(AMOUNTS, st.decimals(0, 15, places=4))
def test_a_percentage_is_rounded_once(amount, percent):
    """Law: handbook 8.4 in fractions."""
    exact = Fraction(amount) * Fraction(percent) / 100
    assert Fraction(percentage(amount, percent)) == half_away(exact, "0.01")


@pytest.mark.parametrize(
    ("total", "figure"),
    [
        ("548403.21", "548500.00"),  # example A, handbook 13
        ("548500.00", "548500.00"),  # a multiple of 100 stays, handbook 8.4
        ("548500.01", "548600.00"),
        ("0.00", "0.00"),
    ],
)
def test_figure_for_sanction(total, figure):
    """Oracle: handbook 8.4."""
    assert str(sanction_figure(Decimal(total))) == figure


@given(st.decimals(0, 10**9, places=2))
def test_figure_for_sanction_is_the_smallest_multiple(total):
    """Law: the definition of handbook 8.4."""
    figure = sanction_figure(total)
    assert figure % 100 == 0
    assert 0 <= figure - total < 100


@given(AMOUNTS)
def test_text_of_money_has_two_decimals(amount):
    """Law: reading the text again gives the amount."""
    cents = to_cents(amount)
    text = money_text(cents)
    assert Decimal(text) == cents
    assert len(text.partition(".")[2]) == 2


def test_printing_never_rounds():
    with pytest.raises(ValueError, match="whole hundredths"):
        money_text(Decimal("1.005"))
