"""Cost of every draw of the rock line in whole hundredths of the currency, and its percentiles.

The arithmetic is that of one estimate, done on arrays of integers: the same gate, the same
rounding, the same percentages, so every draw's total is what an estimate of it would print.
"""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Final

import numpy as np

from costing.price.money import CENT, measured
from costing.price.rate_cells import PERCENT_DECIMALS
from costing.price.rates import BY_LIFTS
from structures.takeoff.quantity import GATE_DECIMALS

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import ArrayLike, NDArray

    from costing.price.contingency import ContingencyStep
    from costing.price.rates import RateSchedule
    from structures.takeoff.dewatering import Pumping
    from structures.takeoff.takings import Takings
    from structures.wall.closure import Ends

HUNDREDTHS: Final = 100  # in one unit of quantity or money, handbook 8.4
MICROS: Final = 10**GATE_DECIMALS
PERCENT_UNITS: Final = HUNDREDTHS * 10**PERCENT_DECIMALS  # a whole, in units of a percentage
# Scaling by a million moves a number by some of its last bits; ties within that are judged exactly.
NEAR_TIE: Final = 1e-3
LAST_BITS: Final = 8.0 * float(np.finfo(np.float64).eps)
EXACT_MOST: Final = 2**62  # products stay below the greatest 64-bit integer


@dataclass(frozen=True, slots=True)
class Spread:
    """Percentiles of the total over all draws, as the k-th smallest with k = ceiling(p N).

    `p10`, `p50`, `p90` and their standard errors are None where some draws cannot be priced; `why`
    says it. `open_flank_share` is the share of draws in which a flank opens; their cost is a lower
    bound (handbook 8.10).
    """

    p10: Decimal | None
    p50: Decimal | None
    p90: Decimal | None
    p10_error: Decimal | None
    p50_error: Decimal | None
    p90_error: Decimal | None
    draws: int
    seed: int
    open_flank_share: float
    why: str = ""


def price_draws(
    takings: Takings,
    pumping: Pumping,
    ends: Ends,
    schedule: RateSchedule,
    *,
    seed: int,
    step: ContingencyStep | None = None,
) -> Spread:
    """Price every draw and give the percentiles.

    Source: handbook 8.9 and 8.10.

    Parameters
    ----------
    takings, pumping, ends
        What was measured, the pump hours and the ends of the wall, of the same draws.
    schedule
        Rates; every item has one.
    seed
        Seed of the draws, stated with the result.
    step
        The office's step of contingencies.

    Raises
    ------
    ValueError
        If pump hours or the rate of an item are not known: such an estimate has no total.
    """
    if pumping.hours is None:
        raise ValueError("without pump hours no draw has a total")
    begins_m = takings.limits_m[:-1]
    why = _lifts_without_rate(begins_m, takings.excavation_m3, schedule)
    if why:
        return unpriced(ends, seed=seed, why=why)
    by_item = {**takings.by_item, "dewatering": pumping.hours}
    totals = total_cents(by_item, takings.excavation_m3, begins_m, schedule, step=step)
    percents = (10, 50, 90)
    return Spread(
        *(_money(percentile(totals, percent)) for percent in percents),
        *(_money(standard_error(totals, percent)) for percent in percents),
        takings.draws,
        seed,
        open_flank_share(ends),
    )


def unpriced(ends: Ends, *, seed: int, why: str) -> Spread:
    """Spread of draws that cannot be priced: the share of open flanks alone, and why."""
    return Spread(*(None,) * 6, ends.left_m.size, seed, open_flank_share(ends), why)


def open_flank_share(ends: Ends) -> float:
    """Share of draws in which a flank opens, 0 to 1. Source: handbook 8.10."""
    return float(np.mean(~(ends.closed_left & ends.closed_right)))


def total_cents(
    by_item: Mapping[str, ArrayLike],
    excavation_m3: ArrayLike,
    begins_m: ArrayLike,
    schedule: RateSchedule,
    *,
    step: ContingencyStep | None = None,
) -> NDArray[np.int64]:
    """Total of every draw with its percentages, in whole hundredths, shape (draws,).

    Source: handbook 8.4 and 8.9, rounded exactly as one estimate is.

    Parameters
    ----------
    by_item
        Quantities by item, shape (draws,) each; excavation apart.
    excavation_m3
        Trench by lift, shape (draws, lifts).
    begins_m
        Depth at which each lift begins, shape (lifts,).
    schedule
        Rates and percentages.
    step
        The office's step of contingencies.

    Raises
    ------
    ValueError
        If an item, or a lift in which a draw digs, has no rate.
    """
    subtotal = np.zeros(np.shape(excavation_m3)[0], dtype=np.int64)
    lifts = hundredths(excavation_m3)
    for column, begins in zip(lifts.T, np.asarray(begins_m).tolist(), strict=True):
        subtotal += _amounts(column, schedule.rate_of(BY_LIFTS, begins), f"lift from {begins:g} m")
    for item, quantities in by_item.items():
        subtotal += _amounts(hundredths(quantities), schedule.rate_of(item), item)
    contingency = _share(subtotal, schedule.contingency_percent)
    if step is not None:
        above = np.maximum(_share(subtotal, step.percent_above), _cents(step.least))
        contingency = np.where(subtotal > _cents(step.limit), above, contingency)
    return subtotal + contingency + _share(subtotal, schedule.overhead_percent)


