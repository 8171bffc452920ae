"""Benefit over cost."""

from decimal import Decimal

import pytest

from costing.price.benefit import BenefitCost
from tests.costing.oracle import MONEY, as_printed

CASE = MONEY["8.f"]


def example(**changed):
    figures = {key: Decimal(CASE[key]) for key in ("capital", "benefit", "upkeep")}
    return BenefitCost(**(figures | changed))


def test_benefit_over_cost():
    """Oracle: check value 8.f, at the default rate of 6 % over 40 years (handbook 12)."""
    weighed = example()
    assert (weighed.discount_percent, weighed.years) == (6, 40)
    for key in ("present_benefit", "present_cost", "ratio"):
        assert as_printed(getattr(weighed, key), CASE[key]), key


def test_present_value_is_that_of_an_annuity():
    """Oracle: closed form (1 - (1 + r)^-n)/r, in decimals of 28 digits."""
    rate = Decimal("0.08")
    annuity = (1 - (1 + rate) ** -25) / rate
    weighed = example(discount_percent=Decimal(8), years=25)
    assert abs(weighed.present_benefit - Decimal("8.5") * annuity) < Decimal("1e-20")


@pytest.mark.parametrize(
    "changed",
    [
        {"capital": Decimal(0)},
        {"upkeep": Decimal(-1)},
        {"discount_percent": Decimal("1.9")},
        {"years": 61},
    ],
)
def test_figures_outside_their_range(changed):
    """Oracle: accepted ranges of handbook 12."""
    with pytest.raises(ValueError, match=r"accepted|above zero"):
        example(**changed)
