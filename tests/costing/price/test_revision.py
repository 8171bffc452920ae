"""Prices moved by an index; excess over sanction and approval."""

from decimal import Decimal

import pytest

from costing.price.revision import (
    IndexPart,
    index_amount,
    index_factor,
    needs_revised_approval,
    needs_revised_estimate,
)
from tests.costing.oracle import MONEY, as_printed

INDEX = MONEY["8.e"]
LIMITS = {key: Decimal(value) for key, value in MONEY["8.g"].items()}


def parts():
    keys = ("share", "index_then", "index_now")
    return tuple(
        IndexPart(part["words"], *(Decimal(part[key]) for key in keys)) for part in INDEX["parts"]
    )


def test_price_index():
    """Oracle: check value 8.e."""
    factor = index_factor(Decimal(INDEX["fixed_share"]), parts())
    assert as_printed(factor, INDEX["factor"])
    assert str(index_amount(Decimal(INDEX["amount"]), factor)) == INDEX["indexed"]


def test_prices_that_stand_still_move_nothing():
    """Oracle: handbook 8.7 with equal indices."""
    still = tuple(IndexPart(one.words, one.share, one.index_now, one.index_now) for one in parts())
    assert index_factor(Decimal(INDEX["fixed_share"]), still) == 1


def test_shares_add_up_to_one():
    with pytest.raises(ValueError, match="add up to"):
        index_factor(Decimal("0.16"), parts())


def test_an_index_is_above_zero():
    with pytest.raises(ValueError, match="fuel"):
        IndexPart("fuel", Decimal("0.15"), Decimal(0), Decimal(96))


def test_excess_over_technical_sanction_is_strictly_greater():
    """Oracle: check value 8.g."""
    assert not needs_revised_estimate(LIMITS["sanctioned"], LIMITS["within"])
    assert needs_revised_estimate(LIMITS["sanctioned"], LIMITS["beyond"])


def test_excess_over_approval_is_strictly_greater():
    """Oracle: handbook 8.6, 10 % of 800000 is 80000."""
    assert not needs_revised_approval(Decimal(800000), Decimal(880000))
    assert needs_revised_approval(Decimal(800000), Decimal("880000.01"))


def test_the_office_sets_its_own_percentage():
    """Oracle: handbook 8.6, 2 % of 800000 is 16000."""
    assert needs_revised_estimate(Decimal(800000), Decimal("816000.01"), Decimal(2))
    assert not needs_revised_estimate(Decimal(800000), Decimal(816000), Decimal(2))


def test_nothing_sanctioned_is_not_exceeded():
    with pytest.raises(ValueError, match="never sanctioned"):
        needs_revised_estimate(Decimal(0), Decimal(1))
