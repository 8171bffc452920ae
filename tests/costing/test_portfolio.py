"""Cost of many sites together, against closed forms of sums and of a common factor."""

import math
from dataclasses import replace
from decimal import Decimal

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from costing.portfolio import (
    AT_90,
    SiteCost,
    portfolio_cents,
    portfolio_spread,
    share_above,
)

SEED = 20261201  # any; stated so that a failure can be repeated
DRAWS = 100_000
ERRORS = 4.0  # standard errors that a percentile may be off: one failure in 16,000 fair seeds
PERCENTS = (10, 50, 90)


def normal_site(code, mean, sd):
    """A site whose own cost is normal: percentiles alike to both sides."""
    ends = (Decimal(f"{mean + sign * AT_90 * sd:.2f}") for sign in (-1, 0, 1))
    p10, p50, p90 = ends
    return SiteCost(code, p50, p10, p90)


def found(spread):
    return [float(getattr(spread, f"p{percent}")) for percent in PERCENTS]


def error_of(law, percent, draws):
    """Standard error of a sample percentile: sqrt(p (1 - p) / N) / density, of the true law."""
    share = percent / 100
    return math.sqrt(share * (1 - share) / draws) / law.pdf(law.ppf(share))


def agrees(spread, law):
    for percent, value in zip(PERCENTS, found(spread), strict=True):
        off = abs(value - law.ppf(percent / 100))
        assert off <= ERRORS * error_of(law, percent, spread.draws) + 0.01


def test_independent_sites_are_a_normal_sum():
    """Oracle: means add, variances add (scipy.stats.norm)."""
    sites = [(500_000.0 + 1000 * n, 20_000.0 + 500 * n) for n in range(40)]
    costs = [normal_site(f"S-{n}", mean, sd) for n, (mean, sd) in enumerate(sites)]
    spread = portfolio_spread(costs, seed=SEED, draws=DRAWS, common_spread=0.0)
    law = stats.norm(sum(m for m, _ in sites), math.sqrt(sum(sd**2 for _, sd in sites)))
    agrees(spread, law)
    added = sum(cost.p90 for cost in costs)
    assert spread.p90 < added  # not all are unlucky at once


def test_the_common_factor_alone_is_log_normal():
    """Oracle: log-normal of median 1 and relative deviation c has log-sd sqrt(ln(1 + c^2))."""
    costs = [SiteCost(f"S-{n}", Decimal(100_000 + n)) for n in range(50)]
    spread = portfolio_spread(costs, seed=SEED, draws=DRAWS, common_spread=0.08)
    total = float(sum(cost.p50 for cost in costs))
    law = stats.lognorm(math.sqrt(math.log(1 + 0.08**2)), scale=total)
    assert law.std() / law.mean() == pytest.approx(0.08, rel=1e-12)
    agrees(spread, law)


def test_both_together_have_the_moments_of_a_product():
    """Oracle: X and F independent, E = E[X] E[F], E[(XF)^2] = E[X^2] E[F^2]."""
    mean, sd, common = 4_000_000.0, 300_000.0, 0.15
    costs = [normal_site(f"S-{n}", mean / 4, sd / 2) for n in range(4)]
    totals = portfolio_cents(costs, seed=SEED, draws=DRAWS, common_spread=common) / 100
    factor = stats.lognorm(math.sqrt(math.log(1 + common**2)))
    expected = mean * factor.mean()
    variance = (mean**2 + sd**2) * factor.moment(2) - expected**2
    assert totals.mean() == pytest.approx(expected, abs=ERRORS * math.sqrt(variance / DRAWS))
    # Of a law close to normal the sample variance has the relative error sqrt(2 / N).
    assert totals.var() == pytest.approx(variance, rel=2 * ERRORS * math.sqrt(2 / DRAWS))


def test_one_site_gives_back_its_own_percentiles():
    """Oracle: the percentiles that went in; a long tail to the dear side."""
    cost = SiteCost("A", Decimal(700_000), Decimal(620_000), Decimal(950_000))
    spread = portfolio_spread([cost], seed=SEED, draws=DRAWS, common_spread=0.0)
    for percent, value in zip(PERCENTS, found(spread), strict=True):
        error = float(getattr(spread, f"p{percent}_error"))
        assert abs(value - float(getattr(cost, f"p{percent}"))) <= ERRORS * error


def test_settled_sites_without_spread_add_to_the_hundredth():
    costs = [SiteCost("A", Decimal("100.10")), SiteCost("B", Decimal("0.05"))]
    spread = portfolio_spread(costs, seed=SEED, common_spread=0.0)
    assert (spread.p10, spread.p50, spread.p90) == (Decimal("100.15"),) * 3
    assert (spread.p10_error, spread.complete, spread.known) == (0, True, 2)


def test_a_site_without_a_total_is_named_and_leaves_the_sum_incomplete():
    spread = portfolio_spread([SiteCost("B", None), SiteCost("A", Decimal(5))], seed=SEED)
    assert (spread.known, spread.not_known, spread.complete) == (1, ("B",), False)


def test_share_above_a_limit():
    """Oracle: a normal sum lies above its mean in half, above P90 in a tenth of all draws."""
    totals = portfolio_cents(
        [normal_site("A", 1e6, 1e5)], seed=SEED, draws=DRAWS, common_spread=0.0
    )
    for limit, share in ((1e6, 0.5), (1e6 + AT_90 * 1e5, 0.1)):
        error = math.sqrt(share * (1 - share) / DRAWS)
        assert abs(share_above(totals, Decimal(f"{limit:.2f}")) - share) <= ERRORS * error
    assert share_above(np.array([100, 101]), Decimal("1.00")) == 0.5


@st.composite
def portfolios(draw):
    costs = []
    for code in "ABCD":
        three = sorted(draw(st.lists(st.decimals("0", "1e7", places=2), min_size=3, max_size=3)))
        p10, p50, p90 = three if draw(st.booleans()) else (None, three[1], None)
        costs.append(SiteCost(code, p50, p10, p90))
    return costs


@settings(max_examples=50)
@given(portfolios(), st.permutations(range(4)), st.floats(0.0, 0.3))
def test_order_does_not_matter_and_one_more_site_never_costs_less(costs, order, common):
    drawn = portfolio_cents(costs, seed=SEED, common_spread=common)
    shuffled = [costs[place] for place in order]
    assert (drawn == portfolio_cents(shuffled, seed=SEED, common_spread=common)).all()
    assert (drawn >= portfolio_cents(costs[:-1], seed=SEED, common_spread=common)).all()
    assert drawn.min() >= 0


@pytest.mark.parametrize(
    "wrong",
    [
        {"p50": None},
        {"p10": None},
        {"p10": Decimal(8)},
        {"p10": Decimal(-1)},
    ],
)
def test_percentiles_that_cannot_be(wrong):
    with pytest.raises(ValueError, match="percentiles"):
        replace(SiteCost("A", Decimal(5), Decimal(4), Decimal(7)), **wrong)


@pytest.mark.parametrize(
    ("costs", "more", "words"),
    [
        ((SiteCost("A", Decimal(5)),) * 2, {}, "twice"),
        ((), {"common_spread": 0.31}, "outside 0 to 0.3"),
        ((), {"draws": 99}, "fewer than 100"),
        ((SiteCost("A", Decimal(10) ** 18),), {}, "too large"),
    ],
)
def test_portfolios_that_cannot_be_drawn(costs, more, words):
    with pytest.raises(ValueError, match=words):
        portfolio_cents(costs, seed=SEED, **more)
