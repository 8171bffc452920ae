"""A wall cut into strips by offset, and rock found in a strip against what was drawn.

Source: the office's practice, "nine hold points" and rule HP-05; the length is a setting.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final

from structures.errors import Finding
from structures.intake.defaults import WORKS

STRIP_M: Final[float] = WORKS["strip_m"].value
LEAST_M: Final = 0.001  # a rest under a millimetre is rounding, no strip


@dataclass(frozen=True, slots=True)
class Strip:
    """Part of a wall from one offset to the next."""

    number: int
    from_m: float
    to_m: float

    def __post_init__(self) -> None:
        if self.to_m <= self.from_m:
            raise ValueError(f"strip {self.number} ends at {self.to_m:g} m, before its start")


def cut_strips(
    left_end_m: float, right_end_m: float, strip_m: float = STRIP_M
) -> tuple[Strip, ...]:
    """Cut a wall from its left end into strips of one length; the last one may be shorter.

    Ends between strips are rounded to the millimetre; those of the wall stay as they are.

    Raises
    ------
    ValueError
        If the wall or the strip has no length, or one of them is no number.
    """
    length_m = right_end_m - left_end_m
    if not (math.isfinite(length_m) and length_m > LEAST_M):
        raise ValueError(f"a wall from {left_end_m:g} to {right_end_m:g} m has no length")
    if not (math.isfinite(strip_m) and strip_m > LEAST_M):
        raise ValueError(f"a strip of {strip_m:g} m has no length")
    count = max(1, math.ceil((length_m - LEAST_M) / strip_m))
    inside = (round(left_end_m + strip_m * place, 3) for place in range(1, count))
    ends = (left_end_m, *inside, right_end_m)
    return tuple(Strip(number, ends[number - 1], ends[number]) for number in range(1, len(ends)))


def judge_found_rock(
    strip: int,
    found_m: float,
    low_m: float | None,
    high_m: float | None,
    over_percent: float | None = None,
) -> Finding | None:
    """Judge a level of rock found against the drawn range (rule HP-05); None where it fits.

    Below the range the finding blocks: the strip is halted. Above it the range was wrong as well,
    yet there is less to dig, and the level is held for a new drawing. `over_percent` is what the
    new estimate is over the sanction, None while it is not known.
    """
    where, field = f"strip {strip}", "found_rock"
    if low_m is None or high_m is None:
        what = f"Rock at {found_m:.2f} m cannot be judged: the drawn range is not known."
        return Finding(where, field, what, "Give the drawing its range of rock.", rule="HP-05")
    drawn = f"Rock at {found_m:.2f} m, drawn {low_m:.2f}\N{EN DASH}{high_m:.2f}."
    if found_m < low_m:
        estimate = "is not known yet" if over_percent is None else f"{over_percent:+.1f} %"
        what = f"{drawn} Strip halted, new estimate {estimate}."
        return Finding(where, field, what, "Option paper needed.", rule="HP-05")
    if found_m > high_m:
        remedy = "See whether it is a boulder; draw again with the level found."
        return Finding(where, field, f"{drawn} It stands higher.", remedy, "hold", "HP-05")
    return None
