"""From the lines of a bill to what is payable, by the contract's own terms and no others."""

from dataclasses import replace
from datetime import date
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.billing import BillLineAsked, Measured, Release, judge_line
from costing.price.contract import Advance, ContractTerms, Deduction, IndexShare, PriceIndex
from costing.price.payable import BillAsked, judge_bill
from costing.price.rates import Rate
from tests.costing.demo_works import bill, book, contract
from tests.costing.oracle import MONEY

DAY = date(2026, 2, 10)
TEXT = MONEY["8.e"]
INDEX = PriceIndex(
    Decimal(TEXT["fixed_share"]),
    tuple(
        IndexShare(part["words"], Decimal(part["share"]), Decimal(part["index_then"]))
        for part in TEXT["parts"]
    ),
)
NOW = {part["words"]: Decimal(part["index_now"]) for part in TEXT["parts"]}
# 1000.00 m3 at 487.65 is 487650.00, the amount of check value 8.e.
ENTRY = Measured(
    "E1", 1, "clay", None, None, Decimal(1000), "m3", DAY, None, "engineer-2", "engineer-3"
)
LINE = BillLineAsked(1, "E1", Decimal(1000), Decimal("487.65"))
TERMS = ContractTerms("INR", (Rate("clay", "m3", Decimal("487.65")),))
BILL = BillAsked("RB1", "running", "INR", (LINE,), Decimal("487650.00"))


def payable(terms=TERMS, asked=BILL, entries=None):
    return judge_bill(asked, entries or {"E1": ENTRY}, terms).payable


def told(found):
    return [(step.code, step.amount) for step in found.steps]


def test_what_the_contract_does_not_state_is_not_taken():
    found = payable()
    assert told(found) == [("gross", Decimal("487650.00"))]
    assert found.amount == Decimal("487650.00")


def test_every_term_of_a_contract_step_by_step():
    """Oracle: by hand, with check value 8.e. 5 % of 487650.00 is 24382.50 and 20 % is 97530.00;
    the index gives 517372.42, 29722.42 more, of which value 1 % is 5173.72.
    """
    terms = replace(
        TERMS,
        retention_percent=Decimal(5),
        advance=Advance(Decimal(100000), Decimal(20)),
        price_index=INDEX,
        deductions=(
            Deduction("welfare fund", percent=Decimal(1)),
            Deduction("water taken from the site", amount=Decimal(250)),
        ),
    )
    found = payable(terms, replace(BILL, indices_now=NOW))
    assert told(found) == [
        ("gross", Decimal("487650.00")),
        ("retention", Decimal("-24382.50")),
        ("advance", Decimal("-97530.00")),
        ("index", Decimal("29722.42")),
        ("deduction", Decimal("-5173.72")),
        ("deduction", Decimal("-250")),
    ]
    assert found.amount == Decimal("390036.20")
    assert found.taken("deduction") == Decimal("-5423.72")
    assert [step.working for step in found.steps[:4]] == [
        "1 line",
        "5 % of 487650.00 is kept back",
        "20 % of 487650.00 is 97530.00; 2470.00 of 100000 is left after it",
        (
            "487650.00 x (0.15 + 0.45 x 312/280 labour + 0.25 x 148/151 material + "
            "0.15 x 96.5/88.0 fuel) - 487650.00"
        ),
    ]


def test_an_advance_is_taken_back_once():
    """Oracle: 100000 - 95000 leaves 5000 to take, whatever 20 % would be."""
    terms = replace(TERMS, advance=Advance(Decimal(100000), Decimal(20)))
    found = payable(terms, replace(BILL, recovered_before=Decimal(95000)))
    assert found.taken("advance") == Decimal(-5000)
    assert "of 100000 only 5000 is left to recover" in found.steps[1].working
    with pytest.raises(ValueError, match="of an advance"):
        payable(terms, replace(BILL, recovered_before=Decimal(100001)))
    with pytest.raises(ValueError, match="does not state"):
        payable(TERMS, replace(BILL, recovered_before=Decimal(1)))


def test_an_index_nobody_gave_leaves_the_payable_not_known():
    terms = replace(TERMS, price_index=INDEX, deductions=(Deduction("fund", percent=Decimal(1)),))
    found = payable(terms, replace(BILL, indices_now={"labour": Decimal(312)}))
    assert found.amount is None
    assert found.taken("deduction") is None
    assert found.why == (
        "the index of material, fuel for this bill is not given; "
        "fund: 1 % of a value that is not known"
    )


def test_deductions_above_the_bill_are_owed_back():
    terms = replace(TERMS, deductions=(Deduction("damage", amount=Decimal(500000)),))
    assert payable(terms).amount == Decimal("-12350.00")


