"""The dry-season clock: the last day on which a trench may be opened, and how many are left.

Source: the office's practice, "the dry-season clock": last opening day = early date of first flow
- days needed - reserve. What is missing gives "cannot be computed", never a far date.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, timedelta
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.life.first_flow import EarlyFlow, years_known

if TYPE_CHECKING:
    from collections.abc import Sequence

ALLOWANCE: Final = (
    "In one year of ten the stream came before this allowance; the daily look and the watch "
    "upstream still decide."
)
TOO_LATE: Final = "too late by {days}: do not open this season"


@dataclass(frozen=True, slots=True)
class Plan:
    """What a place needs; None is not known.

    `days_needed` and `days_needed_deep` are whole days with the likely rock and with rock at the
    deep limit; `reserve_days` is the office's, with what an uncertain rock adds to it.
    """

    early_flow: EarlyFlow | None
    days_needed: int | None
    reserve_days: int | None
    days_needed_deep: int | None = None

    def __post_init__(self) -> None:
        for days in (self.days_needed, self.days_needed_deep, self.reserve_days):
            if days is not None and days < 0:
                raise ValueError(f"{days} days cannot be needed")


@dataclass(frozen=True, slots=True)
class Clock:
    """One line of the clock, as of a day.

    `words` is the sentence of the line; `notes` stand beside it. `deep_short` is how many days are
    missing with rock at the deep limit, 0 for none, None where it is not known. `late_and_open`
    is the loudest thing there is.
    """

    today: date
    last_opening_day: date | None
    days_left: int | None
    words: str
    notes: tuple[str, ...]
    deep_short: int | None = None
    late_and_open: bool = False

    def order(self) -> tuple[int, int]:
        """Sort key: open and late, too late, not known, then fewest days left."""
        if self.days_left is None:
            return (2, 0)
        if self.days_left < 0:
            return (0 if self.late_and_open else 1, self.days_left)
        return (3, self.days_left)


def last_opening_day(plan: Plan) -> date | None:
    """Give the last day on which the trench may be opened; None where something is not known."""
    if plan.early_flow is None or plan.days_needed is None or plan.reserve_days is None:
        return None
    return plan.early_flow.on - timedelta(days=plan.days_needed + plan.reserve_days)


def read_clock(plan: Plan, today: date, *, trench_open: bool = False) -> Clock:
    """Read the clock of one place on a day."""
    last = last_opening_day(plan)
    if last is None or plan.early_flow is None:
        words = f"cannot be computed: {', '.join(_not_known(plan))}"
        return Clock(today, None, None, words, (ALLOWANCE,))
    left = (last - today).days
    notes = [ALLOWANCE]
    if plan.early_flow.too_few:
        known = years_known(plan.early_flow.years)
        notes.append(f"Only {known}: the earliest first flow counts.")
    late_and_open = trench_open and left < 0
    words = _words(left, last)
    if late_and_open:
        words = f"open {_days(-left)} after the last opening day: close it"
    deep_short = None
    if plan.days_needed_deep is not None and plan.days_needed is not None:
        deep_short = max(0, plan.days_needed_deep - plan.days_needed - left)
        if deep_short and left >= 0:
            notes.append(_deep(deep_short))
    return Clock(today, last, left, words, tuple(notes), deep_short, late_and_open)


def judge_opening(site: str, clock: Clock) -> tuple[Finding, ...]:
    """Give what stands against opening a trench on the clock's day: SG-01, SG-02."""
    if clock.days_left is None:
        what = f"The last opening day {clock.words}."
        return (Finding(site, "last_opening_day", what, "Enter what is missing.", rule="SG-01"),)
    if clock.days_left < 0:
        what = f"Too late by {_days(-clock.days_left)} for {site}."
        remedy = "Do not open this season."
        return (Finding(site, "last_opening_day", what, remedy, rule="SG-01"),)
    if clock.deep_short:
        remedy = "Open earlier, or work with more gangs."
        what = _deep(clock.deep_short)
        return (Finding(site, "days_needed_deep", what, remedy, "warn", "SG-02"),)
    return ()


def in_order(clocks: Sequence[Clock]) -> tuple[Clock, ...]:
    """Sort clocks as the first screen shows them; what is too late stays on top."""
    return tuple(sorted(clocks, key=Clock.order))


def _not_known(plan: Plan) -> list[str]:
    lacks = (
        ("the days of first flow are not known", plan.early_flow),
        ("the days needed are not known", plan.days_needed),
        ("the reserve is not known", plan.reserve_days),
    )
    return [words for words, value in lacks if value is None]


def _words(left: int, last: date) -> str:
    if left < 0:
        return TOO_LATE.format(days=_days(-left))
    if left == 0:
        return "today is the last opening day"
    return f"{_days(left)} left, last opening day {last.isoformat()}"


def _deep(short: int) -> str:
    verb = "is" if short == 1 else "are"
    return f"With rock at the deep limit {_days(short)} {verb} missing."


def _days(count: int) -> str:
    return "1 day" if count == 1 else f"{count} days"
