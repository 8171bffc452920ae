"""What a final bill leaves open, and what measured work is worth at given rates."""

from dataclasses import replace
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.billing import judge_lines
from costing.price.contract import Advance
from costing.price.settlement import settle, worth_of
from tests.costing.demo_works import bill, book, contract, demo_rates

BILLS = ("TA-05-RB1", "TA-05-RB2", "TA-05-FB")


def judged(*bill_ids):
    return [
        line
        for bill_id in bill_ids
        for line in judge_lines(bill_id, bill("TA-05", bill_id).lines, book("TA-05"), contract())
    ]


def test_all_bills_of_the_demo_leave_only_what_is_held():
    """Oracle: every entry of TA-05 stands in one bill; 22127.06 of it is held (the tables)."""
    found = settle(book("TA-05"), judged(*BILLS), contract())
    assert (found.not_billed, found.billed_short) == ((), ())
    assert found.sentences == ("Held and not decided: 4 lines, 22127.06.",)
    assert not found.settled


def test_without_its_final_bill_the_demo_has_work_that_is_not_billed():
    """Oracle: the lines of the final bill, 36 of them, 235569.10."""
    found = settle(book("TA-05"), judged(*BILLS[:2]), contract())
    assert len(found.not_billed) == 36
    assert sum(one.amount for one in found.not_billed) == Decimal("235569.10")


def test_retention_and_advance_stay_open_until_they_are_back():
    terms = contract(advance=Advance(Decimal(50000), Decimal(10)))
    found = settle(
        {}, (), terms, retention_kept=Decimal("23528.89"), advance_recovered=Decimal("47057.77")
    )
    assert found.sentences == (
        "Retention to release: 23528.89.",
        "Advance not recovered: 2942.23.",
    )
    assert settle({}, (), terms, advance_recovered=Decimal(50000)).settled
    with pytest.raises(ValueError, match="cannot be so"):
        settle({}, (), terms, advance_recovered=Decimal(50001))


def test_an_entry_billed_in_part_leaves_its_rest():
    """Oracle: 24.59 - 20.00 = 4.59 m3 at 145.00 is 665.55."""
    first = bill("TA-05", "TA-05-RB1").lines[0]
    entries = {first.entry_id: book("TA-05")[first.entry_id]}
    part = replace(first, quantity=Decimal("20.00"), amount=None)
    found = settle(entries, judge_lines("X", (part,), entries, contract()), contract())
    (rest,) = found.billed_short
    assert (rest.quantity, rest.amount) == (Decimal("4.59"), Decimal("665.55"))
    assert found.sentences == ("Billed below what was measured: TA-05-M01-excavation-0.0; 665.55.",)


def test_a_refused_line_bills_nothing():
    first = bill("TA-05", "TA-05-RB1").lines[0]
    entries = {first.entry_id: book("TA-05")[first.entry_id]}
    wrong = replace(first, rate=Decimal(1), amount=None)
    found = settle(entries, judge_lines("X", (wrong,), entries, contract()), contract())
    assert [one.quantity for one in found.not_billed] == [Decimal("24.59")]


def test_worth_of_the_measured_work():
    """Oracle: the sum of all bill lines of TA-05, 94364.20 + 140644.42 + 235569.10."""
    worth = worth_of(book("TA-05").values(), demo_rates().rate_of)
    assert (worth.amount, worth.entries, worth.unpriced) == (Decimal("470577.72"), 81, ())
    assert worth.complete


def test_work_without_a_rate_is_named_and_not_counted_as_nothing():
    rest = replace(contract(), rates=tuple(one for one in contract().rates if one.item != "marker"))
    worth = worth_of(book("TA-05").values(), rest.rate_of)
    assert worth.unpriced == ("TA-05-M00-marker",)
    assert worth.amount == Decimal("470577.72") - Decimal("2450.00")
    found = settle(book("TA-05"), (), rest)
    assert "and 1 entry without a rate" in found.sentences[0]


@given(st.sets(st.integers(0, 80)), st.integers(1, 99))
def test_every_measured_quantity_is_billed_or_open(chosen, percent):
    """Law: what a bill of some lines asks for and what is left open make up the book."""
    entries = book("TA-05")
    every = [line for one in BILLS for line in bill("TA-05", one).lines]
    lines = [
        replace(
            every[n],
            line_no=n,
            quantity=max(round(every[n].quantity * percent / 100, 2), Decimal("0.01")),
            amount=None,
        )
        for n in sorted(chosen)
    ]
    judged = judge_lines("X", lines, entries, contract())
    found = settle(entries, judged, contract())
    left = {one.entry_id: one.quantity for one in (*found.not_billed, *found.billed_short)}
    billed = {one.asked.entry_id: one.asked.quantity for one in judged if one.status != "refused"}
    for name, entry in entries.items():
        assert entry.quantity == left.get(name, 0) + billed.get(name, 0)
    assert not {one.entry_id for one in found.not_billed} & set(billed)
