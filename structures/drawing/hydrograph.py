"""Water levels of wells against time, with the rain that fell: gaps stay gaps, dry is a bound.

Several wells stand one below another on one axis of time, each on its own levels.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import date
from typing import TYPE_CHECKING, Final

from structures.drawing.letters import (
    PHONE_SMALL_MM,
    PHONE_TEXT_MM,
    SMALL_MM,
    TEXT_MM,
    width_mm,
)
from structures.drawing.scales import round_step
from structures.drawing.svg import Sheet

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

GAP_DAYS: Final = 62  # two months: a longer silence is a gap, not a line (look of the drawings)
LEAST_RISE_M: Final = 1.0  # [A] a quiet well is drawn on a metre of height
SANE_BELOW_M: Final = 0.5  # [A] below the bottom, or above the ground, a doubted level
SANE_ABOVE_M: Final = 2.0  # farther outside the well is not drawn
LEVEL_LINES: Final = 4
YEARS_FEW: Final = 4  # up to so many years months are told on the axis
DOT_MM: Final = 0.45
DRY_MM: Final = 1.1  # half the width of the open mark of a dry reading
LAST_MONTH: Final = 12


@dataclass(frozen=True, slots=True)
class Point:
    """One reading: its level, or of a dry well that of its bottom; `doubted` is not decided yet.

    `pumped` says that the water was not at rest.
    """

    day: date
    level_m: float
    dry: bool = False
    doubted: bool = False
    pumped: bool = False


@dataclass(frozen=True, slots=True)
class Track:
    """One well: its readings in the order of their days, its changed marks with the step in m."""

    code: str
    role: str
    points: tuple[Point, ...]
    marks: tuple[tuple[date, float | None], ...] = ()
    bottom_m: float | None = None
    ground_m: float | None = None


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    left_mm: float
    right_mm: float
    rain_mm: float
    well_mm: float
    text_mm: float
    small_mm: float
    css: str


WIDE: Final = Form(180.0, 15.0, 3.0, 16.0, 34.0, TEXT_MM, SMALL_MM, "dw-wide")
NARROW: Final = Form(97.0, 14.0, 2.0, 14.0, 36.0, PHONE_TEXT_MM, PHONE_SMALL_MM, "dw-narrow")
HEAD_MM: Final = 6.0  # room above the rain, and above each well for its name
FOOT_MM: Final = 12.0
LEAD_EM: Final = 1.5  # a line of words above everything, in heights of its letters


def draw_hydrograph(
    tracks: Sequence[Track],
    *,
    rain: Sequence[tuple[date, float | None]] = (),
    completed: date | None = None,
    first: date | None = None,
    last: date | None = None,
    name: str = "hydrograph",
    narrow: bool = False,
) -> str:
    """Draw a hydrograph as SVG markup for a page.

    Source: common practice of hydrographs; rain hangs from the top edge, time runs to the right.

    Parameters
    ----------
    tracks
        Wells, one below another.
    rain
        First day of a month and its rain in mm; None is not known and drawn as a gap.
    completed
        Day on which the wall was completed.
    first, last
        The time that is shown; from the first to the last of what is drawn where left out.
    narrow
        The telephone's sheet.

    Raises
    ------
    ValueError
        If no well is given.
    """
    if not tracks:
        raise ValueError("a hydrograph shows a well")
    form = NARROW if narrow else WIDE
    axis = _Axis(form, *_span(tracks, rain, completed, first, last))
    title = "Water levels of " + ", ".join(track.code for track in tracks)
    sheet = Sheet(name, form.width_mm, title, _describe(tracks, rain, completed), form.css)
    shown = completed is not None and axis.holds(completed)
    lead = LEAD_EM * form.text_mm if shown else 0.0
    top = _rain(sheet, axis, rain, lead) if rain else lead + 2.0
    bands = [
        _Band(axis, track, top + place * (form.well_mm + HEAD_MM))
        for place, track in enumerate(tracks)
    ]
    for band in bands:
        band.draw(sheet)
    foot = bands[-1].foot
    if shown:
        _completion(sheet, axis, completed, foot)
    sheet.height_mm = _time(sheet, axis, foot, key=_key_of(tracks))
    return sheet.markup()


def _span(
    tracks: Sequence[Track],
    rain: Sequence[tuple[date, float | None]],
    completed: date | None,
    first: date | None,
    last: date | None,
) -> tuple[date, date]:
    days = [point.day for track in tracks for point in track.points]
    days += [day for day, _ in rain] + ([completed] if completed else [])
    start = first or min(days, default=date(2000, 1, 1))
    stop = last or max(days, default=start)
    return start.replace(day=1), max(stop, date.fromordinal(start.toordinal() + 31))


class _Axis:
    """Where a day lies on the sheet."""

    def __init__(self, form: Form, first: date, last: date) -> None:
        self.form, self.first, self.last = form, first, last
        self.room = form.width_mm - form.left_mm - form.right_mm
        self.mm_per_day = self.room / max(1, last.toordinal() - first.toordinal())

    @property
    def right(self) -> float:
        return self.form.width_mm - self.form.right_mm

    def x(self, day: date) -> float:
        """Place of a day."""
        return self.form.left_mm + (day.toordinal() - self.first.toordinal()) * self.mm_per_day

    def holds(self, day: date) -> bool:
        """Whether a day is shown."""
        return self.first <= day <= self.last

    def years(self) -> Iterator[date]:
        """Give the first days of the years that are shown."""
        for year in range(self.first.year, self.last.year + 1):
            if self.holds(date(year, 1, 1)):
                yield date(year, 1, 1)


class _Band:
    """One well's part of the sheet."""

    def __init__(self, axis: _Axis, track: Track, top: float) -> None:
        self.axis, self.track, self.top = axis, track, top + HEAD_MM
        self.points = [one for one in track.points if axis.holds(one.day)]
        shown = [one.level_m for one in self.points if self._sane(one)]
        low, high = (min(shown), max(shown)) if shown else (0.0, LEAST_RISE_M)
        self.step = round_step(max(high - low, LEAST_RISE_M) / LEVEL_LINES)
        self.low = math.floor(low / self.step) * self.step
        self.high = max(math.ceil(high / self.step) * self.step, self.low + self.step)
        self.mm_per_m = axis.form.well_mm / (self.high - self.low)

    @property
    def foot(self) -> float:
        return self.top + self.axis.form.well_mm

    def _sane(self, one: Point) -> bool:
        """Tell whether a level is drawn: a doubted one far outside the well would squeeze it flat."""
        track = self.track
        if not one.doubted:
            return True
        low = -math.inf if track.bottom_m is None else track.bottom_m - SANE_BELOW_M
        high = math.inf if track.ground_m is None else track.ground_m + SANE_ABOVE_M
        return low <= one.level_m <= high

    def y(self, level_m: float) -> float:
        return self.foot - (level_m - self.low) * self.mm_per_m

    def draw(self, sheet: Sheet) -> None:
        axis, form = self.axis, self.axis.form
        sheet.text(
            (form.left_mm, self.top - 2.0), f"{self.track.code}, {self.track.role}", "strong"
        )
        for place in range(round((self.high - self.low) / self.step) + 1):
            level = self.low + place * self.step
            y = self.y(level)
            sheet.line((form.left_mm, y), (axis.right, y), "grid")
            decimals = 0 if self.step >= 1.0 else 1 if self.step >= 0.1 else 2
            sheet.text((form.left_mm - 1.2, y + 0.8), f"{level:.{decimals}f}", "end small")
        for year in axis.years():
            sheet.line((axis.x(year), self.top), (axis.x(year), self.foot), "frame")
        self._marks(sheet)
        self._line(sheet)
        self._dots(sheet)
        if not self.points:
            words = "not read in this time"
            sheet.text(
                ((form.left_mm + axis.right) / 2.0, self.foot - form.well_mm / 2.0),
                words,
                "mid quiet",
            )

    def _marks(self, sheet: Sheet) -> None:
        for day, step_m in self.track.marks:
            if not self.axis.holds(day):
                continue
            x = self.axis.x(day)
            sheet.line((x, self.top), (x, self.foot), "mark-change")
            words = "new mark" if step_m is None else f"mark {step_m:+.2f} m"
            size = self.axis.form.small_mm
            left = x + width_mm(words, size) + 1.0 > self.axis.right
            place = (x - 0.7 if left else x + 0.7, self.top + size)
            sheet.text(place, words, f"small halo t-doubt{' end' if left else ''}")

    def _line(self, sheet: Sheet) -> None:
        """Join neighbouring readings; a long silence, a dry or a doubted one breaks the line."""
        css = "level-a" if self.track.role != "control" else "level-c"
        run: list[tuple[float, float]] = []
        before: Point | None = None
        for one in self.points:
            if one.pumped and not one.dry:
                continue  # the water was drawn down: no part of how the well stood
            broken = one.dry or one.doubted
            far = before is not None and (one.day - before.day).days > GAP_DAYS
            if (broken or far) and run:
                if len(run) > 1:
                    sheet.path(run, css)
                run = []
            if not broken:
                run.append((self.axis.x(one.day), self.y(one.level_m)))
            before = one
        if len(run) > 1:
            sheet.path(run, css)

    def _dots(self, sheet: Sheet) -> None:
        css = "dot-a" if self.track.role != "control" else "dot-c"
        for one in self.points:
            if not self._sane(one):
                continue
            x, y = self.axis.x(one.day), self.y(one.level_m)
            if one.dry:
                # The water stands below: an open mark that points down from the bottom of the well.
                sheet.area([(x - DRY_MM, y), (x + DRY_MM, y), (x, y + 1.6 * DRY_MM)], "dry")
            elif one.pumped:
                for rise in (-DOT_MM, DOT_MM):
                    sheet.line((x - DOT_MM, y - rise), (x + DOT_MM, y + rise), "p1")
            elif one.doubted:
                sheet.circle((x, y), 1.6 * DOT_MM, "obs")
            else:
                sheet.circle((x, y), DOT_MM, css)


