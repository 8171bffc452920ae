"""The look into an open trench, each day before anybody goes in, and the reasons to stop.

Source: the office's practice, rules TR-01 to TR-04; handbook section 11. The answer is never that
a trench is safe: it is that a stop was found, that none was found, or that nobody looked.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.intake.defaults import FIXED, LEAST_SLOPE, WORKS

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date, datetime

NO_STOP: Final = "no stop found"
STOP: Final = "stop"
NOT_LOOKED: Final = "not looked"
WORDS: Final[dict[str, str]] = {  # of the results, as pages print them
    NO_STOP: "no stop found",
    STOP: "stop: nobody goes in",
    NOT_LOOKED: "not looked",
}
SPOIL_LEAST_M: Final[float] = FIXED["spoil_least_m"].value  # from the edge
SPOIL_DEPTH_SHARE: Final[float] = FIXED["spoil_depth_share"].value  # of the depth, where farther
LADDER_WITHIN_M: Final = 7.6  # 25 ft of way, handbook 11 (P 13)


def spoil_distance_m(depth_m: float) -> float:
    """Least distance of spoil and machines from the edge of a trench. Source: handbook 11, 12.

    Raises
    ------
    ValueError
        If the depth is negative.
    """
    if depth_m < 0:
        raise ValueError(f"a trench is not {depth_m:g} m deep")
    return max(SPOIL_LEAST_M, SPOIL_DEPTH_SHARE * depth_m)


@dataclass(frozen=True, slots=True)
class Asked:
    """What is asked of a trench: the flattest of drawing and rule, and the depth of ways out."""

    slope: float = LEAST_SLOPE  # across per 1 up, as drawn; steeper only by a signed design
    ladder_from_m: float = WORKS["depth_without_entry_m"].value


@dataclass(frozen=True, slots=True)
class Look:
    """What somebody saw; None is not answered. `result` is what they ticked.

    `ladder_within_m` is the farthest way to a ladder. `rain_since_last` tells of rain or a rise of
    the stream before this look, which this look answers.
    """

    day: date
    at: datetime
    result: str
    depth_m: float | None = None
    slope_as_cut: float | None = None
    spoil_back_m: float | None = None
    ladder_within_m: float | None = None
    crack: bool | None = None
    sides: str = ""
    water: str = ""
    rain_since_last: bool | None = None


@dataclass(frozen=True, slots=True)
class Judged:
    """What a look comes to: one of the three results, and why."""

    result: str
    findings: tuple[Finding, ...] = ()

    @property
    def words(self) -> str:
        """Give the result as a page prints it."""
        return WORDS[self.result]


def judge_look(look: Look, asked: Asked, where: str = "trench") -> Judged:
    """Judge what was seen. A stop somebody ticked stays one; a blank is never "no stop found".

    Raises
    ------
    ValueError
        If the result ticked is none of the three.
    """
    if look.result not in WORDS:
        raise ValueError(f"there is no result {look.result!r}")
    if look.result == NOT_LOOKED:
        return Judged(NOT_LOOKED, (_not_looked(where),))
    stops = (*_sides(look, asked, where), *_edge(look, asked, where))
    if look.result == STOP:
        what = "Whoever looked says stop. Nobody goes in."
        ticked = Finding(where, "result", what, "Mend the cause, then look again.")
        return Judged(STOP, (*stops, ticked))
    if stops:
        return Judged(STOP, stops)
    blanks = tuple(
        Finding(where, field, f"{words} is blank.", "Look and write it down; nobody goes in.")
        for field, words in _blanks(look, asked)
    )
    return Judged(NOT_LOOKED if blanks else NO_STOP, blanks)


def judge_entry(
    looks: Iterable[Look],
    now: datetime,
    today: date,
    *,
    asked: Asked,
    rained_at: datetime | None = None,
    alarm_set: bool | None = None,
    where: str = "trench",
) -> Judged:
    """Judge whether there is a reason why nobody may go in now (rules TR-01, TR-02).

    `rained_at` is when it last rained there or the stream rose, None where nobody reported any;
    `alarm_set` None is not known and stops. Looks written for later than now do not count.
    """
    if alarm_set is not False:
        what = (
            "A forecast or a stream alarm is set. Nobody goes in."
            if alarm_set
            else "Cannot be judged: whether a forecast or a stream alarm is set. Nobody goes in."
        )
        return Judged(STOP, (Finding(where, "alarm", what, "Ask the watch upstream."),))
    of_today = [look for look in looks if look.day == today and look.at <= now]
    if not of_today:
        return Judged(NOT_LOOKED, (_not_looked(where),))
    newest = max(of_today, key=lambda look: look.at)
    if rained_at is not None and newest.at <= rained_at <= now:
        what = f"It rained at {rained_at:%H:%M}, or the stream rose."
        remedy = "Nobody goes in until the trench was looked at again."
        return Judged(STOP, (Finding(where, "rain", what, remedy, rule="TR-02"),))
    return judge_look(newest, asked, where)


def _not_looked(where: str) -> Finding:
    return Finding(where, "look", "No trench look today.", "Nobody goes in.", rule="TR-01")


def _sides(look: Look, asked: Asked, where: str) -> list[Finding]:
    found = []
    if look.crack:
        what = "There is a crack or a bulge."
        remedy = "Nobody goes in; keep off the edge and call the engineer."
        found.append(Finding(where, "crack", what, remedy))
    if look.slope_as_cut is not None and look.slope_as_cut < asked.slope:
        what = f"Sides are cut {look.slope_as_cut:g} across to 1 up, {asked.slope:g} is asked for."
        remedy = "Nobody goes in until they are flattened from above."
        found.append(Finding(where, "slope_as_cut", what, remedy))
    return found


def _edge(look: Look, asked: Asked, where: str) -> list[Finding]:
    found, depth_m = [], look.depth_m
    least_m = spoil_distance_m(depth_m or 0.0)
    if look.spoil_back_m is not None and look.spoil_back_m < least_m:
        what = f"Spoil is {look.spoil_back_m:g} m from the edge; {least_m:g} m is asked for here."
        remedy = "Nobody goes in until it is moved back."
        found.append(Finding(where, "spoil_back_m", what, remedy, rule="TR-03"))
    deep = depth_m is not None and depth_m >= asked.ladder_from_m
    if deep and look.ladder_within_m is not None and look.ladder_within_m > LADDER_WITHIN_M:
        what = f"Nearest ladder {look.ladder_within_m:g} m."
        remedy = "Nobody goes in until another stands."
        found.append(Finding(where, "ladder_within_m", what, remedy, rule="TR-04"))
    return found


def _blanks(look: Look, asked: Asked) -> list[tuple[str, str]]:
    """Give what has to be answered before "no stop found" may stand: (field, words)."""
    shallow = look.depth_m is not None and look.depth_m < asked.ladder_from_m
    questions = (
        ("depth_m", "The depth", look.depth_m is not None),
        ("slope_as_cut", "The slope as cut", look.slope_as_cut is not None),
        ("spoil_back_m", "The distance of the spoil", look.spoil_back_m is not None),
        ("ladder_within_m", "The way out", shallow or look.ladder_within_m is not None),
        ("crack", "Whether there is a crack", look.crack is not None),
        ("sides", "What the sides do", bool(look.sides.strip())),
        ("water", "Where water stands", bool(look.water.strip())),
        ("rain_since_last", "Whether it rained since", look.rain_since_last is not None),
    )
    return [(field, words) for field, words, answered in questions if not answered]
