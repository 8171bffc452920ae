"""One reading against its well: range, step, unit, sign, mark and clock, each with what is suggested.

A doubt never changes a value. It says what was sent, what may have been meant, and by which rule.
"""

from __future__ import annotations

from bisect import bisect_left, insort
from dataclasses import dataclass, field
from datetime import date, timedelta
from functools import partial
from itertools import pairwise
from statistics import quantiles
from typing import TYPE_CHECKING, Final

from structures.intake.doubt import Doubt
from structures.intake.fields import DEPTH_MOST_M
from structures.intake.reading_checks import JUMP_FROM, JUMP_LEAST_M, JUMP_TIMES, ZERO_BESIDE_M
from structures.units import FOOT_M
from structures.water.marks import level_below_m, mark_on, moved_m

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from datetime import datetime

    from structures.water.marks import Mark

BELOW_BOTTOM_M: Final = 0.1  # LV-02
SILTED_M: Final = 0.2  # LV-06
WET_MONTHS: Final = 5  # of the water year, in which a well may stand at its mark (LV-07) [A]
AGREE_M: Final = 0.02  # LV-17
MONTHS: Final = 12
CENTIMETRE_M: Final = 0.01  # exact
SLIPS: Final = (
    (FOOT_M, "LV-10", "{raw:g} fits if it is feet ({fits:.2f} m)."),
    (CENTIMETRE_M, "LV-10", "{raw:g} fits if it is centimetres ({fits:.2f} m)."),
    (0.1, "LV-08", "{raw:g} fits if the decimal point slipped ({fits:.2f} m)."),
    (10.0, "LV-08", "{raw:g} fits if the decimal point slipped ({fits:.2f} m)."),
)
UNIT_REMEDY: Final = "Which tape was used? Decide."


@dataclass(frozen=True, slots=True)
class WellFacts:
    """What a reading of a well is held against; None is not known."""

    code: str
    marks: tuple[Mark, ...]
    ground_level_m: float | None = None
    bottom_below_ground_m: float | None = None
    existed_from: date | None = None
    water_year_month: int = 6

    def bottom_below_mark_m(self, mark: Mark | None) -> float | None:
        """Depth of the bottom below a mark; None where bottom or height is not known."""
        if mark is None or self.bottom_below_ground_m is None:
            return None
        height = mark.height_above_ground_m
        if height is None and None not in (mark.level_m, self.ground_level_m):
            height = mark.level_m - self.ground_level_m
        return None if height is None else self.bottom_below_ground_m + height


@dataclass(frozen=True, slots=True)
class Sent:
    """A reading as it was sent; `read_at` on the clock of the place, `again_m` the second reading."""

    read_at: datetime
    state: str
    dry: bool
    depth_m: float | None
    mark: str | None = None
    again_m: float | None = None


@dataclass(frozen=True, slots=True)
class Expected:
    """Levels that would not surprise, after the last reading before; `usual_m` is a great move."""

    low_m: float
    high_m: float
    last_day: date
    last_m: float
    usual_m: float

    def holds(self, level_m: float) -> bool:
        """Whether a level would not surprise."""
        return self.low_m <= level_m <= self.high_m


