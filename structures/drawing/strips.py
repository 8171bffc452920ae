"""The wall cut into strips: ground and rock as drawn, rock as found, and where each strip stands."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.letters import PHONE_SMALL_MM, PHONE_TEXT_MM, SMALL_MM, TEXT_MM
from structures.drawing.scales import round_step
from structures.drawing.svg import Sheet

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.drawing.svg import Point

LEVEL_LINES: Final = 5  # lines of level on the sheet, about
TOP_MM: Final = 9.0  # room for the numbers of the strips
FOOT_MM: Final = 13.0
LEAST_RISE_M: Final = 1.0  # [A] a flat bed is drawn on a metre of height
TICK_MM: Final = 1.6  # half the length of a level that was found
TURNED_MM: Final = 12.0  # in a narrower strip the word stands upright
WORDS: Final = {"not begun": "", "open": "open", "halted": "halted", "covered": "covered"}


@dataclass(frozen=True, slots=True)
class StripDrawn:
    """One strip: its ends, where it stands, whether something of it was covered unseen."""

    number: int
    from_m: float
    to_m: float
    stands: str
    unseen: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class StripsView:
    """What is drawn: ground and rock line, shapes (n,) and (m,), strips, levels of rock found."""

    site: str
    ground_offset_m: NDArray[np.float64]
    ground_m: NDArray[np.float64]
    rock_offset_m: NDArray[np.float64]
    rock_m: NDArray[np.float64]
    strips: tuple[StripDrawn, ...]
    found: tuple[tuple[float, float], ...] = ()

    def __post_init__(self) -> None:
        if not self.strips:
            raise ValueError("there is no strip to draw")


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    left_mm: float
    height_mm: float
    text_mm: float
    small_mm: float
    css: str


WIDE: Final = Form(180.0, 16.0, 52.0, TEXT_MM, SMALL_MM, "dw-wide")
NARROW: Final = Form(97.0, 14.0, 52.0, PHONE_TEXT_MM, PHONE_SMALL_MM, "dw-narrow")


def draw_strips(view: StripsView, *, name: str = "strips", narrow: bool = False) -> str:
    """Draw the strips of a wall as SVG markup for a page.

    Source: common drafting practice; looking downstream, left bank at the left.

    Parameters
    ----------
    name
        Keeps the ids of several drawings on one page apart.
    narrow
        The telephone's sheet.

    Raises
    ------
    ValueError
        If the name cannot be part of an id.
    """
    form = NARROW if narrow else WIDE
    frame = _Frame(form, view)
    title = f"{view.site}: strips of the wall, looking downstream"
    sheet = Sheet(
        f"{name}-narrow" if narrow else name, form.width_mm, title, describe(view), form.css
    )
    _earth(sheet, frame, view)
    _levels(sheet, frame)
    for strip in view.strips:
        _strip(sheet, frame, strip)
    for offset_m, level_m in view.found:
        x, y = frame.place(offset_m, level_m)
        sheet.line((x - TICK_MM, y), (x + TICK_MM, y), "rock-casing")
        sheet.line((x - TICK_MM, y), (x + TICK_MM, y), "rock-seen")
    sheet.height_mm = _foot(sheet, frame)
    return sheet.markup()


def describe(view: StripsView) -> str:
    """Say in words what the drawing shows, for those who cannot see it."""
    said = [
        f"Strip {one.number} from {one.from_m:.2f} to {one.to_m:.2f} m: {one.stands}"
        + (", covered unseen." if one.unseen else ".")
        for one in view.strips
    ]
    if view.found:
        lowest = min(level for _, level in view.found)
        said.append(f"Rock found at {len(view.found)} places, lowest at {lowest:.2f} m.")
    return " ".join((*said, "The same values stand in the table below."))


class _Frame:
    """Where an offset and a level lie on the sheet."""

    def __init__(self, form: Form, view: StripsView) -> None:
        self.form = form
        self.first_m, self.last_m = view.strips[0].from_m, view.strips[-1].to_m
        over = (self.last_m - self.first_m) * 0.03  # a little of both banks stands beside the wall
        self.first_m, self.last_m = self.first_m - over, self.last_m + over
        ends = np.array([self.first_m, self.last_m])
        places = np.concatenate(
            [
                ends,
                *(
                    one[(one > self.first_m) & (one < self.last_m)]
                    for one in (view.ground_offset_m, view.rock_offset_m)
                ),
            ]
        )
        self.offset_m = np.unique(places)
        self.ground_m = np.interp(self.offset_m, view.ground_offset_m, view.ground_m)
        self.rock_m = np.minimum(
            np.interp(self.offset_m, view.rock_offset_m, view.rock_m), self.ground_m
        )
        lowest = min([float(self.rock_m.min()), *(level for _, level in view.found)]) - 0.3
        rise_m = max(float(self.ground_m.max()) - lowest, LEAST_RISE_M)
        self.step_m = round_step(rise_m / LEVEL_LINES)
        self.low_m = math.floor(lowest / self.step_m) * self.step_m
        self.high_m = math.ceil(float(self.ground_m.max()) / self.step_m) * self.step_m
        room = form.width_mm - form.left_mm - 2.0
        self.mm_per_m = room / (self.last_m - self.first_m)
        self.rise_mm_per_m = form.height_mm / (self.high_m - self.low_m)

    @property
    def foot(self) -> float:
        """Lower edge of the section."""
        return TOP_MM + self.form.height_mm

    def place(self, offset_m: float, level_m: float) -> Point:
        """Give the place of a point in millimetres."""
        return (
            self.form.left_mm + (offset_m - self.first_m) * self.mm_per_m,
            self.foot - (level_m - self.low_m) * self.rise_mm_per_m,
        )

    def line(self, level_m: NDArray[np.float64]) -> list[Point]:
        """Give the places of a line over the whole width."""
        return [self.place(*pair) for pair in zip(self.offset_m, level_m, strict=True)]


def _earth(sheet: Sheet, frame: _Frame, view: StripsView) -> None:
    ground, rock = frame.line(frame.ground_m), frame.line(frame.rock_m)
    left, right = ground[0][0], ground[-1][0]
    sheet.area([*ground, (right, frame.foot), (left, frame.foot)], "sand-wash")
    below = [*rock, (right, frame.foot), (left, frame.foot)]
    sheet.area(below, "rock-wash")
    sheet.hatch(below, "rock")
    for strip in view.strips:
        if strip.stands == "covered":
            _fill(sheet, frame, strip)
    sheet.path(rock, "rock-read")
    sheet.path(ground, "ground")


def _fill(sheet: Sheet, frame: _Frame, strip: StripDrawn) -> None:
    """Clay where a strip is built, from the drawn rock to the ground."""
    inside = (frame.offset_m > strip.from_m) & (frame.offset_m < strip.to_m)
    x = np.concatenate([[strip.from_m], frame.offset_m[inside], [strip.to_m]])
    upper = [
        frame.place(a, b)
        for a, b in zip(x, np.interp(x, frame.offset_m, frame.ground_m), strict=True)
    ]
    lower = [
        frame.place(a, b)
        for a, b in zip(x, np.interp(x, frame.offset_m, frame.rock_m), strict=True)
    ]
    sheet.area([*upper, *lower[::-1]], "clay")
    sheet.hatch([*upper, *lower[::-1]], "clay")


def _levels(sheet: Sheet, frame: _Frame) -> None:
    for place in range(round((frame.high_m - frame.low_m) / frame.step_m) + 1):
        level_m = frame.low_m + place * frame.step_m
        left, y = frame.place(frame.first_m, level_m)
        sheet.line((left, y), (frame.place(frame.last_m, level_m)[0], y), "grid")
        sheet.text((left - 1.5, y + 0.8), f"{level_m:g}", "end small")
    sheet.text((0.4, 3.0), "level m", "small quiet")


def _strip(sheet: Sheet, frame: _Frame, strip: StripDrawn) -> None:
    left, _ = frame.place(strip.from_m, frame.low_m)
    right, _ = frame.place(strip.to_m, frame.low_m)
    pen = "change" if strip.stands == "halted" or strip.unseen else "p2"
    for x in (left, right):
        sheet.line((x, TOP_MM - 1.0), (x, frame.foot), "p1")
    if strip.stands in ("open", "halted"):
        sheet.rect((left, TOP_MM - 1.0), right - left, 1.0, "fill-ink")
    middle = (left + right) / 2
    sheet.text((middle, TOP_MM - 2.6), str(strip.number), "mid strong")
    word = "unseen" if strip.unseen else WORDS[strip.stands]
    if word:
        style = "mid small t-stop halo" if pen == "change" else "mid small halo"
        turned = right - left < TURNED_MM
        place = (middle + (0.8 if turned else 0.0), frame.foot - 2.0)
        sheet.text(
            place, word, style.replace("mid ", "") if turned else style, turn=-90 if turned else 0
        )


def _foot(sheet: Sheet, frame: _Frame) -> float:
    """Draw the offsets below the section; gives the height of the sheet."""
    y, step_m = frame.foot, round_step((frame.last_m - frame.first_m) / 6.0)
    sheet.line(
        frame.place(frame.first_m, frame.low_m), frame.place(frame.last_m, frame.low_m), "p2"
    )
    place = math.ceil(frame.first_m / step_m)
    while place * step_m <= frame.last_m:
        x, _ = frame.place(place * step_m, frame.low_m)
        sheet.line((x, y), (x, y + 1.2), "p2")
        sheet.text((x, y + 4.4), f"{place * step_m:g}", "mid small")
        place += 1
    times = frame.rise_mm_per_m / frame.mm_per_m
    words = f"offset m, looking downstream; heights {times:.1f} times; firm: rock as found"
    sheet.text((frame.form.left_mm, y + 9.2), words, "small quiet")
    return y + FOOT_MM
