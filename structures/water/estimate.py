"""The step of affected against control wells with its interval, and what is shown beside it."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.life.cautions import caution
from structures.water.contrast import pooled_contrast, unequal_contrast
from structures.water.dry import Bounded, bounded_mixture
from structures.water.filling import filling_until, find_filling
from structures.water.power import smallest_seen_m, widening
from structures.water.regression import regress
from structures.water.serial import SerialDesign, in_median_gaps

if TYPE_CHECKING:
    from datetime import date

    from numpy.typing import NDArray

    from structures.life.cautions import Caution
    from structures.water.contrast import Contrast
    from structures.water.pairs import Pairs
    from structures.water.regression import Regression
    from structures.water.rules import EffectRules
    from structures.water.serial import Mixture

SERIAL_FROM: Final = 24  # pairs; with fewer, serial correlation is not judged (handbook 10.2)
DRY_MOST: Final = 1 / 20  # share of dry pairs up to which they are left out (handbook 10.1)
MORE_YEARS: Final = 2  # of readings, for what they would show


@dataclass(frozen=True, slots=True)
class Filling:
    """The first rains had a level of their own; beside it what one step at completion would give."""

    until: date
    pairs: int
    one_step_m: float
    one_step_low_m: float
    one_step_high_m: float


@dataclass(frozen=True, slots=True, eq=False)
class Estimate:
    """The effect with its interval, and the plain forms beside it for those who check.

    `more_years_m` is the smallest effect that two more years of the same readings would let see;
    with a `filling` the effect is that of the filled ground.
    """

    effect_m: float
    low_m: float
    high_m: float
    method: str
    smallest_seen_m: float
    more_years_m: float | None = None
    pooled: Contrast | None = None
    unequal: Contrast | None = None
    bartlett: Regression | None = None
    filling: Filling | None = None


def used_pairs(pairs: Pairs) -> NDArray[np.bool_]:
    """Mark the pairs that count; dry ones are left out where they are 1 in 20 or fewer.

    Source: handbook 10.1.
    """
    return ~pairs.bounded if pairs.dry_share <= DRY_MOST else np.ones_like(pairs.bounded)


def estimate_step(
    pairs: Pairs, completed: date, rules: EffectRules, rng: np.random.Generator
) -> tuple[Estimate, tuple[Caution, ...]]:
    """Give the step with its interval, and what must be said of it.

    Source: handbook 10.1, 10.2 and 10.5; `rng` draws dry pairs where they are more than 1 in 20.
    """
    told = []
    used, share = used_pairs(pairs), pairs.dry_share
    fitted = share > DRY_MOST
    if fitted:
        told.append(caution("effect-dry-fitted", percent=100 * share))
    elif share:
        told.append(caution("effect-dry-left-out", count=int(pairs.bounded.sum())))
    if not fitted and used.sum() < SERIAL_FROM:
        told.append(caution("effect-serial-not-judged", count=int(used.sum()), least=SERIAL_FROM))
        return _pooled(pairs, used, rules), tuple(told)
    columns = np.column_stack([np.ones(used.size), pairs.after, pairs.annual_terms()])
    short = find_filling(pairs, columns, completed, rules)
    if short is None:
        return _serial(pairs, used, columns, rules, rng), tuple(told)
    one = _law(pairs, used, columns, rng)[0]
    filling = Filling(
        filling_until(completed, rules),
        int((short & used).sum()),
        one.quantile(0.5),
        *one.interval(rules.confidence),
    )
    told.append(caution("effect-first-filling", **asdict(filling)))
    wider = np.column_stack([columns, short])
    return _serial(pairs, used, wider, rules, rng, filling), tuple(told)


def _serial(
    pairs: Pairs,
    used: NDArray[np.bool_],
    columns: NDArray[np.float64],
    rules: EffectRules,
    rng: np.random.Generator,
    filling: Filling | None = None,
) -> Estimate:
    """Give the interval of 10.5; among the pairs used, dry ones count as bounds."""
    law, design = _law(pairs, used, columns, rng)
    low, high = law.interval(rules.confidence)
    smallest = smallest_seen_m((high - low) / 2.0, law.degrees, rules.confidence)
    days, values = pairs.middle_day[used], pairs.difference_m[used]
    factor = widening(design, days, values, years=MORE_YEARS)
    dry = bool(pairs.bounded[used].any())
    beside = {} if dry else _beside(values, columns[used], rules)
    terms = [
        "annual cosine and sine beside the step" if columns.shape[1] > 3 else "no seasonal terms",
        "the first rains with a level of their own" if filling else "",
        "dry pairs drawn below their bounds" if dry else "",
    ]
    return Estimate(
        law.quantile(0.5),
        low,
        high,
        _words(days, terms, rules),
        smallest,
        factor * smallest,
        filling=filling,
        **beside,
    )


def _law(
    pairs: Pairs, used: NDArray[np.bool_], columns: NDArray[np.float64], rng: np.random.Generator
) -> tuple[Mixture, SerialDesign]:
    design = SerialDesign(in_median_gaps(pairs.middle_day[used]), columns[used])
    values, below, above = (part[used] for part in (pairs.difference_m, pairs.below, pairs.above))
    if not (below | above).any():
        return design.mixture(values, 1), design
    return bounded_mixture(design, Bounded(values, below, above), 1, rng), design


def _pooled(pairs: Pairs, used: NDArray[np.bool_], rules: EffectRules) -> Estimate:
    """Give the pooled interval of 10.2, for few pairs."""
    values = pairs.difference_m[used]
    beside = _beside(values, np.column_stack([np.ones(values.size), pairs.after[used]]), rules)
    pooled = beside["pooled"]
    low, high = pooled.interval_m(rules.confidence)
    smallest = smallest_seen_m((high - low) / 2.0, pooled.degrees, rules.confidence)
    words = (
        f"Mean difference of half-month pairs, after less before, with the pooled error and "
        f"{pooled.degrees:.0f} degrees of freedom; {rules.confidence:.0%} interval, serial "
        "correlation not judged."
    )
    return Estimate(pooled.change_m, low, high, words, smallest, **beside)


def _beside(
    values: NDArray[np.float64], columns: NDArray[np.float64], rules: EffectRules
) -> dict[str, object]:
    """Give the check forms: pooled, unequal variances, Bartlett errors."""
    after = columns[:, 1] == 1.0
    before_m, after_m = values[~after], values[after]
    scatters = before_m.std() + after_m.std() > 0.0
    return {
        "pooled": pooled_contrast(before_m, after_m),
        "unequal": unequal_contrast(before_m, after_m) if scatters else None,
        "bartlett": regress(columns, values, lag=rules.serial_lag),
    }


def _words(days: NDArray[np.float64], terms: list[str], rules: EffectRules) -> str:
    gap = float(np.median(np.diff(days)))
    weighed = (
        "Difference of half-month pairs, after less before, weighed over serial correlations of "
        f"0 to 0.95 a median gap of {gap:.1f} days by their restricted likelihood"
    )
    return f"{'; '.join(filter(None, [weighed, *terms]))}; {rules.confidence:.0%} interval."
