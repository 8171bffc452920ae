"""The frame of a section: where an offset and a level lie on the sheet, wide or narrow."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.letters import (
    PHONE_SMALL_MM,
    PHONE_TEXT_MM,
    SMALL_MM,
    TEXT_MM,
    width_mm,
    wrap_mm,
)
from structures.drawing.places import Box, Places
from structures.drawing.scales import Scales, choose_scales, round_step

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.drawing.svg import Point, Sheet
    from structures.drawing.view import SectionView

LOWEST_ROCK: Final = "rock, lowest"  # the longest word beside a level
LEVEL_SPACE_MM: Final = 4.0  # between the section and the levels read off
STAFF_BOX_MM: Final = 3.0  # least height of a box of the level staff
STAFF_SPACE_MM: Final = 1.2  # between its numbers and the staff, and the edge of the sheet
STAFF_NUMBER_MM: Final = 6.0  # least distance of its numbers
END_WORDS_MM: Final = 26.0  # width of "end 105.00 m," with its distance from the line
FOOT_MARK_MM: Final = 2.8  # arrow or black foot below the end of a test


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    left_mm: float
    room_mm: float
    height_mm: float
    least_mm: float
    text_mm: float
    small_mm: float
    step_mm: float
    foot_mm: float
    staff_mm: float
    level_gap_mm: float
    css: str


# A4 between margins of 15 mm, and a telephone's column.
WIDE: Final = Form(180, 16, 136, 56, 45, TEXT_MM, SMALL_MM, 3.5, 14, 5.0, 3.7, "dw-wide")
NARROW: Final = Form(
    97, 12, 68, 52, 40, PHONE_TEXT_MM, PHONE_SMALL_MM, 4.2, 7, 3.4, 7.2, "dw-narrow"
)


@dataclass(frozen=True, slots=True)
class Frame:
    """Where things lie on the sheet; x to the right, y downwards, in millimetres."""

    form: Form
    scales: Scales
    first_m: float
    last_m: float
    low_m: float
    high_m: float
    step_m: float
    left: float
    top_mm: float

    @property
    def narrow(self) -> bool:
        """Is this the narrow sheet."""
        return self.form is NARROW

    @property
    def right(self) -> float:
        """Right edge of the section."""
        return float(self.x(self.last_m))

    @property
    def foot(self) -> float:
        """Lower edge of the section."""
        return float(self.y(self.low_m))

    def x(self, offset_m: NDArray | float) -> NDArray:
        """Place of an offset."""
        return self.left + (np.asarray(offset_m) - self.first_m) * self.scales.mm_per_m

    def y(self, level_m: NDArray | float) -> NDArray:
        """Place of a level."""
        return self.top_mm + (self.high_m - np.asarray(level_m)) * self.scales.rise_mm_per_m

    def points(self, offset_m: NDArray, level_m: NDArray) -> list[Point]:
        """Places of a line."""
        return list(zip(self.x(offset_m).tolist(), self.y(level_m).tolist(), strict=True))

    def point(self, offset_m: float, level_m: float) -> Point:
        """Place of one point."""
        return float(self.x(offset_m)), float(self.y(level_m))


@dataclass(frozen=True, slots=True)
class Board:
    """All that the parts of a drawing share: the sheet, what is drawn, where, and what is taken."""

    sheet: Sheet
    view: SectionView
    frame: Frame
    places: Places

    def ground_y(self, x_mm: float) -> float:
        """Height of the ground line at a place on the sheet."""
        frame = self.frame
        offset = frame.first_m + (x_mm - frame.left) / frame.scales.mm_per_m
        return float(frame.y(self.view.ground(offset)))


def make_frame(view: SectionView, form: Form) -> Frame:
    """Choose scales and the range of levels; the top edge lies at 0 until the header is known.

    Source: common drafting practice; room below the lowest thing drawn is kept for the words about
    the ends and for the length of the wall.
    """
    first, last = view.reach
    highest, lowest = float(view.ground_m.max()), _lowest_m(view)
    numbers = width_mm(f"{highest:.1f}", form.small_mm) + form.staff_mm + STAFF_SPACE_MM
    left = max(form.left_mm, numbers)
    words = f"{highest:.2f}" if form is NARROW else f"{highest:.2f} {LOWEST_ROCK}"
    right = form.width_mm - width_mm(words, form.text_mm) - LEVEL_SPACE_MM - 0.2
    room = min(form.room_mm, right - left)
    scales = choose_scales(last - first, highest - lowest, room, form.height_mm)
    rise = scales.rise_mm_per_m
    step = round_step(STAFF_BOX_MM / rise)
    high = math.ceil(highest / step - 1e-9) * step
    below = _foot_mm(view, form, scales) + FOOT_MARK_MM
    low = min(lowest - below / rise, high - form.least_mm / rise)
    low = math.floor(low / step) * step
    return Frame(form, scales, first, last, low, high, step, left, 0.0)


def _lowest_m(view: SectionView) -> float:
    """Lowest level that is drawn: ground, rock with its range, key, feet of the tests."""
    levels = [float(view.ground_m.min()) - 0.5]  # half a metre of ground where nothing is known
    if view.water_m is not None:
        levels.append(view.water_m)
    levels += [float(view.ground(test.offset_m)) - test.foot_m for test in view.tests]
    if view.rock is not None:
        low = view.rock.level_m if view.rock.low_m is None else view.rock.low_m
        levels.append(float(low.min()))
    if view.wall is not None and len(view.wall.rock_m):
        levels.append(float(view.wall.rock_m.min()) - view.wall.key_m)
    if view.built is not None and view.built.wall is not None and len(view.built.wall.rock_m):
        levels.append(float(view.built.wall.rock_m.min()) - view.built.wall.key_m)
    return min(levels)


def _foot_mm(view: SectionView, form: Form, scales: Scales) -> float:
    """Room under everything; one line of words more where both ends' words cannot stand abreast."""
    wall = view.wall
    if wall is None or form is NARROW:
        return form.foot_mm
    left, right = wall.ends_m
    inside = (right - left) * scales.mm_per_m >= 2.0 * END_WORDS_MM
    outside = min(left - view.reach[0], view.reach[1] - right) * scales.mm_per_m >= END_WORDS_MM
    return form.foot_mm + (0.0 if inside or outside else 2.0 * form.step_mm)


