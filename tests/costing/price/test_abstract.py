"""Quantities times rates: the worked examples to the hundredth, and lines that add up."""

from dataclasses import replace
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.abstract import Line, make_abstract
from costing.price.contingency import ContingencyStep
from costing.price.rates import Rate, RateSchedule
from structures.errors import Refused
from structures.takeoff.quantity import ITEMS, Quantity
from tests.costing.oracle import example_rates
from tests.structures.wall.examples import ORACLE

SUMS = ("subtotal", "contingency", "overhead", "total", "sanction")
LIFTS = [(0.0, 1.5), (1.5, 3.0), (3.0, 4.5)]


def schedule(**rates):
    """One rate an item, no lifts apart."""
    return RateSchedule(
        "test",
        "INR",
        tuple(Rate(item, ITEMS[item], Decimal(rate)) for item, rate in rates.items()),
        Decimal(5),
        Decimal(2),
    )


@st.composite
def priced(draw):
    """Quantities in item order and a schedule with a rate for each."""
    amounts = st.floats(0, 1e5, allow_subnormal=False)
    quantities = [Quantity("excavation", "m3", draw(amounts), *lift) for lift in LIFTS]
    quantities += [
        Quantity(item, unit, draw(amounts)) for item, unit in ITEMS.items() if item != "excavation"
    ]
    rates = st.decimals("0.01", "99999.99", places=2)
    lines = [Rate("excavation", "m3", draw(rates), begins) for begins, _ in LIFTS[1:]]
    lines += [Rate(item, unit, draw(rates)) for item, unit in ITEMS.items()]
    percents = (draw(st.decimals(0, 15, places=2)), draw(st.decimals(0, 10, places=2)))
    return quantities, RateSchedule("drawn", "INR", tuple(lines), *percents)


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_priced_examples(name):
    """Oracle: the priced lists of handbook 13, check value 8.d, from the printed quantities."""
    wanted = ORACLE["examples"][name]["priced"]
    keys = ("item", "unit", "from_m", "to_m")
    quantities = [
        Quantity(**{key: line[key] for key in keys}, quantity=float(line["quantity"]))
        for line in wanted["lines"]
    ]
    abstract = make_abstract(quantities, example_rates())
    assert abstract.lines == tuple(
        Line(
            *(line[key] for key in ("item", "from_m", "to_m", "unit")),
            *(Decimal(line[key]) for key in ("quantity", "rate", "amount")),
        )
        for line in wanted["lines"]
    )
    assert {key: str(getattr(abstract, key)) for key in SUMS} == {key: wanted[key] for key in SUMS}
    assert abstract.complete
    assert abstract.unknown == ()
    assert abstract.currency == "INR"


@given(priced())
def test_lines_add_up(case):
    """Law: the printed amounts add up to the printed subtotal, that and the percentages to the total."""
    abstract = make_abstract(*case)
    assert abstract.subtotal == sum(line.amount for line in abstract.lines)
    assert abstract.total == abstract.subtotal + abstract.contingency + abstract.overhead
    assert all(
        amount == round(amount, 2)
        for amount in (*(line.amount for line in abstract.lines), abstract.total)
    )


@given(priced(), st.integers(0, 11))
def test_dearer_rate_never_makes_a_cheaper_total(case, place):
    """Law: every amount and percentage is monotone in its rate."""
    quantities, rates = case
    dearer = replace(
        rates,
        rates=tuple(
            replace(one, rate=one.rate + 1) if number == place else one
            for number, one in enumerate(rates.rates)
        ),
    )
    assert make_abstract(quantities, dearer).total >= make_abstract(quantities, rates).total


def test_what_is_not_known_keeps_its_place():
    """Oracle: hand sum; clay 10.00 x 820.00 = 8200.00, 5 % 410.00, 2 % 164.00."""
    quantities = [
        Quantity("dewatering", "hour", None, working="not given: works.pump_hours"),
        Quantity("clay", "m3", 10.0),
        Quantity("film", "m2", 4.0),
        Quantity("marker", "each", None),
    ]
    abstract = make_abstract(quantities, schedule(clay="820.00", dewatering="36.00"))
    known, unknown = Decimal("8200.00"), None
    assert [line.amount for line in abstract.lines] == [unknown, known, unknown, unknown]
    assert [line.quantity for line in abstract.lines] == [None, 10, 4, None]
    assert [line.rate for line in abstract.lines] == [36, 820, None, None]
    assert not abstract.complete
    assert abstract.unknown == (
        "dewatering (quantity not known)",
        "film (rate not known)",
        "marker (quantity and rate not known)",
    )
    assert (abstract.subtotal, abstract.contingency, abstract.overhead) == (known, 410, 164)
    assert (abstract.total, abstract.sanction) == (8774, None)


def test_nothing_to_price_is_nothing():
    """Oracle: an empty sum."""
    abstract = make_abstract([], schedule(clay="820.00"))
    assert (str(abstract.total), str(abstract.sanction), abstract.complete) == (
        "0.00",
        "0.00",
        True,
    )


def test_every_lift_without_a_rate_is_named():
    """Oracle: the interface of rate schedules: a lift without a rate is an error."""
    rates = replace(schedule(clay="1.00"), rates=(Rate("excavation", "m3", Decimal(9), 1.5),))
    quantities = [Quantity("excavation", "m3", 1.0, *lift) for lift in LIFTS]
    with pytest.raises(Refused, match="from 0 to") as refused:
        make_abstract(quantities, rates)
    assert [finding.what for finding in refused.value.findings] == [
        "The lift from 0 to 1.5 m below ground has no rate.",
        "The lift from 3 to 4.5 m below ground has no rate.",
    ]


@pytest.mark.parametrize(
    ("subtotal", "contingency"),
    [
        ("10000000.00", "500000.00"),  # one crore: 5 %
        ("10000000.01", "500000.00"),  # above: 3 % is 300000.00, at least five lakh
        ("16666666.67", "500000.00"),  # 3 % is 500000.0001
        ("20000000.00", "600000.00"),  # 3 %
    ],
)
def test_contingency_by_steps(subtotal, contingency):
    """Oracle: handbook 8.5, hand sums."""
    quantities = [Quantity("clay", "m3", 1.0)]
    abstract = make_abstract(quantities, schedule(clay=subtotal), step=ContingencyStep())
    assert str(abstract.subtotal) == subtotal
    assert str(abstract.contingency) == contingency
