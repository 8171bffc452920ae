"""Did levels change because of the wall? Affected wells against control wells, before and after.

The answer is a number with an interval, what else could explain it, and what could have been seen;
or it is not known, and a caution says why.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.life.cautions import caution
from structures.life.verdict import Limits, Measured
from structures.water.contrast import pooled_contrast, unequal_contrast
from structures.water.dry import Bounded, bounded_mixture
from structures.water.effect_cautions import doubts, shortages
from structures.water.filling import filling_until, find_filling
from structures.water.pairs import make_pairs
from structures.water.power import smallest_seen_m, widening
from structures.water.regression import regress
from structures.water.rivals import Rivals, find_rivals
from structures.water.rules import EffectRules
from structures.water.serial import SerialDesign, in_median_gaps

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from numpy.typing import NDArray

    from structures.intake.rain import Rain
    from structures.intake.readings import WellReading
    from structures.life.cautions import Caution
    from structures.water.contrast import Contrast
    from structures.water.pairs import Pairs
    from structures.water.regression import Regression
    from structures.water.serial import Mixture

SERIAL_FROM: Final = 24  # pairs; with fewer, serial correlation is not judged (handbook 10.2)
SEASON_FROM: Final = 2  # full water years a side for annual terms (handbook 10.5)
DRY_MOST: Final = 1 / 20  # share of dry pairs up to which they are left out (handbook 10.1)
DRY_REASON: Final = "dry, in 1 of 20 pairs or fewer"
MORE_YEARS: Final = 2  # of readings, for what they would show
SEED: Final = 20261201  # of the draws of dry pairs; any whole number, it stands in the result


def used_pairs(pairs: Pairs) -> NDArray[np.bool_]:
    """Mark the pairs that count; dry ones are left out where they are 1 in 20 or fewer.

    Source: handbook 10.1.
    """
    return ~pairs.bounded if pairs.dry_share <= DRY_MOST else np.ones_like(pairs.bounded)


@dataclass(frozen=True, slots=True, eq=False)
class Estimate:
    """The effect with its interval, and the plain forms beside it for those who check.

    `more_years_m` is the smallest effect that two more years of the same readings would let see.
    """

    effect_m: float
    low_m: float
    high_m: float
    method: str
    smallest_seen_m: float
    more_years_m: float | None
    pooled: Contrast | None = None
    unequal: Contrast | None = None
    bartlett: Regression | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Effect:
    """Everything that the readings say; `estimate` is None where they say too little."""

    pairs: Pairs
    rules: EffectRules
    estimate: Estimate | None
    rivals: Rivals | None
    cautions: tuple[Caution, ...]
    seed: int

    @property
    def used(self) -> NDArray[np.bool_]:
        """Which pairs count: without the dry ones where those are few; shape (n,)."""
        return used_pairs(self.pairs)

    @property
    def counts(self) -> tuple[int, int]:
        """Pairs that count, before and after."""
        after = self.pairs.after
        return int((self.used & ~after).sum()), int((self.used & after).sum())

    @property
    def taken(self) -> int:
        """Readings behind the pairs that count."""
        return int(self.pairs.readings[self.used].sum())

    @property
    def left_out(self) -> tuple[tuple[str, int], ...]:
        """Why the other readings do not count, the most frequent reason first."""
        dry = int(self.pairs.readings[~self.used].sum())
        reasons = [*self.pairs.left_out, *([(DRY_REASON, dry)] if dry else [])]
        return tuple(sorted(reasons, key=lambda item: (-item[1], item[0])))

    @property
    def is_effect(self) -> bool:
        """Whether the word effect may be used; else it is a change (handbook 10.9)."""
        found = self.estimate
        return found is not None and found.low_m * found.high_m > 0.0

    @property
    def limits(self) -> Limits:
        """What the rule of the verdict asks for."""
        rules = self.rules
        return Limits(rules.least_effect_m, rules.least_full_years, rules.least_pairs)

    @property
    def measured(self) -> Measured:
        """The evidence as the rule of the verdict takes it."""
        found, pairs = self.estimate, self.pairs
        return Measured(
            found and found.effect_m,
            found and found.low_m,
            found and found.high_m,
            found and found.smallest_seen_m,
            self.counts,
            (len(pairs.full_before), len(pairs.full_after)),
            len(pairs.control_wells),
        )


def measure_effect(
    readings: Sequence[WellReading],
    completed: date,
    *,
    rain: Rain | None = None,
    rules: EffectRules | None = None,
    seed: int = SEED,
) -> Effect:
    """Measure what changed at affected wells and not at control wells.

    Source: handbook 10.1, 10.2, 10.5 to 10.7, 10.9 and 10.10.

    Parameters
    ----------
    readings
        All readings, those that take no part with their reason.
    completed
        Day on which the wall was completed; it counts as after.
    rain
        Rain of a gauge that speaks for the wells, by months.
    seed
        Of the draws of dry pairs.
    """
    rules = rules or EffectRules()
    pairs = make_pairs(readings, completed, rules)
    short = shortages(pairs, rules)
    if short:
        return Effect(pairs, rules, None, None, short, seed)
    told: list[Caution] = []
    estimate = _estimate(pairs, completed, rules, np.random.default_rng(seed), told)
    rivals = find_rivals(readings, pairs, completed, rain, rules)
    told += doubts(pairs, rivals, rain, rules)
    return Effect(pairs, rules, estimate, rivals, tuple(told), seed)


def _estimate(
    pairs: Pairs,
    completed: date,
    rules: EffectRules,
    rng: np.random.Generator,
    told: list[Caution],
) -> Estimate:
    used, share = used_pairs(pairs), pairs.dry_share
    fitted = share > DRY_MOST
    if fitted:
        told.append(caution("effect-dry-fitted", percent=100 * share))
    elif share:
        told.append(caution("effect-dry-left-out", count=int(pairs.bounded.sum())))
    if not fitted and used.sum() < SERIAL_FROM:
        told.append(caution("effect-serial-not-judged", count=int(used.sum()), least=SERIAL_FROM))
        return _plain(pairs, used, rules)
    seasons = min(len(pairs.full_before), len(pairs.full_after)) >= SEASON_FROM
    columns = np.column_stack(
        [np.ones(used.size), pairs.after, *(pairs.season().T if seasons else ())]
    )
    filling = find_filling(pairs, columns, completed, rules)
    if filling is not None:
        columns = np.column_stack([columns, filling])
        until = filling_until(completed, rules).isoformat()
        told.append(caution("effect-first-filling", until=until, count=int(filling.sum())))
    words = _words(
        pairs.middle_day[used], rules, seasons=seasons, dry=fitted, filling=filling is not None
    )
    return _serial(pairs, used, columns[used], rules, rng if fitted else None, words)


def _serial(
    pairs: Pairs,
    used: NDArray[np.bool_],
    columns: NDArray[np.float64],
    rules: EffectRules,
    rng: np.random.Generator | None,
    words: str,
) -> Estimate:
    """Give the interval of 10.5; with a generator, dry pairs count as bounds."""
    days, values = pairs.middle_day[used], pairs.difference_m[used]
    design = SerialDesign(in_median_gaps(days), columns)
    law: Mixture
    if rng is None:
        law = design.mixture(values, 1)
    else:
        law = bounded_mixture(design, Bounded(values, pairs.below, pairs.above), 1, rng)
    low, high = law.interval(rules.confidence)
    smallest = smallest_seen_m((high - low) / 2.0, law.degrees, rules.confidence)
    factor = widening(design, days, values, years=MORE_YEARS)
    beside = _beside(values, columns[:, 1], columns) if rng is None else {}
    return Estimate(law.quantile(0.5), low, high, words, smallest, factor * smallest, **beside)


def _plain(pairs: Pairs, used: NDArray[np.bool_], rules: EffectRules) -> Estimate:
    """Give the pooled interval of 10.2, for few pairs."""
    values, after = pairs.difference_m[used], pairs.after[used].astype(float)
    columns = np.column_stack([np.ones(values.size), after])
    beside = _beside(values, after, columns)
    pooled = beside["pooled"]
    low, high = pooled.interval_m(rules.confidence)
    smallest = smallest_seen_m((high - low) / 2.0, pooled.degrees, rules.confidence)
    words = (
        f"Mean difference of half-month pairs, after less before, with the pooled error and "
        f"{pooled.degrees:.0f} degrees of freedom; {rules.confidence:.0%} interval, serial "
        "correlation not judged."
    )
    return Estimate(pooled.change_m, low, high, words, smallest, None, **beside)


def _beside(
    values: NDArray[np.float64], after: NDArray[np.float64], columns: NDArray[np.float64]
) -> dict[str, object]:
    """Give the check forms: pooled, unequal variances, Bartlett errors."""
    before_m, after_m = values[after == 0.0], values[after == 1.0]
    scatters = before_m.std() + after_m.std() > 0.0
    return {
        "pooled": pooled_contrast(before_m, after_m),
        "unequal": unequal_contrast(before_m, after_m) if scatters else None,
        "bartlett": regress(columns, values),
    }


def _words(
    days: NDArray[np.float64], rules: EffectRules, *, seasons: bool, dry: bool, filling: bool
) -> str:
    gap = float(np.median(np.diff(days)))
    weighed = (
        "Difference of half-month pairs, after less before, weighed over serial correlations of "
        f"0 to 0.95 a median gap of {gap:.1f} days by their restricted likelihood"
    )
    parts = [
        weighed,
        "annual cosine and sine beside the step" if seasons else "no seasonal terms",
        "the first filling with a level of its own" if filling else "",
        "dry pairs drawn below their bounds" if dry else "",
    ]
    return f"{'; '.join(filter(None, parts))}; {rules.confidence:.0%} interval."
