"""From evidence to one of four verdicts, by a written rule with a version.

A wall without readings is not a wall that holds: every verdict starts at not known, and only
readings move it from there.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Literal

RULE: Final = "2026.12-1"
Verdict = Literal["not known", "does not hold", "holds in part", "holds"]
VERDICTS: Final[tuple[Verdict, ...]] = ("not known", "does not hold", "holds in part", "holds")


@dataclass(frozen=True, slots=True)
class Limits:
    """What the rule asks for: least effect that matters, full water years and pairs a side."""

    least_effect_m: float
    least_full_years: int
    least_pairs: int


@dataclass(frozen=True, slots=True)
class Measured:
    """A gain of affected against control wells with its interval, and what it rests on.

    A gain that was not measured is None.
    """

    gain_m: float | None
    low_m: float | None
    high_m: float | None
    smallest_seen_m: float | None
    pairs: tuple[int, int]
    full_years: tuple[int, int]
    controls: int

    def __post_init__(self) -> None:
        _insist_order(self.low_m, self.gain_m, self.high_m)


@dataclass(frozen=True, slots=True)
class Head:
    """Head across the wall, now against before, with its range; None is not known.

    `spread_m` is how far heads lay apart before; a gain below it would not show. `pairs` and
    `full_years` are those after completion.
    """

    gain_m: float | None
    low_m: float | None
    high_m: float | None
    spread_m: float | None
    pairs: int
    full_years: int

    def __post_init__(self) -> None:
        _insist_order(self.low_m, self.gain_m, self.high_m)


@dataclass(frozen=True, slots=True)
class Forecast:
    """What a flow model said before the wall was built: the gain it expected, with its range."""

    low_m: float
    high_m: float


@dataclass(frozen=True, slots=True)
class Suggestion:
    """A verdict with its reasons in plain words; an engineer signs it, the rule does not."""

    verdict: Verdict
    reasons: tuple[str, ...]
    rule: str = RULE


def from_readings(wells: Measured, limits: Limits) -> Suggestion:
    """Suggest a verdict from the readings of wells alone.

    Source: handbook 10.11.
    """
    if not wells.controls:
        return Suggestion("not known", ("No control well: rain and wall cannot be told apart.",))
    return _from_gain(wells, limits)


def judge(
    head: Head | None,
    wells: Measured | None,
    limits: Limits,
    *,
    forecast: Forecast | None = None,
) -> Suggestion:
    """Suggest a verdict from all evidence: head across the wall, then wells, then a forecast.

    Source: handbook 10.11, "the head across the wall comes before"; order of evidence decided for
    this project. The head leads where it is known, and wells that disagree lower a verdict or
    unsettle it, never raise it. A forecast is no reading: it moves no verdict, it only says
    whether what was measured was expected.

    Parameters
    ----------
    head
        Of the pipes on the two faces of the wall; None where none stand there.
    wells
        Affected against control wells; None where none were read.
    """
    by_wells = from_readings(wells, limits) if wells else _nothing("No well was read.")
    by_head = _from_head(head, limits) if head else _nothing("Head across the wall was not read.")
    verdict, why = _together(by_head.verdict, by_wells.verdict)
    reasons = [*by_head.reasons, *by_wells.reasons, *why]
    if forecast is not None:
        reasons.append(_forecast_words(forecast, wells))
    return Suggestion(verdict, tuple(reasons))


def _together(head: Verdict, wells: Verdict) -> tuple[Verdict, tuple[str, ...]]:
    if head == "not known":
        return wells, ()
    if wells in {"not known", head}:
        return head, ()
    if head == "does not hold":
        words = "The wells rose, but no more water stands against the wall: look for another cause."
        return head, (words,)
    if wells == "does not hold":
        words = "More water stands against the wall, but the wells of the reach do not show it."
        return "holds in part", (words,)
    words = "Head and wells differ in how much; the lesser of the two is taken."
    return min(head, wells, key=VERDICTS.index), (words,)


def _from_head(head: Head, limits: Limits) -> Suggestion:
    who = "The head across the wall"
    if head.full_years < limits.least_full_years or head.pairs < limits.least_pairs:
        return _nothing(
            f"{who}: {head.full_years} full water years and {head.pairs} readings of both pipes "
            f"after completion; {limits.least_full_years} and {limits.least_pairs} are needed."
        )
    if head.gain_m is None:
        return _nothing(f"{who}: how high it stood before is not known.")
    return _weighed(head, head.spread_m, limits, f"{who} grew by")


def _from_gain(gain: Measured, limits: Limits) -> Suggestion:
    reason = _too_little(gain, limits)
    if reason:
        return _nothing(f"Wells in the reach: {reason}")
    return _weighed(gain, gain.smallest_seen_m, limits, "Wells in the reach gained")


def _weighed(
    gain: Measured | Head, smallest_m: float | None, limits: Limits, who: str
) -> Suggestion:
    seen = f"{who} {_range(gain)}"
    least = f"{limits.least_effect_m:g} m, the least that matters"
    if gain.low_m >= limits.least_effect_m:
        return Suggestion("holds", (f"{seen}; even the low end reaches {least}.",))
    if gain.low_m > 0.0:
        return Suggestion("holds in part", (f"{seen}; the low end does not reach {least}.",))
    seen += ", which reaches down to no gain"
    if smallest_m is not None and smallest_m <= limits.least_effect_m:
        return Suggestion("does not hold", (f"{seen}; {least}, would have been seen.",))
    smallest = "" if smallest_m is None else f" ({smallest_m:.2f} m would have been seen)"
    return _nothing(f"{seen}; {least}, could have been missed{smallest}.")


def _too_little(gain: Measured, limits: Limits) -> str:
    before, after = gain.full_years
    if min(before, after) < limits.least_full_years:
        return (
            f"{before} full water years before completion and {after} after; "
            f"{limits.least_full_years} are needed on each side."
        )
    before, after = gain.pairs
    if min(before, after) < limits.least_pairs:
        return (
            f"{before} pairs before completion and {after} after; "
            f"{limits.least_pairs} are needed on each side."
        )
    return "nothing was measured." if gain.gain_m is None else ""


def _forecast_words(forecast: Forecast, wells: Measured | None) -> str:
    said = f"The flow model expected {forecast.low_m:.2f} to {forecast.high_m:.2f} m"
    if wells is None or wells.gain_m is None:
        return f"{said}; a forecast is no reading and moves no verdict."
    if wells.high_m < forecast.low_m:
        return f"{said}; the wells gained less."
    if wells.low_m > forecast.high_m:
        return f"{said}; the wells gained more."
    return f"{said}; the wells agree with it."


def _insist_order(low_m: float | None, gain_m: float | None, high_m: float | None) -> None:
    ends = (low_m, gain_m, high_m)
    if None in ends:
        if any(end is not None for end in ends):
            raise ValueError("a gain has both ends of its interval or is not known")
    elif not low_m <= gain_m <= high_m:
        raise ValueError(f"{gain_m} lies outside {low_m} to {high_m}")


def _range(gain: Measured | Head) -> str:
    middle, low, high = (
        f"{round(one, 2) + 0.0:.2f}" for one in (gain.gain_m, gain.low_m, gain.high_m)
    )
    return f"{middle} m ({low} to {high})"


def _nothing(reason: str) -> Suggestion:
    return Suggestion("not known", (reason,))
