"""A rate from its components, and steps of lead and lift."""

from decimal import Decimal

import pytest

from costing.price.analysis import Component, analyse_rate, lead_steps, lift_steps
from tests.costing.oracle import MONEY

CLAY = MONEY["8.3"]
KEYS = ("words", "kind", "quantity", "rate")


def components():
    return tuple(
        Component(one["words"], one["kind"], Decimal(one["quantity"]), Decimal(one["rate"]))
        for one in CLAY["components"]
    )


def test_rate_of_puddle_clay():
    """Oracle: the table of handbook 8.3; labour is the hand sum 120.00 + 288.00 + 36.00."""
    analysis = analyse_rate(components())
    assert [str(one.amount) for one in analysis.components] == [
        one["amount"] for one in CLAY["components"]
    ]
    assert str(analysis.amount_of("labour")) == CLAY["labour"]
    assert str(analysis.amount_of("machinery")) == "0.00"
    assert str(analysis.subtotal) == CLAY["subtotal"]
    assert str(analysis.overhead_profit) == CLAY["overhead_profit"]
    assert str(analysis.rate) == CLAY["rate"]


def test_rate_without_overhead_is_the_subtotal():
    """Oracle: handbook 8.3 with 0 %."""
    assert str(analyse_rate(components(), overhead_profit_percent=Decimal(0)).rate) == "693.79"


@pytest.mark.parametrize("percent", ["-1", "25.01"])
def test_overhead_outside_its_range_is_no_overhead(percent):
    """Oracle: accepted range 0 to 25 % of handbook 12."""
    with pytest.raises(ValueError, match="is not accepted"):
        analyse_rate(components(), overhead_profit_percent=Decimal(percent))


def test_a_rate_of_nothing_is_no_rate():
    with pytest.raises(ValueError, match="one component"):
        analyse_rate(())


def test_a_component_is_not_negative():
    with pytest.raises(ValueError, match="water"):
        Component("water", "water", Decimal("-0.1"), Decimal(60))


@pytest.mark.parametrize(("lead_m", "steps"), MONEY["8.c"]["lead"])
def test_steps_of_lead(lead_m, steps):
    """Oracle: check value 8.c."""
    assert lead_steps(lead_m) == steps


@pytest.mark.parametrize(("lift_m", "steps"), [*MONEY["8.c"]["lift"], (0.4, 0)])
def test_steps_of_lift(lift_m, steps):
    """Oracle: check value 8.c; the first step is included, so a lower lift has none extra."""
    assert lift_steps(lift_m) == steps


def test_a_whole_step_stays_one_step_whatever_the_last_bit():
    """Oracle: handbook 8.2; 0.1 x 3 is a last bit above 0.3."""
    assert lift_steps(0.1 + 0.1 + 0.1, step_m=0.15) == 1


@pytest.mark.parametrize(("lead_m", "step_m"), [(-1.0, 50.0), (10.0, 0.0)])
def test_steps_of_nonsense(lead_m, step_m):
    with pytest.raises(ValueError, match="cannot be counted"):
        lead_steps(lead_m, step_m)