def make_places(frame: Frame) -> Places:
    """Begin with what the level staff and its numbers take."""
    form = frame.form
    limits = Box(0.0, -math.inf, form.width_mm, math.inf)
    places = Places(limits, form.text_mm, form.step_mm)
    places.take(Box(0.0, frame.top_mm - 6.0, frame.left - form.staff_mm + 1.8, frame.foot))
    return places


def under(frame: Frame, top_mm: float) -> Frame:
    """Move the frame down on its sheet."""
    return replace(frame, top_mm=top_mm)


def header(sheet: Sheet, view: SectionView, frame: Frame) -> None:
    """Write the site, the two banks and the way one looks."""
    form = frame.form
    y = form.step_mm
    for line in site_lines(view, form):
        sheet.text((0.4, y), line, "strong")
        y += form.step_mm
    y += 1.6
    left, right, middle = "Left bank", "Right bank", "looking downstream"
    edge = max(frame.right, frame.left + bank_row_mm(form))
    sheet.text((frame.left, y), left, "strong")
    sheet.text((edge, y), right, "strong end")
    sheet.text(((frame.left + edge) / 2.0, y), middle, "quiet mid")


def bank_row_mm(form: Form) -> float:
    """Least width of the line that names the banks."""
    words = width_mm("Left bank Right bank", form.text_mm, strong=True)
    return words + width_mm("  looking downstream  ", form.text_mm)


def header_mm(view: SectionView, form: Form) -> float:
    """Room that the header takes."""
    return form.step_mm * (len(site_lines(view, form)) + 1) + 2.6


def site_lines(view: SectionView, form: Form) -> list[str]:
    """Give code and name of the site in as many lines as they need."""
    return wrap_mm(view.site, 0.88 * form.width_mm, form.text_mm)  # bold letters are wider


def staff(sheet: Sheet, frame: Frame) -> None:
    """Draw the level scale as a levelling staff, with its numbers at a round step."""
    x, step = frame.left - frame.form.staff_mm, frame.step_m
    boxes = round((frame.high_m - frame.low_m) / step)
    first = round(frame.low_m / step)
    for place in range(boxes):
        top = frame.y((first + place + 1) * step)
        on = " staff-on" if (first + place) % 2 == 0 else ""
        height = step * frame.scales.rise_mm_per_m
        sheet.rect((x, float(top)), 1.6, height, f"staff{on}")
    number = round_step(STAFF_NUMBER_MM / frame.scales.rise_mm_per_m)
    decimals = 0 if number >= 1.0 else math.ceil(-math.log10(number))
    for place in range(math.ceil(frame.low_m / number), math.floor(frame.high_m / number) + 1):
        y = float(frame.y(place * number)) + 0.9
        sheet.text((x - 0.8, y), f"{place * number:.{decimals}f}", "end small")
    sheet.text((0.4, float(frame.y(frame.high_m)) - 2.6), "level m", "small quiet")