def hundredths(values: ArrayLike) -> NDArray[np.int64]:
    """Take computed quantities through the gate as whole hundredths, any shape.

    Source: handbook 8.4, to six decimals and then to two, half away from zero; equal to
    `measured` in every bit.

    Raises
    ------
    ValueError
        If a number is not finite, or too large to have hundredths.
    """
    numbers = np.asarray(values, dtype=np.float64)
    if not np.isfinite(numbers).all():
        raise ValueError("a quantity is not a finite number")
    scaled = np.abs(numbers) * MICROS
    whole = np.floor(scaled + 0.5)
    near = ~(np.abs(scaled - np.floor(scaled) - 0.5) > NEAR_TIE + LAST_BITS * scaled)
    micros = np.where(near, 0.0, whole).astype(np.int64)
    cents = np.sign(numbers).astype(np.int64) * _half_up(micros, MICROS // HUNDREDTHS)
    cents[near] = [_cents(measured(number)) for number in numbers[near].tolist()]
    return cents


def percentile(totals: NDArray[np.int64], percent: int) -> int:
    """k-th smallest of N totals with k = ceiling(percent N / 100). Source: handbook 8.9."""
    rank = -(-percent * totals.size // HUNDREDTHS)
    return _smallest(totals, rank)


def standard_error(totals: NDArray[np.int64], percent: int) -> int:
    """Estimate the standard error of a percentile, in whole hundredths.

    Source: handbook 8.9, sqrt(p (1 - p)/N)/density, with the density read off the totals one such
    step of the rank to either side: half the distance between those two.
    """
    draws, share = totals.size, percent / HUNDREDTHS
    reach = int(np.ceil(np.sqrt(share * (1.0 - share) * draws)))
    rank = -(-percent * draws // HUNDREDTHS)
    low, high = max(rank - reach, 1), min(rank + reach, draws)
    distance = _smallest(totals, high) - _smallest(totals, low)
    return round(distance * reach / max(high - low, 1))


def _lifts_without_rate(begins_m: NDArray, excavation_m3: NDArray, schedule: RateSchedule) -> str:
    """Say which lifts some draws dig and nothing prices; empty where there are none."""
    dug = np.count_nonzero(hundredths(excavation_m3), axis=0)
    lacking = [
        (begins, int(count))
        for begins, count in zip(begins_m.tolist(), dug, strict=True)
        if count and schedule.rate_of(BY_LIFTS, begins) is None
    ]
    if not lacking:
        return ""
    draws = excavation_m3.shape[0]
    lifts = ", ".join(f"from {begins:g} m in {count}" for begins, count in lacking)
    return f"of {draws} draws some dig lifts that have no rate: {lifts}"


def _amounts(quantity: NDArray[np.int64], rate: Decimal | None, words: str) -> NDArray[np.int64]:
    """Amounts in hundredths of hundredths of quantity times hundredths of rate, rounded once."""
    if rate is None:
        if quantity.any():
            raise ValueError(f"{words} has no rate")
        return quantity
    price = _cents(rate)
    if quantity.size and int(np.abs(quantity).max()) * price > EXACT_MOST:
        raise ValueError(f"an amount of {words} is too large for whole hundredths")
    return _half_up(quantity * price, HUNDREDTHS)


def _share(subtotal: NDArray[np.int64], percent: Decimal) -> NDArray[np.int64]:
    units = int(percent.scaleb(PERCENT_DECIMALS))
    if units != percent.scaleb(PERCENT_DECIMALS):
        raise ValueError(f"{percent} % has more than {PERCENT_DECIMALS} decimals")
    if subtotal.size and int(np.abs(subtotal).max()) * units > EXACT_MOST:
        raise ValueError("a subtotal is too large for whole hundredths")
    return _half_up(subtotal * units, PERCENT_UNITS)


def _half_up(values: NDArray[np.int64], unit: int) -> NDArray[np.int64]:
    """Divide by a unit, half away from zero."""
    return np.sign(values) * ((np.abs(values) + unit // 2) // unit)


def _smallest(totals: NDArray[np.int64], rank: int) -> int:
    return int(np.partition(totals, rank - 1)[rank - 1])


def _cents(amount: Decimal) -> int:
    return int(amount / CENT)


def _money(cents: int) -> Decimal:
    return cents * CENT