def test_the_final_bill_of_the_demo_pays_all_but_what_is_held():
    """Oracle: the table by hand, 235569.10 - 22127.06; 5 % of it is 10672.10."""
    asked = bill("TA-05", "TA-05-FB")
    found = judge_bill(asked, book("TA-05"), contract(retention_percent=Decimal(5)))
    assert found.findings == ()
    assert told(found.payable) == [
        ("gross", Decimal("213442.04")),
        ("held", Decimal("22127.06")),
        ("retention", Decimal("-10672.10")),
    ]
    assert found.payable.steps[1].working == "4 lines, not in it"
    assert found.payable.amount == Decimal("202769.94")
    assert len(found.of("held")) == 4


def released():
    """The four held lines of the demo's final bill, released by the district."""
    yes = Release("district-1", DAY, "opened again, seen and found good")
    held = judge_bill(bill("TA-05", "TA-05-FB"), book("TA-05"), contract()).of("held")
    entries = book("TA-05")
    return tuple(
        judge_line(replace(one.asked, release=yes), entries[one.asked.entry_id], contract())
        for one in held
    )


def test_a_later_bill_pays_what_was_held_and_released():
    """Oracle: the first running bill has 94364.20; 22127.06 with it is 116491.26, 5 % 5824.56."""
    asked = bill("TA-05", "TA-05-RB1", released=released())
    found = judge_bill(asked, book("TA-05"), contract(retention_percent=Decimal(5)))
    assert found.findings == ()
    assert told(found.payable) == [
        ("gross", Decimal("94364.20")),
        ("released", Decimal("22127.06")),
        ("retention", Decimal("-5824.56")),
    ]
    assert found.payable.amount == Decimal("110666.70")


def test_what_was_released_is_not_paid_by_a_line_as_well():
    with pytest.raises(ValueError, match="released one pays"):
        judge_bill(bill("TA-05", "TA-05-FB", released=released()), book("TA-05"), contract())
    with pytest.raises(ValueError, match="once"):
        bill("TA-05", "TA-05-RB1", released=released() * 2)
    held = judge_bill(bill("TA-05", "TA-05-FB"), book("TA-05"), contract()).of("held")
    with pytest.raises(ValueError, match="is paid"):
        bill("TA-05", "TA-05-RB1", released=held)


def test_a_total_of_another_sum_and_another_currency_block_the_bill():
    asked = bill("TA-05", "TA-05-FB", total=Decimal("235569.00"), currency="USD")
    found = judge_bill(asked, book("TA-05"), contract())
    assert [(one.rule, one.level) for one in found.findings] == [
        ("BL-07", "block"),
        ("ES-05", "block"),
    ]
    assert found.findings[0].what == "Lines add to 235569.10, bill says 235569.00."
    assert found.findings[1].what == "Bill in USD, contract in INR."


@pytest.mark.parametrize(
    "make",
    [
        lambda: Advance(Decimal(0), Decimal(10)),
        lambda: Advance(Decimal(100), Decimal(101)),
        lambda: Deduction("neither"),
        lambda: Deduction("both", Decimal(1), Decimal(1)),
        lambda: Deduction("more than all", percent=Decimal("100.01")),
        lambda: PriceIndex(Decimal("0.5"), ()),
        lambda: PriceIndex(Decimal(0), (IndexShare("a", Decimal("0.5"), Decimal(1)),) * 2),
        lambda: replace(TERMS, rates=TERMS.rates * 2),
        lambda: replace(TERMS, retention_percent=Decimal(-1)),
    ],
)
def test_terms_that_cannot_be_so_are_no_record(make):
    with pytest.raises(ValueError, match=r"between|above zero|one of the two|add up|one name|two"):
        make()


percents = st.none() | st.integers(0, 1000).map(lambda tenths: Decimal(tenths) / 10)


@given(
    st.lists(st.integers(1, 10**6), min_size=1, max_size=6),
    percents,
    percents,
    st.integers(1, 10**7),
    percents,
    st.permutations(range(6)),
)
def test_steps_add_up_and_the_order_of_lines_changes_none(
    cents, retention, recovery, advance, fund, order
):
    """Oracle: each step is a whole number of hundredths and the payable their sum; what is taken
    back of an advance is never more than is left of it.
    """
    entries = {
        f"E{n}": replace(ENTRY, entry_id=f"E{n}", quantity=Decimal(one) / 100)
        for n, one in enumerate(cents)
    }
    lines = tuple(
        BillLineAsked(n + 1, name, entry.quantity, Decimal("487.65"))
        for n, (name, entry) in enumerate(entries.items())
    )
    shuffled = tuple(lines[n] for n in order if n < len(lines))
    terms = replace(
        TERMS,
        retention_percent=retention,
        advance=None if recovery is None else Advance(Decimal(advance) / 100, recovery),
        deductions=() if fund is None else (Deduction("fund", percent=fund),),
    )
    found = payable(terms, replace(BILL, lines=lines), entries)
    assert found == payable(terms, replace(BILL, lines=shuffled), entries)
    assert found.amount == sum(step.amount for step in found.steps)
    assert all(step.amount == round(step.amount, 2) for step in found.steps)
    assert -found.taken("advance") <= Decimal(advance) / 100
    assert found.taken("gross") <= sum(e.quantity for e in entries.values()) * Decimal("487.65") + 1
