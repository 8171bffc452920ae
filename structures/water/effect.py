"""Did levels change because of the wall? Affected wells against control wells, before and after.

The answer is a number with an interval, what else could explain it, and what could have been seen;
or it is not known, and a caution says why.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.life.verdict import Limits, Measured
from structures.water.effect_cautions import doubts, shortages
from structures.water.estimate import estimate_step, used_pairs
from structures.water.pairs import make_pairs
from structures.water.rivals import Rivals, find_rivals
from structures.water.rules import EffectRules

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from numpy.typing import NDArray

    from structures.intake.rain import Rain
    from structures.intake.readings import WellReading
    from structures.life.cautions import Caution
    from structures.water.estimate import Estimate
    from structures.water.pairs import Pairs

DRY_REASON: Final = "dry, in 1 of 20 pairs or fewer"
SEED: Final = 20261201  # of the draws of dry pairs; any whole number, it stands in the result


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
    estimate, told = estimate_step(pairs, completed, rules, np.random.default_rng(seed))
    rivals = find_rivals(readings, pairs, completed, rain, rules)
    told += doubts(pairs, rivals, rain, rules)
    return Effect(pairs, rules, estimate, rivals, told, seed)
