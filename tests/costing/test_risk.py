"""Cost of draws: each draw as an estimate of it would print, and percentiles by rank."""

from dataclasses import replace
from decimal import Decimal

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp

from costing.price.abstract import make_abstract
from costing.price.contingency import ContingencyStep
from costing.price.money import measured
from costing.price.rates import Rate, RateSchedule
from costing.risk import hundredths, percentile, price_draws, standard_error, total_cents
from structures.intake.pack import GroundWater, Works
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.quantity import ITEMS, Quantity
from structures.takeoff.sheet import measure, quantities
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from tests.costing.oracle import example_rates
from tests.structures.wall.examples import ORACLE, cases, example

BEGINS = (0.0, 1.5, 3.0)
SEED = 20261201  # any; stated so that a failure can be repeated
B_HOURS = float(ORACLE["examples"]["B"]["pump_hours"])
SHIFTED = ORACLE["variants"]["8.h"]["totals"]
STEP = ContingencyStep(Decimal(100_000), Decimal(3), Decimal(4_000))


def priced_draws(case, levels, works, schedule=None):
    """The walk from whole-line draws to their spread."""
    ground, toes, offsets, _, wall = case.parts
    cutoff = cut(make_section(ground, toes, offsets, levels, wall))
    pumping = plan_pumping(cutoff, GroundWater(), works)
    rates = example_rates() if schedule is None else schedule
    return price_draws(measure(cutoff, wall), pumping, cutoff.ends, rates, seed=SEED)


def shifted(deltas_m):
    """Example B with its whole rock line moved, one row a draw."""
    return np.asarray(example("B").rock_z) + np.asarray(deltas_m)[:, None]


@st.composite
def schedules(draw):
    rates = st.decimals("0.01", "9999.99", places=2)
    lines = [Rate("excavation", "m3", draw(rates), begins) for begins in BEGINS[1:]]
    lines += [Rate(item, unit, draw(rates)) for item, unit in ITEMS.items()]
    percents = (draw(st.decimals(0, 15, places=3)), draw(st.decimals(0, 10, places=3)))
    return RateSchedule("drawn", "INR", tuple(lines), *percents)


@given(hnp.arrays(np.float64, 30, elements=st.floats(-1e9, 1e9)))
def test_gate_of_arrays_is_the_gate_of_numbers(values):
    """Oracle: the decimal gate, number by number."""
    assert hundredths(values).tolist() == [int(measured(value) * 100) for value in values]


@given(st.lists(st.integers(-(10**11), 10**11), min_size=1), st.integers(-3, 3))
def test_gate_of_arrays_at_ties(sevenths, bits):
    """Oracle: the decimal gate at and beside halves of the sixth decimal and of a hundredth."""
    ties = np.concatenate(
        [(np.array(sevenths) * 10.0 + 5.0) / 1e7, (np.array(sevenths) * 10.0 + 5.0) / 1e3]
    )
    for _ in range(abs(bits)):
        ties = np.nextafter(ties, np.inf * np.sign(bits))
    assert hundredths(ties).tolist() == [int(measured(value) * 100) for value in ties]


@pytest.mark.parametrize("value", [np.nan, np.inf, 1e13])
def test_gate_of_arrays_takes_no_nonsense(value):
    with pytest.raises(ValueError, match=r"not a finite|no exact hundredths"):
        hundredths([1.0, value])


@settings(max_examples=30, deadline=None)
@given(schedules(), st.data())
def test_every_draw_costs_what_its_estimate_prints(schedule, data):
    """Oracle: the estimate of each draw in decimals, with and without steps of contingency."""
    amounts = hnp.arrays(np.float64, 5, elements=st.floats(0, 1e5, allow_subnormal=False))
    by_item = {item: data.draw(amounts) for item in ITEMS if item != "excavation"}
    excavation = np.stack([data.draw(amounts) for _ in BEGINS], axis=1)
    for step in (None, STEP):
        totals = total_cents(by_item, excavation, BEGINS, schedule, step=step)
        for draw, total in enumerate(totals.tolist()):
            lines = [
                Quantity("excavation", "m3", volume, begins, begins + 1.5)
                for volume, begins in zip(excavation[draw].tolist(), BEGINS, strict=True)
            ]
            lines += [Quantity(item, ITEMS[item], float(by_item[item][draw])) for item in by_item]
            assert total == make_abstract(lines, schedule, step=step).total * 100


@settings(max_examples=30, deadline=None)
@given(cases())
def test_draws_of_a_wall_cost_what_their_estimates_print(case):
    """Oracle: each draw measured, listed and priced alone."""
    schedule = replace(
        example_rates(),
        rates=(
            *(rate for rate in example_rates().rates if rate.item != "excavation"),
            Rate("excavation", "m3", Decimal("135.00")),
        ),
    )
    levels = np.asarray(case.rock_z) + np.array([[-0.7], [0.0], [0.4]])
    spread = priced_draws(case, levels, Works(pump_hours=12.345), schedule)
    totals = []
    for level in levels:
        cutoff = cut(make_section(*case.with_rock(level).parts))
        pumping = plan_pumping(cutoff, GroundWater(), Works(pump_hours=12.345))
        listed = quantities(measure(cutoff, case.wall), pumping)
        totals.append(make_abstract(listed, schedule).total)
    assert [spread.p10, spread.p50, spread.p90] == sorted(totals)