def _rain(
    sheet: Sheet, axis: _Axis, rain: Sequence[tuple[date, float | None]], lead: float
) -> float:
    """Hang the months' rain from the top edge; gives where the wells begin."""
    form = axis.form
    known = [mm for day, mm in rain if mm is not None and axis.holds(day)]
    step = round_step(max([*known, 10.0]) / 2.0)
    top_mm = math.ceil(max([*known, step]) / step) * step
    scale = form.rain_mm / top_mm
    top = lead + HEAD_MM - 1.0
    sheet.text((0.4, lead + 3.0), "rain, mm a month", "small quiet")
    sheet.line((form.left_mm, top), (axis.right, top), "p1")
    for place in range(1, round(top_mm / step) + 1):
        y = top + place * step * scale
        sheet.line((form.left_mm, y), (axis.right, y), "grid")
        sheet.text((form.left_mm - 1.2, y + 0.8), f"{place * step:g}", "end small")
    for day, mm in rain:
        if not axis.holds(day):
            continue
        left = axis.x(day)
        width = min(axis.x(_next_month(day)), axis.right) - left
        if width <= 0.0:
            continue
        if mm is None:
            sheet.rect((left, top), width, form.rain_mm, "gap-wash")
        elif mm > 0.0:
            sheet.rect((left + 0.1 * width, top), 0.8 * width, mm * scale, "rain")
    return top + form.rain_mm


