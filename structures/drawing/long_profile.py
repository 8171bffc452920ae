"""The bed along a stream with its sites: levels against the way downstream, what was levelled only."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from structures.drawing.letters import PHONE_SMALL_MM, PHONE_TEXT_MM, SMALL_MM, TEXT_MM
from structures.drawing.places import Box, Label, Places
from structures.drawing.scales import round_step
from structures.drawing.svg import Sheet

if TYPE_CHECKING:
    from collections.abc import Sequence

LEVEL_LINES: Final = 5  # lines of level on the sheet, about
TOP_MM: Final = 14.0  # room for the names over the bed
FOOT_MM: Final = 12.0
KM_M: Final = 1000.0  # exact
LEAST_RISE_M: Final = 1.0  # [A] a flat bed is drawn on a metre of height


@dataclass(frozen=True, slots=True)
class Reach:
    """The bed at one site: its place on the way downstream, and what was levelled about it.

    `points` are distance upstream of the site (minus downstream) and bed level, rising distances.
    """

    code: str
    at_m: float
    points: tuple[tuple[float, float], ...]

    @property
    def bed(self) -> tuple[tuple[float, float], ...]:
        """Points as place on the way downstream and level, from upstream to downstream."""
        return tuple((self.at_m - up_m, level_m) for up_m, level_m in reversed(self.points))


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    left_mm: float
    height_mm: float
    text_mm: float
    small_mm: float
    css: str


WIDE: Final = Form(180.0, 16.0, 50.0, TEXT_MM, SMALL_MM, "dw-wide")
NARROW: Final = Form(97.0, 14.0, 50.0, PHONE_TEXT_MM, PHONE_SMALL_MM, "dw-narrow")


def draw_profile(
    reaches: Sequence[Reach],
    stream: str,
    *,
    along_course: bool = False,
    name: str = "profile",
    narrow: bool = False,
) -> str:
    """Draw the bed along a stream as SVG markup for a page.

    Source: common drafting practice: a long section, heights drawn larger, water going right.

    Parameters
    ----------
    reaches
        Sites in order downstream, each with two levelled points or more.
    stream
        Its name.
    along_course
        Whether the way is measured along the stream's course; else straight from site to site.
    name
        Keeps ids apart on one page.
    narrow
        The telephone's sheet.

    Raises
    ------
    ValueError
        If no site is given, or one without two points.
    """
    if not reaches or any(len(one.points) < 2 for one in reaches):
        raise ValueError("a profile has sites with two levelled points or more")
    form = NARROW if narrow else WIDE
    frame = _Frame(form, reaches)
    sheet = Sheet(name, form.width_mm, f"Bed of {stream}", _describe(reaches, stream), form.css)
    _levels(sheet, frame)
    places = Places(
        Box(form.left_mm, 0.0, form.width_mm, TOP_MM + form.height_mm),
        form.text_mm,
        form.text_mm * 1.3,
    )
    for reach in reaches:
        line = [frame.place(*point) for point in reach.bed]
        sheet.path(line, "ground")
        for (x1, y1), (x2, y2) in pairwise(line):
            places.take(Box(x1, min(y1, y2) - 0.6, x2, max(y1, y2) + 0.6))
    for reach in reaches:
        _site(sheet, places, frame, reach)
    sheet.height_mm = _foot(sheet, frame, along_course=along_course)
    return sheet.markup()


class _Frame:
    """Where a place on the way and a level lie on the sheet."""

    def __init__(self, form: Form, reaches: Sequence[Reach]) -> None:
        ways, levels = zip(*(point for one in reaches for point in one.bed), strict=True)
        self.form = form
        self.first_m, self.last_m = min(ways), max(ways)
        rise_m = max(max(levels) - min(levels), LEAST_RISE_M)
        self.step_m = round_step(rise_m / LEVEL_LINES)
        self.low_m = math.floor(min(levels) / self.step_m) * self.step_m
        self.high_m = math.ceil(max(levels) / self.step_m) * self.step_m
        self.high_m = max(self.high_m, self.low_m + self.step_m)
        room = form.width_mm - form.left_mm - 4.0
        self.mm_per_m = room / (self.last_m - self.first_m)
        self.rise_mm_per_m = form.height_mm / (self.high_m - self.low_m)

    @property
    def foot(self) -> float:
        """Lower edge of the section."""
        return TOP_MM + self.form.height_mm

    def place(self, way_m: float, level_m: float) -> tuple[float, float]:
        """Give the place of a point in millimetres."""
        return (
            self.form.left_mm + (way_m - self.first_m) * self.mm_per_m,
            self.foot - (level_m - self.low_m) * self.rise_mm_per_m,
        )


def _levels(sheet: Sheet, frame: _Frame) -> None:
    count = round((frame.high_m - frame.low_m) / frame.step_m)
    for place in range(count + 1):
        level_m = frame.low_m + place * frame.step_m
        left, y = frame.place(frame.first_m, level_m)
        sheet.line((left, y), (frame.place(frame.last_m, level_m)[0], y), "grid")
        sheet.text((left - 1.5, y + 0.8), f"{level_m:g}", "end small")
    sheet.text((0.4, 3.0), "bed level m", "small quiet")


def _site(sheet: Sheet, places: Places, frame: _Frame, reach: Reach) -> None:
    ups = [up_m for up_m, _ in reach.points]
    nearest = min(range(len(ups)), key=lambda place: abs(ups[place]))
    x, y = frame.place(reach.at_m, reach.points[nearest][1])
    sheet.line((x, y), (x, y - 3.0), "p3")
    label = places.put(
        Label(x + dx, y - dy, (reach.code,), "mid", strong=True)
        for dy in (3.8, 7.0, 10.0)
        for dx in (0.0, 4.0, -4.0, 7.0, -7.0)
    )
    if label is not None:
        sheet.text((label.x, label.y), reach.code, "mid halo strong")


def _foot(sheet: Sheet, frame: _Frame, *, along_course: bool) -> float:
    """Draw the way downstream below the section; gives the height of the sheet."""
    y = frame.foot
    step_m = round_step((frame.last_m - frame.first_m) / 5.0)
    sheet.line(
        frame.place(frame.first_m, frame.low_m), frame.place(frame.last_m, frame.low_m), "p2"
    )
    place = 0
    while place * step_m <= frame.last_m - frame.first_m + 1e-9:
        x, _ = frame.place(frame.first_m + place * step_m, frame.low_m)
        sheet.line((x, y), (x, y + 1.2), "p2")
        sheet.text((x, y + 4.4), f"{place * step_m / KM_M:g}", "mid small")
        place += 1
    times = frame.rise_mm_per_m / frame.mm_per_m
    way = "along the course" if along_course else "straight from site to site"
    words = f"km downstream, {way}; heights {times:.0f} times"
    sheet.text((frame.form.left_mm, y + 9.0), words, "small quiet")
    return y + FOOT_MM


def _describe(reaches: Sequence[Reach], stream: str) -> str:
    parts = [f"{one.code} from {one.bed[0][1]:.2f} to {one.bed[-1][1]:.2f} m" for one in reaches]
    return f"Bed of {stream}, water going right. Levelled about {'; '.join(parts)}."