def test_example_b_with_its_rock_line_shifted():
    """Oracle: check value 8.h, the three totals to the hundredth."""
    levels = shifted([one["shift_m"] for one in SHIFTED])
    spread = priced_draws(example("B"), levels, Works(pump_hours=B_HOURS))
    wanted = sorted(Decimal(one["total"]) for one in SHIFTED)
    assert [spread.p10, spread.p50, spread.p90] == wanted
    assert (spread.draws, spread.seed, spread.why) == (3, SEED, "")


def test_sampler_finds_the_percentiles_of_a_shift():
    """Oracle: check value 8.h: P90, P50, P10 within 3 standard errors (2.2, 1.8 and 2.6 %)."""
    deltas = np.random.default_rng(SEED).normal(0.0, 0.5, 2000)
    general = Rate("excavation", "m3", Decimal("210.00"))  # 15.00 more for the sixth lift
    rates = example_rates()
    schedule = replace(rates, rates=(*rates.rates, general))
    spread = priced_draws(example("B"), shifted(deltas), Works(pump_hours=B_HOURS), schedule)
    p90, p50, p10 = (float(one["total"]) for one in SHIFTED)
    assert float(spread.p90) == pytest.approx(p90, rel=0.022)
    assert float(spread.p50) == pytest.approx(p50, rel=0.018)
    assert float(spread.p10) == pytest.approx(p10, rel=0.026)
    assert spread.draws == 2000


def test_standard_errors_of_the_handbook():
    """Oracle: check value 8.h: 3 errors are 2.2 % at P90, 1.8 % at P50, 2.6 % at P10.

    Read off 2000 draws an error is itself one of some twenty per cent; the mean of 20 seeds is
    held to a tenth.
    """
    errors = []
    general = Rate("excavation", "m3", Decimal("210.00"))
    schedule = replace(example_rates(), rates=(*example_rates().rates, general))
    for seed in range(20):
        deltas = np.random.default_rng(seed).normal(0.0, 0.5, 2000)
        spread = priced_draws(example("B"), shifted(deltas), Works(pump_hours=B_HOURS), schedule)
        errors.append([spread.p10_error, spread.p50_error, spread.p90_error])
    means = np.array(errors, dtype=np.float64).mean(axis=0)
    p90, p50, p10 = (float(one["total"]) for one in SHIFTED)
    shares = 3.0 * means / [p10, p50, p90]
    assert shares == pytest.approx([0.026, 0.018, 0.022], rel=0.1)


@pytest.mark.parametrize(
    ("draws", "percent", "rank"),
    [(2000, 10, 200), (2000, 90, 1800), (2001, 10, 201), (7, 50, 4), (1, 90, 1), (10, 70, 7)],
)
def test_percentile_is_the_kth_smallest(draws, percent, rank):
    """Oracle: handbook 8.9, k = ceiling(p N); 0.7 x 10 is 7 and not a last bit above it."""
    totals = np.random.default_rng(SEED).permutation(np.arange(1, draws + 1))
    assert percentile(totals, percent) == rank


def test_standard_error_of_even_steps():
    """Oracle: handbook 8.9: density 1/N of 1 to N, so the error is sqrt(p (1 - p) N), here 30."""
    totals = np.arange(1, 10_001)
    assert standard_error(totals, 10) == pytest.approx(30, abs=1)
    assert standard_error(np.array([5]), 50) == 0


def test_lifts_without_a_rate_leave_the_percentiles_unknown():
    """Oracle: example B 2 m deeper digs to 8.05 m, under the schedule's last lift of 6.0 to 7.5."""
    spread = priced_draws(example("B"), shifted([0.0, -2.0]), Works(pump_hours=B_HOURS))
    assert (spread.p10, spread.p50, spread.p90, spread.p90_error) == (None,) * 4
    assert spread.why == "of 2 draws some dig lifts that have no rate: from 7.5 m in 1"
    assert spread.draws == 2


def test_share_of_draws_with_an_open_flank():
    """Oracle: handbook 8.10; example A closes at rock 100.00, and 4.01 m lower it never gets there."""
    levels = np.asarray(example("A").rock_z) + np.array([[0.0], [-0.5], [-4.01], [-0.1]])
    general = Rate("excavation", "m3", Decimal("210.00"))
    schedule = replace(example_rates(), rates=(*example_rates().rates, general))
    spread = priced_draws(example("A"), levels, Works(pump_hours=0.0), schedule)
    assert spread.open_flank_share == 0.25


def test_what_has_no_total_has_no_spread():
    with pytest.raises(ValueError, match="pump hours"):
        priced_draws(example("B"), shifted([0.0]), Works())
    clay = replace(example_rates(), rates=(Rate("clay", "m3", Decimal(1)),))
    with pytest.raises(ValueError, match="lift from 0 m has no rate"):
        total_cents({"clay": [1.0]}, [[1.0]], [0.0], clay)
    with pytest.raises(ValueError, match="film has no rate"):
        total_cents({"film": [1.0]}, [[0.001]], [0.0], clay)


def test_money_beyond_exact_integers_is_refused():
    dear = replace(example_rates(), rates=(Rate("clay", "m3", Decimal("99999999.99")),))
    with pytest.raises(ValueError, match="an amount of clay is too large"):
        total_cents({"clay": [1e9]}, [[0.0]], [0.0], dear)
    with pytest.raises(ValueError, match="a subtotal is too large"):
        total_cents({"clay": [1e6]}, [[0.0]], [0.0], dear)
    fine = replace(dear, contingency_percent=Decimal("1.23456"))
    with pytest.raises(ValueError, match="more than 4 decimals"):
        total_cents({"clay": [1.0]}, [[0.0]], [0.0], fine)