def _next_month(day: date) -> date:
    if day.month == LAST_MONTH:
        return date(day.year + 1, 1, 1)
    return date(day.year, day.month + 1, 1)


def _completion(sheet: Sheet, axis: _Axis, completed: date, foot: float) -> None:
    """Draw the day of completion through all wells, its words on a line of their own above them."""
    x = axis.x(completed)
    sheet.line((x, 1.0), (x, foot), "event")
    words = f"wall completed {completed:%d %b %Y}"
    left = x + width_mm(words, axis.form.text_mm) + 2.0 > axis.right
    place = (x - 0.8 if left else x + 0.8, 1.1 * axis.form.text_mm)
    sheet.text(place, words, f"halo strong{' end' if left else ''}")


def _time(sheet: Sheet, axis: _Axis, foot: float, *, key: list[str]) -> float:
    """Write years, and months where there is room; gives the height of the sheet."""
    form = axis.form
    sheet.line((form.left_mm, foot), (axis.right, foot), "p2")
    years = axis.last.year - axis.first.year + 1
    every = max(1, math.ceil(years * 2.2 * form.small_mm / axis.room))
    for year in range(axis.first.year, axis.last.year + 1):
        start = max(date(year, 1, 1), axis.first)
        if year % every and years > YEARS_FEW:
            continue
        x = axis.x(start)
        sheet.line((x, foot), (x, foot + 1.4), "p2")
        room = axis.x(min(date(year + 1, 1, 1), axis.last)) - x
        if room > width_mm(f"{year}", form.small_mm):
            sheet.text((x + 0.5, foot + 4.0), f"{year}", "small")
    if years <= YEARS_FEW:
        day = axis.first
        while day <= axis.last:
            sheet.line((axis.x(day), foot), (axis.x(day), foot + 0.8), "p1")
            day = _next_month(day)
    y = foot + 8.2
    x = form.left_mm
    for words in key:
        if x + width_mm(words, form.small_mm) > axis.right and x > form.left_mm:
            x, y = form.left_mm, y + 1.6 * form.small_mm
        sheet.text((x, y), words, "small quiet")
        x += width_mm(words, form.small_mm) + 4.0
    return y + FOOT_MM - 9.0


def _key_of(tracks: Sequence[Track]) -> list[str]:
    points = [one for track in tracks for one in track.points]
    key = ["levels in m; no line across more than two months"]
    if any(one.dry for one in points):
        key.append("open mark down: dry, water below")
    if any(one.pumped for one in points):
        key.append("cross: pump running or just stopped")
    if any(one.doubted for one in points):
        key.append("ring: raw value, not decided")
    return key


def _describe(
    tracks: Sequence[Track], rain: Sequence[tuple[date, float | None]], completed: date | None
) -> str:
    parts = []
    for track in tracks:
        wet = [one.level_m for one in track.points if not (one.dry or one.doubted or one.pumped)]
        dry = sum(one.dry for one in track.points)
        if not wet:
            parts.append(f"{track.code}: {dry} dry readings, none with a level at rest.")
            continue
        reach = f"{track.points[0].day} to {track.points[-1].day}"
        parts.append(
            f"{track.code} ({track.role}), {reach}: {min(wet):.2f} to {max(wet):.2f} m, {dry} dry."
        )
    if rain:
        parts.append("Rain of months hangs from the top edge.")
    if completed is not None:
        parts.append(f"The wall was completed on {completed}.")
    return " ".join(parts)