@dataclass(slots=True)
class Past:
    """Levels of one well that count, wet and static, in the order of their days."""

    rows: list[tuple[date, float]] = field(default_factory=list)
    _usual: dict[int, float | None] = field(default_factory=dict)
    _gap_days: int = 0

    def add(self, day: date, level_m: float) -> None:
        """Put one more in its place; what is usual stays as it was when it was first asked."""
        insort(self.rows, (day, level_m))

    def usual_m(self, month: int) -> float | None:
        """Move that three in four stay under, in and beside that month; None with too few readings.

        Source: rule LV-08; what is usual is a choice of this project.
        """
        if month not in self._usual:
            moves = [
                (later[0].month, abs(later[1] - earlier[1]))
                for earlier, later in pairwise(self.rows)
            ]
            near = [move for at, move in moves if (at - month) % MONTHS in {0, 1, MONTHS - 1}]
            if len(near) < JUMP_FROM:
                near = [move for _, move in moves]
            enough = len(near) + 1 >= JUMP_FROM
            self._usual[month] = quantiles(near, n=4)[-1] if enough else None
        return self._usual[month]

    def expected(self, day: date) -> Expected | None:
        """Levels to expect on a day; None where too little was read before."""
        place = bisect_left(self.rows, (day, float("-inf")))
        usual_m = self.usual_m(day.month)
        if place == 0 or usual_m is None:
            return None
        last_day, last_m = self.rows[place - 1]
        longer = max(1.0, (day - last_day).days / self.gap_days)
        reach_m = JUMP_TIMES * max(usual_m, JUMP_LEAST_M) * longer
        return Expected(last_m - reach_m, last_m + reach_m, last_day, last_m, usual_m)

    @property
    def gap_days(self) -> int:
        """Middle time between readings, a day or more."""
        if not self._gap_days:
            days = [(later[0] - earlier[0]).days for earlier, later in pairwise(self.rows)]
            self._gap_days = max(1, sorted(days)[len(days) // 2])
        return self._gap_days

    @property
    def middle_m(self) -> float | None:
        """Middle level of all of them."""
        levels = sorted(level for _, level in self.rows)
        return levels[len(levels) // 2] if levels else None


def mark_used(sent: Sent, well: WellFacts) -> Mark | None:
    """Give the mark that counts on the day of a reading, whatever mark it names."""
    return mark_on(well.marks, sent.read_at.date())


def doubts_of(sent: Sent, well: WellFacts, past: Past, *, now: datetime) -> tuple[Doubt, ...]:
    """Hold one reading against its well.

    Source: field practice, rules LV-01 to LV-03, LV-05 to LV-11 and LV-17.

    Parameters
    ----------
    past
        Readings of the well that count already.
    now
        What counts as now in the district, on the clock of the place.
    """
    mark = mark_used(sent, well)
    found = [*_clock(sent, well, now), *_mark(sent, well, mark)]
    if sent.depth_m is not None:
        if sent.depth_m < 0.0:
            found.append(_negative(sent.depth_m))
        elif sent.dry:
            found += _dry(sent.depth_m, well, mark)
        else:
            found += _depth(sent, well, mark, past)
    found += _again(sent)
    return tuple(found)


def _clock(sent: Sent, well: WellFacts, now: datetime) -> Iterable[Doubt]:
    day = sent.read_at.date()
    early = well.existed_from is not None and day < well.existed_from
    if sent.read_at <= now + timedelta(minutes=5) and not early:
        return
    swapped = _day_month_swapped(sent.read_at)
    fits = swapped is not None and swapped <= now
    if early:
        what = f"Reading dated {day}; {well.code} was there from {well.existed_from} on."
    else:
        what = f"Reading dated {sent.read_at:%Y-%m-%d %H:%M}, which is still to come."
    remedy = f"Day and month changed places ({swapped:%Y-%m-%d})?" if fits else "Phone clock?"
    yield Doubt(
        "LV-11",
        "read_at",
        "hold",
        what,
        f"{remedy} Decide.",
        sent.read_at.isoformat(timespec="minutes"),
        swapped.isoformat(timespec="minutes") if fits else "",
    )


def _day_month_swapped(read_at: datetime) -> datetime | None:
    if read_at.day > MONTHS or read_at.day == read_at.month:
        return None
    return read_at.replace(month=read_at.day, day=read_at.month)


def _mark(sent: Sent, well: WellFacts, mark: Mark | None) -> Iterable[Doubt]:
    day, named = sent.read_at.date(), sent.mark
    say = partial(Doubt, "LV-03", "mark", "hold")
    if mark is None:
        what = f"{well.code} has no measuring point on {day}."
        yield say(what, "Enter it, then the level follows.", named or "")
    elif named is not None and named != mark.mark:
        known = next((one for one in well.marks if one.mark == named), None)
        if known is None:
            what = f"{well.code} has no mark {named}; {mark.mark} is in use."
        elif known.valid_to is not None and known.valid_to < day:
            what = f"The reading names mark {named}, which ended on {known.valid_to}."
            what += f" Since then {mark.mark} is in use{_higher(known, mark)}."
        else:
            what = f"The reading names mark {named}; on {day} {mark.mark} was in use."
        yield say(what, "Suggested mark beside it; decide.", named, mark.mark)


def _higher(old: Mark, new: Mark) -> str:
    step_m = moved_m(old, new)
    if step_m is None:
        return ""
    return f" ({abs(step_m):.2f} m {'higher' if step_m > 0 else 'lower'})"


def _negative(depth_m: float) -> Doubt:
    what = f"{depth_m:g} m is above the mark."
    remedy = 'Flowing well? Then tick "flowing". Else leave the minus out.'
    return Doubt("LV-01", "depth_m", "block", what, remedy, f"{depth_m:g}", f"{-depth_m:g}")


def _dry(depth_m: float, well: WellFacts, mark: Mark | None) -> Iterable[Doubt]:
    bottom = well.bottom_below_mark_m(mark)
    if bottom is not None and depth_m < bottom - SILTED_M:
        what = f"Dry at {depth_m:.2f} m but the bottom is {bottom:.2f} m."
        remedy = "Silted up? Sound the bottom."
        yield Doubt("LV-06", "depth_m", "hold", what, remedy, f"{depth_m:g}")
    else:
        what = f"{well.code} dry: level is deeper than {depth_m:.2f} m."
        yield Doubt("LV-05", "dry", "note", what, "It counts as a bound, not as a depth.")


def _depth(sent: Sent, well: WellFacts, mark: Mark | None, past: Past) -> Iterable[Doubt]:
    depth_m = sent.depth_m
    raw = f"{depth_m:g}"
    say = partial(Doubt, field="depth_m", level="hold", raw=raw)
    bottom = well.bottom_below_mark_m(mark)
    expected = past.expected(sent.read_at.date())
    too_deep = depth_m > (DEPTH_MOST_M if bottom is None else bottom + BELOW_BOTTOM_M)
    level_m = level_below_m(depth_m, mark)
    if depth_m == 0.0 and _dry_season(sent.read_at.date(), well) and _mostly_deep(past, mark):
        what = f"0 m in {sent.read_at:%B}. Zero means water at the mark."
        yield say("LV-07", what=what, remedy="Blank typed as zero? Decide.")
        return
    surprises = expected is not None and level_m is not None and not expected.holds(level_m)
    if not too_deep and not surprises:
        return
    # A level below the mark and a depth below it are the same difference, so one is the other.
    if too_deep and level_m is not None and _inside(level_m, bottom, expected, mark):
        what = f"{raw} looks like a level, not a depth. As a depth it would be {level_m:.2f} m."
        yield say("LV-09", what=what, remedy="Decide.", suggested=f"{level_m:.2f}")
        return
    for factor, rule, words in SLIPS:
        fits = depth_m * factor
        if _fits(fits, bottom, expected, mark):
            what = words.format(raw=depth_m, fits=fits)
            yield say(rule, what=what, remedy=UNIT_REMEDY, suggested=f"{fits:.2f}")
            return
    if too_deep:
        below = "any well here" if bottom is None else f"the bottom of {well.code} ({bottom:.2f} m)"
        yield say("LV-02", what=f"{raw} m is below {below}.", remedy="Feet? Wrong well? Decide.")
        return
    days = (sent.read_at.date() - expected.last_day).days
    what = (
        f"{well.code} moved {level_m - expected.last_m:+.2f} m in {days} days; "
        f"a great move for it is {expected.usual_m:.2f} m."
    )
    yield say("LV-08", what=what, remedy="Decimal slip, wrong well, pump on? Decide.")


def _dry_season(day: date, well: WellFacts) -> bool:
    return (day.month - well.water_year_month) % MONTHS >= WET_MONTHS


def _mostly_deep(past: Past, mark: Mark | None) -> bool:
    middle = past.middle_m
    if middle is None or mark is None or mark.level_m is None:
        return True
    return mark.level_m - middle > ZERO_BESIDE_M


def _inside(
    depth_m: float, bottom: float | None, expected: Expected | None, mark: Mark | None
) -> bool:
    """Whether a depth lies inside the well; where the past speaks, also where it is expected."""
    if not 0.0 <= depth_m <= (DEPTH_MOST_M if bottom is None else bottom + BELOW_BOTTOM_M):
        return False
    level_m = level_below_m(depth_m, mark)
    return expected is None or level_m is None or expected.holds(level_m)


def _fits(
    depth_m: float, bottom: float | None, expected: Expected | None, mark: Mark | None
) -> bool:
    """Whether a slip explains a depth: only what was read before can say so."""
    level_m = level_below_m(depth_m, mark)
    if expected is None or level_m is None or not _inside(depth_m, bottom, expected, mark):
        return False
    return abs(level_m - expected.last_m) <= max(expected.usual_m, JUMP_LEAST_M) * 2.0


def _again(sent: Sent) -> Iterable[Doubt]:
    if sent.again_m is None or sent.depth_m is None:
        return
    apart_m = abs(sent.again_m - sent.depth_m)
    if round(apart_m, 6) > AGREE_M:
        what = f"The two readings differ {apart_m:.2f} m."
        yield Doubt("LV-17", "depth_m", "note", what, "Wait and read again.")


def held(doubts: Sequence[Doubt]) -> tuple[Doubt, ...]:
    """Give the doubts that keep a reading out of comparisons until somebody decides."""
    return tuple(one for one in doubts if one.level == "hold")
