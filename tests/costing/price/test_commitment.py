"""Money of structures side by side: exact sums that say what is missing from them."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.commitment import KEYS, Commitment, Sum, sum_up
from costing.price.payable import judge_bill
from costing.price.settlement import worth_of
from structures.errors import Refused
from tests.costing.demo_works import bill, book, contract, rows, sums

BILLS = ("TA-05-RB1", "TA-05-RB2", "TA-05-FB")


def demo(site):
    """What the tables of the demo say of one structure."""
    known = {"sanctioned": sums(site).technical, "approved": sums(site).administrative}
    if rows("bills", site):
        judged = [judge_bill(bill(site, one), book(site), contract()) for one in BILLS]
        known["measured"] = worth_of(book(site).values(), contract().rate_of).amount
        known["billed"] = sum(one.asked.total for one in judged)
        known["held"] = sum(line.amount for one in judged for line in one.of("held"))
        known["paid"] = sum(one.payable.amount for one in judged[:2])
    return Commitment(site, "INR", **known)


def test_money_of_two_structures_of_the_demo():
    """Oracle: the tables by hand. Sanctioned 838721.11 + 499301.58 = 1338022.69, approved 840000 +
    500000, billed 94364.20 + 140644.42 + 235569.10 = 470577.72, the first two paid: 235008.62.
    """
    deep = Commitment("OD-03", "INR", **{k: getattr(demo("OD-03"), k) for k in KEYS[:2]})
    (inr,) = sum_up([deep, demo("TA-05")])
    assert (inr.currency, inr.structures) == ("INR", 2)
    assert inr.sums["sanctioned"] == Sum(Decimal("1338022.69"), 2, 0)
    assert inr.sums["approved"] == Sum(Decimal("1340000.00"), 2, 0)
    assert inr.sums["committed"] == Sum(Decimal("0.00"), 0, 2)
    assert inr.sums["measured"] == Sum(Decimal("470577.72"), 1, 1)
    assert inr.sums["billed"] == Sum(Decimal("470577.72"), 1, 1)
    assert inr.sums["held"] == Sum(Decimal("22127.06"), 1, 1)
    assert inr.sums["paid"] == Sum(Decimal("235008.62"), 1, 1)
    assert inr.sums["forecast"] == Sum(Decimal("0.00"), 0, 2)
    assert not inr.sums["paid"].complete


def test_what_a_forecast_goes_over_the_approval():
    """Oracle: 1079062.22 - 840000.00 for OD-03; nothing where the forecast is less."""
    known = {"approved": Decimal("840000.00")}
    deep = Commitment("OD-03", "INR", **known, forecast=Decimal("1079062.22"))
    assert deep.exposed == Decimal("239062.22")
    assert Commitment("A", "INR", **known, forecast=Decimal("1.00")).exposed == 0
    assert Commitment("A", "INR", **known).exposed is None


def test_currencies_stand_apart_and_a_structure_counts_once():
    records = [Commitment("A", "INR", paid=Decimal(1)), Commitment("A", "EUR", paid=Decimal(2))]
    assert [(one.currency, one.sums["paid"].amount) for one in sum_up(records)] == [
        ("EUR", Decimal(2)),
        ("INR", Decimal(1)),
    ]
    with pytest.raises(Refused, match="A would be counted twice in INR"):
        sum_up([records[0], records[0]])
    assert sum_up([]) == ()


@pytest.mark.parametrize(
    "changes",
    [
        {"paid": Decimal(-1)},
        {"paid": Decimal("0.001")},
        {"held": Decimal(1)},
        {"billed": Decimal(1), "held": Decimal(2)},
    ],
)
def test_amounts_that_cannot_be_so_are_no_record(changes):
    with pytest.raises(ValueError, match=r"A: (paid|more is held)"):
        Commitment("A", "INR", **changes)


amounts = st.none() | st.integers(0, 10**12).map(lambda cents: Decimal(cents) / 100)


@given(st.lists(st.tuples(st.sampled_from(["INR", "EUR"]), amounts, amounts), max_size=8))
def test_sums_are_exact_and_count_everybody(drawn):
    """Oracle: whole hundredths added as integers."""
    records = [
        Commitment(f"S{n}", currency, sanctioned=one, forecast=two)
        for n, (currency, one, two) in enumerate(drawn)
    ]
    for told in sum_up(records):
        ours = [one for one in records if one.currency == told.currency]
        for key in ("sanctioned", "forecast"):
            known = [getattr(one, key) for one in ours if getattr(one, key) is not None]
            assert int(told.sums[key].amount * 100) == sum(int(one * 100) for one in known)
            assert (told.sums[key].known, told.structures) == (len(known), len(ours))
            assert told.sums[key].known + told.sums[key].not_known == len(ours)
