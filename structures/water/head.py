"""Head across the wall: how much higher the water stands above it than below, now and before."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.life.verdict import Head
from structures.water.half_months import stretch_of
from structures.water.pairs import full_years

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from structures.intake.readings import WellReading
    from structures.water.half_months import Stretch
    from structures.water.rules import EffectRules

LOW_SHARE: Final = 0.10  # nine heads in ten lie above it (project choice)
HIGH_SHARE: Final = 0.90


@dataclass(frozen=True, slots=True)
class HeadAcross:
    """Heads of half months, as (first day, head in m, whether it is only a least one).

    `before_m` and `now_m` are (low, middle, high) of the heads before completion and of the last
    full water year; None where there are none.
    """

    heads: tuple[tuple[date, float, bool], ...]
    before_m: tuple[float, float, float] | None
    now_m: tuple[float, float, float] | None
    full_after: tuple[int, ...]
    upstream_dry: int
    measured: Head


def head_across(
    readings: Sequence[WellReading],
    upstream: str,
    downstream: str,
    completed: date,
    rules: EffectRules,
    *,
    natural_head_m: float | None = None,
) -> HeadAcross:
    """Measure the head across the wall in the last full water year against the head before.

    The pipes stand on the two faces, so the head is measured and not inferred: its range is that
    of nine in ten heads now less that of nine in ten before, without a law of errors. A dry
    downstream pipe gives a least head, a dry upstream pipe none. Source: handbook 10.11, the head
    across the wall comes first; its range decided for this project.

    Parameters
    ----------
    upstream, downstream
        Codes of the pipes; other wells are passed over.
    natural_head_m
        Gradient times the distance of the pipes, where they were set with the wall and nothing was
        read before.
    """
    up, down = (_by_half(readings, well, completed) for well in (upstream, downstream))
    both = sorted(up.keys() & down.keys())
    heads = tuple(
        (one.first, up[one][0] - down[one][0], down[one][1]) for one in both if not up[one][1]
    )
    after = [row for row in heads if row[0] >= completed]
    full = full_years((row[0] for row in after), rules)
    last = [head for day, head, _ in after if full and rules.water_year(day) == full[-1]]
    before = _spread([head for day, head, least in heads if day < completed and not least])
    if before is None and natural_head_m is not None:
        before = (natural_head_m,) * 3
    now = _spread(last)
    gain: tuple[float | None, ...] = (None, None, None)
    if before is not None and now is not None:
        gain = (now[1] - before[1], now[0] - before[2], now[2] - before[0])
    measured = Head(*gain, None if before is None else before[2] - before[0], len(after), len(full))
    return HeadAcross(heads, before, now, full, len(both) - len(heads), measured)


def _by_half(
    readings: Sequence[WellReading], well: str, completed: date
) -> dict[Stretch, tuple[float, bool]]:
    """Give mean level and whether dry for each half month in which a well was read static."""
    rows: dict[Stretch, list[WellReading]] = defaultdict(list)
    for one in readings:
        if one.well == well and not one.left_out:
            rows[stretch_of(one.day, completed)].append(one)
    return {
        stretch: (float(np.mean([one.level_m for one in parts])), any(one.dry for one in parts))
        for stretch, parts in rows.items()
    }


def _spread(heads: list[float]) -> tuple[float, float, float] | None:
    if not heads:
        return None
    low, middle, high = np.quantile(heads, [LOW_SHARE, 0.5, HIGH_SHARE])
    return float(low), float(middle), float(high)
