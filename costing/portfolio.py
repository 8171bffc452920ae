"""What many sites cost together: rock surprises each by itself, rates move all at once.

Adding the P90 of every site would take all of them for unlucky at the same time; adding their P50
would hide that rates are the same for all. Draws keep both.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import ndtri

from costing.price.money import CENT, to_cents
from costing.risk import percentile, standard_error

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

COMMON_SPREAD: Final = 0.08  # handbook 12: common spread of rates in portfolio draws
COMMON_SPREAD_MOST: Final = 0.30  # handbook 12, accepted range
DRAWS: Final = 2000  # handbook 12: risk draws
DRAWS_LEAST: Final = 100  # below it, one draw alone moves P10 and P90
EXACT_MOST: Final = 2.0**62  # totals of whole hundredths stay below the greatest 64-bit integer
AT_90: Final = float(ndtri(0.9))  # standard deviations from P50 to P90 of a normal distribution


@dataclass(frozen=True, slots=True)
class SiteCost:
    """Total of one site and its percentiles; all None where its estimate is not complete.

    `p10` and `p90` are None where nothing varies, as with a rock line that an engineer settled.
    """

    site: str
    p50: Decimal | None
    p10: Decimal | None = None
    p90: Decimal | None = None

    def __post_init__(self) -> None:
        given = [cost for cost in (self.p10, self.p50, self.p90) if cost is not None]
        if len(given) == 2 or (self.p50 is None and given):
            raise ValueError(f"{self.site} gives P50 alone, all three percentiles or none")
        if sorted(given) != given or any(cost < 0 for cost in given):
            raise ValueError(f"{self.site}: percentiles rise from zero or more, P10 to P90")


@dataclass(frozen=True, slots=True)
class PortfolioSpread:
    """Percentiles of the sum of all sites that are known, with their standard errors.

    `not_known` names the sites without a total: with one of them the sum is not that of all.
    `common_spread` is the relative spread of rates, `draws` and `seed` how it was drawn.
    """

    p10: Decimal
    p50: Decimal
    p90: Decimal
    p10_error: Decimal
    p50_error: Decimal
    p90_error: Decimal
    known: int
    not_known: tuple[str, ...]
    common_spread: float
    draws: int
    seed: int

    @property
    def complete(self) -> bool:
        """Whether the total of every site is known."""
        return not self.not_known


def portfolio_spread(
    costs: Sequence[SiteCost],
    *,
    seed: int,
    draws: int = DRAWS,
    common_spread: float = COMMON_SPREAD,
) -> PortfolioSpread:
    """Give what many sites cost together.

    Source: handbook 8.9 for percentiles and their errors; draws as `portfolio_cents`.

    Parameters
    ----------
    costs
        One entry a site, in any order.
    seed, draws
        How it is drawn; both stand in the result.
    common_spread
        Relative standard deviation of the factor on all rates, 0 to 0.3.

    Raises
    ------
    ValueError
        If a site stands twice, or a setting is outside its range.
    """
    totals = portfolio_cents(costs, seed=seed, draws=draws, common_spread=common_spread)
    percents = (10, 50, 90)
    lacking = tuple(sorted(cost.site for cost in costs if cost.p50 is None))
    return PortfolioSpread(
        *(percentile(totals, percent) * CENT for percent in percents),
        *(standard_error(totals, percent) * CENT for percent in percents),
        known=len(costs) - len(lacking),
        not_known=lacking,
        common_spread=common_spread,
        draws=draws,
        seed=seed,
    )


def portfolio_cents(
    costs: Sequence[SiteCost],
    *,
    seed: int,
    draws: int = DRAWS,
    common_spread: float = COMMON_SPREAD,
) -> NDArray[np.int64]:
    """Draw the sum of all known sites, in whole hundredths, shape (draws,).

    Source: sums of independent draws times one factor. Each site's own cost is a two-piece normal
    distribution through its P10, P50 and P90, not below zero; the factor is log-normal with median 1
    and relative standard deviation `common_spread`, the same for all sites of a draw.

    Parameters
    ----------
    costs
        One entry a site; the order does not matter.
    seed, draws, common_spread
        As in `portfolio_spread`.

    Raises
    ------
    ValueError
        If a site stands twice, or a setting is outside its range, or sums are too large to be exact.
    """
    if len({cost.site for cost in costs}) < len(costs):
        raise ValueError("a site stands twice in the portfolio")
    if not 0.0 <= common_spread <= COMMON_SPREAD_MOST:
        raise ValueError(f"a common spread of {common_spread:g} is outside 0 to 0.3")
    if draws < DRAWS_LEAST:
        raise ValueError(f"{draws} draws are fewer than {DRAWS_LEAST}")
    rng = np.random.default_rng(seed)
    # Before the sites, so that the same seed moves rates alike whichever sites are taken together.
    factor = np.exp(math.sqrt(math.log1p(common_spread**2)) * rng.standard_normal(draws))
    sums = np.zeros(draws)
    for cost in sorted(costs, key=lambda one: one.site):
        if cost.p50 is not None:
            sums += _own_cents(cost, rng, draws)
    totals = np.floor(sums * factor + 0.5)
    if totals.max() > EXACT_MOST:
        raise ValueError("the sum of the portfolio is too large for whole hundredths")
    return totals.astype(np.int64)


def share_above(totals: NDArray[np.int64], limit: Decimal) -> float:
    """Share of draws whose sum exceeds a limit, 0 to 1. Source: counting."""
    return float(np.mean(totals > int(to_cents(limit) / CENT)))


def _own_cents(cost: SiteCost, rng: np.random.Generator, draws: int) -> NDArray[np.float64]:
    middle = float(cost.p50 / CENT)
    if cost.p10 is None:
        return np.full(draws, middle)
    deviation = rng.standard_normal(draws)
    below, above = (float((end - cost.p50) / CENT) / AT_90 for end in (cost.p10, cost.p90))
    slope = np.where(deviation < 0.0, -below, above)
    return np.maximum(middle + slope * deviation, 0.0)
