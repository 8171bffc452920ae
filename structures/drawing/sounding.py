"""A sounding as readings, computed line and layers, log-log, as one SVG sheet.

Decades are equal both ways, so that slopes can be judged. Nothing is shifted by hand: where MN was
changed the computed line breaks. Below, on the same axis, the layers with the range of the rock.
Two sheets of one drawing: wide for paper and screen, narrow for a telephone; a page shows one.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.letters import (
    PHONE_SMALL_MM,
    PHONE_TEXT_MM,
    SMALL_MM,
    TEXT_MM,
    shorten,
    width_mm,
    wrap_mm,
)
from structures.drawing.svg import Sheet

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.drawing.sounding_view import SoundingView

TOP_MM: Final = 13.0
TALLEST_MM: Final = 75.0  # the curve's part; decades grow smaller where it would be taller
STEPS_MM: Final = 25.0  # height of the layers' part
ROUND: Final = (1.0, 2.0, 5.0)  # numbers written in each decade
SHAPES: Final = ("circle", "square", "triangle")  # one a segment of MN, in turn


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    left_mm: float
    right_mm: float
    text_mm: float
    small_mm: float
    step_mm: float
    css: str


WIDE: Final = Form(120.0, 17.0, 8.0, TEXT_MM, SMALL_MM, 3.6, "dw-wide")
NARROW: Final = Form(97.0, 15.0, 6.0, PHONE_TEXT_MM, PHONE_SMALL_MM, 4.4, "dw-narrow")


@dataclass(frozen=True, slots=True)
class LogFrame:
    """Where a spacing, depth or resistivity lies on the sheet."""

    form: Form
    least_m: float
    most_m: float
    least_ohm_m: float
    most_ohm_m: float
    decade_mm: float

    def x(self, metres: NDArray | float) -> NDArray:
        """Place of a half spacing or a depth."""
        return self.form.left_mm + np.log10(np.asarray(metres) / self.least_m) * self.decade_mm

    def y(self, ohm_m: NDArray | float) -> NDArray:
        """Place of an apparent resistivity."""
        return TOP_MM + np.log10(self.most_ohm_m / np.asarray(ohm_m)) * self.decade_mm

    @property
    def left(self) -> float:
        """Left edge."""
        return self.form.left_mm

    @property
    def right(self) -> float:
        """Right edge."""
        return float(self.x(self.most_m))

    @property
    def foot(self) -> float:
        """Lower edge of the curve's part."""
        return float(self.y(self.least_ohm_m))


def draw_sounding(view: SoundingView, *, name: str = "sounding", narrow: bool = False) -> str:
    """Draw one sounding as SVG markup for a page.

    Source: standard practice of sounding curves (double logarithmic paper, equal decades).

    Parameters
    ----------
    view
        Readings, computed line, layers and rock.
    name
        Keeps the ids of several drawings on one page apart.
    narrow
        The sheet for a telephone.

    Raises
    ------
    ValueError
        If the name cannot be part of an id.
    """
    frame = _frame(view, NARROW if narrow else WIDE)
    form = frame.form
    title = f"Sounding {view.label}: readings, computed line and layers"
    sheet = Sheet(name, form.width_mm, title, _describe(view), form.css)
    label = shorten(f"Sounding {view.label}", form.width_mm - 1.0, form.text_mm, strong=True)
    sheet.text((0.4, 3.6), label, "strong")
    _paper(sheet, frame)
    _curve(sheet, view, frame)
    y = frame.foot + 6.4 + 2.0 * form.small_mm
    if view.resistivity_ohm_m.size:
        y = _layers(sheet, view, frame, y)
    y = _rock_words(sheet, view, form, y)
    sheet.height_mm = round(_key(sheet, view, form, y) + 2.0, 2)
    return sheet.markup()


def _frame(view: SoundingView, form: Form) -> LogFrame:
    """Round the axes outward to 1, 2 or 5 and give both the same decade."""
    depths = [view.ab2_m.min(), view.ab2_m.max(), *view.bottom_m]
    depths += [d for d in (view.rock_low_m, view.rock_high_m) if d is not None]
    curves = [*view.ends_ohm_m]
    if view.computed_ohm_m is not None:
        curves.append(view.computed_ohm_m)
    values = np.concatenate(curves)
    least_m, most_m = _round_out(min(depths), max(depths))
    least, most = _round_out(float(values.min()), float(values.max()))
    across = (form.width_mm - form.left_mm - form.right_mm) / np.log10(most_m / least_m)
    decade_mm = min(across, TALLEST_MM / np.log10(most / least))
    return LogFrame(form, least_m, most_m, least, most, decade_mm)


def _round_out(least: float, most: float) -> tuple[float, float]:
    steps = _steps(least / 10.0, most * 10.0)
    low = max(step for step in steps if step <= least * (1 - 1e-9))
    return low, min(step for step in steps if step >= most * (1 + 1e-9))


def _steps(least: float, most: float) -> list[float]:
    """Give 1, 2, 5 of every decade between two values."""
    decades = range(int(np.floor(np.log10(least))), int(np.ceil(np.log10(most))) + 1)
    steps = [digit * 10.0**decade for decade in decades for digit in ROUND]
    return [step for step in steps if least * (1 - 1e-9) <= step <= most * (1 + 1e-9)]


def _paper(sheet: Sheet, frame: LogFrame) -> None:
    """Grid lines at the numbers, ticks between them, axes with units."""
    for value in _steps(frame.least_ohm_m, frame.most_ohm_m):
        y = float(frame.y(value))
        sheet.line((frame.left, y), (frame.right, y), "grid")
        sheet.text((frame.left - 1.4, y + 0.9), f"{value:g}", "end small")
    for value in _steps(frame.least_m, frame.most_m):
        x = float(frame.x(value))
        sheet.line((x, TOP_MM), (x, frame.foot), "grid")
        sheet.text((x, frame.foot + 1.9 + frame.form.small_mm), f"{value:g}", "mid small")
    first = int(np.floor(np.log10(frame.least_m)))
    for power in range(first, int(np.ceil(np.log10(frame.most_m)))):
        for digit in range(1, 10):
            if frame.least_m <= digit * 10.0**power <= frame.most_m:
                x = float(frame.x(digit * 10.0**power))
                sheet.line((x, frame.foot), (x, frame.foot + 0.9), "p1")
    sheet.line((frame.left, TOP_MM), (frame.left, frame.foot), "p2")
    sheet.line((frame.left, frame.foot), (frame.right, frame.foot), "p2")
    sheet.text((0.4, TOP_MM - 4.0), "apparent resistivity ohm m", "small quiet")
    words = "half current spacing AB/2 m; below: depth m"
    across = max(frame.right, 0.4 + width_mm(words, frame.form.small_mm))
    sheet.text((across, frame.foot + 3.4 + 2.0 * frame.form.small_mm), words, "small quiet end")


def _curve(sheet: Sheet, view: SoundingView, frame: LogFrame) -> None:
    low, high = view.ends_ohm_m
    for place, part in enumerate(view.segments):
        if view.computed_ohm_m is not None:
            line = zip(frame.x(view.ab2_m[part]), frame.y(view.computed_ohm_m[part]), strict=True)
            sheet.path(list(line), "p3")
        for index in part:
            x = float(frame.x(view.ab2_m[index]))
            ends = float(frame.y(low[index])), float(frame.y(high[index]))
            sheet.line((x, ends[0]), (x, ends[1]), "p1")
            for y in ends:
                sheet.line((x - 0.9, y), (x + 0.9, y), "p1")
            _mark(sheet, x, float(frame.y(view.observed_ohm_m[index])), place)


def _mark(sheet: Sheet, x: float, y: float, segment: int) -> None:
    shape = SHAPES[segment % len(SHAPES)]
    if shape == "circle":
        sheet.circle((x, y), 0.6, "obs")
    elif shape == "square":
        sheet.rect((x - 0.55, y - 0.55), 1.1, 1.1, "obs")
    else:
        sheet.area([(x, y - 0.85), (x + 0.75, y + 0.5), (x - 0.75, y + 0.5)], "obs")


def _layers(sheet: Sheet, view: SoundingView, frame: LogFrame, top: float) -> float:
    """Draw the layers as steps of resistivity over depth; gives the lower edge."""
    foot = top + STEPS_MM
    low, high = _round_out(view.resistivity_ohm_m.min(), view.resistivity_ohm_m.max())
    scale = (STEPS_MM - 4.0) / np.log10(high / low)
    heights = (foot - np.log10(view.resistivity_ohm_m / low) * scale).tolist()
    if view.rock_low_m is not None and view.rock_high_m is not None:
        left, right = float(frame.x(view.rock_low_m)), float(frame.x(view.rock_high_m))
        sheet.rect((left, top), right - left, STEPS_MM, "band-solid")
        for x in (left, right):
            sheet.line((x, top), (x, foot), "band-edge")
    edges = [frame.left, *frame.x(view.bottom_m).tolist(), frame.right]
    trail = [
        (min(max(x, frame.left), frame.right), y)
        for place, y in enumerate(heights)
        for x in edges[place : place + 2]
    ]
    sheet.path(trail, "p5")
    for place, (y, ohm_m) in enumerate(zip(heights, view.resistivity_ohm_m, strict=True)):
        words = three_figures(float(ohm_m))
        room = edges[place + 1] - edges[place] >= width_mm(words, frame.form.text_mm) + 1.6
        x = edges[place] + 0.8 if room else (edges[place] + edges[place + 1]) / 2
        sheet.text((x, y - 1.2), words, "halo" if room else "halo mid")
    sheet.line((frame.left, top), (frame.left, foot), "p2")
    sheet.line((frame.left, foot), (frame.right, foot), "p2")
    small_mm = frame.form.small_mm
    for place, words in enumerate(wrap_mm("layers ohm m", frame.left - 1.5, small_mm)):
        sheet.text((0.4, top + 2.0 + place * 1.3 * small_mm), words, "small quiet")
    return foot


def three_figures(value: float) -> str:
    """Write a value with three figures that count, never with a power of ten."""
    places = max(0, 2 - math.floor(math.log10(abs(value))))
    return f"{float(f'{value:.3g}'):.{places}f}"


def _rock_words(sheet: Sheet, view: SoundingView, form: Form, y: float) -> float:
    """Say the depth of the rock with its range, or why there is none; gives the lower edge."""
    if view.rock_depth_m is None:
        words = f"No depth of rock: {view.refusal}"
    else:
        words = (
            f"Rock at {view.rock_depth_m:.1f} m, 10 to 90 %: "
            f"{view.rock_low_m:.1f} to {view.rock_high_m:.1f} m."
        )
    y += 1.6
    for line in wrap_mm(words, form.width_mm - form.left_mm, form.text_mm):
        y += form.step_mm
        sheet.text((form.left_mm, y), line, "t-doubt")
    return y


def _key(sheet: Sheet, view: SoundingView, form: Form, y: float) -> float:
    """Explain marks, bars and line; gives the lower edge."""
    entries = [f"MN/2 {view.mn2_m[part[0]]:g} m" for part in view.segments]
    if view.array == "wenner":
        entries = ["Wenner, AB/2 is 1.5 a"]
    x, y = form.left_mm + 1.0, y + 1.4 + form.step_mm
    for place, words in enumerate(entries):
        x, y = _next_place(x, y, words, form)
        _mark(sheet, x, y - 0.9, place)
        sheet.text((x + 2.0, y), words, "small")
        x += 6.0 + width_mm(words, form.small_mm)
    words = "bars: twice the noise"
    x, y = _next_place(x, y, words, form)
    sheet.line((x, y - 2.4), (x, y + 0.6), "p1")
    for end in (y - 2.4, y + 0.6):
        sheet.line((x - 0.7, end), (x + 0.7, end), "p1")
    sheet.text((x + 2.0, y), words, "small")
    x += 8.0 + width_mm(words, form.small_mm)
    if view.computed_ohm_m is not None:
        x, y = _next_place(x, y, "computed", form)
        sheet.line((x - 2.0, y - 0.9), (x + 2.2, y - 0.9), "p3")
        sheet.text((x + 3.2, y), "computed", "small")
    return y


def _next_place(x: float, y: float, words: str, form: Form) -> tuple[float, float]:
    """Begin a new line of the key where the words would leave the sheet."""
    if x + 3.2 + width_mm(words, form.small_mm) <= form.width_mm:
        return x, y
    return form.left_mm + 1.0, y + form.step_mm + 0.4


def _describe(view: SoundingView) -> str:
    first, last = int(view.ab2_m.argmin()), int(view.ab2_m.argmax())
    ends = (
        f"Apparent resistivity {three_figures(float(view.observed_ohm_m[first]))} ohm m at AB/2 "
        f"{view.ab2_m[first]:g} m, {three_figures(float(view.observed_ohm_m[last]))} at {view.ab2_m[last]:g} m."
    )
    said = [ends]
    tops = [0.0, *view.bottom_m.tolist()]
    said += [
        f"{three_figures(ohm_m)} ohm m from {top:.1f} m."
        for top, ohm_m in zip(tops, view.resistivity_ohm_m.tolist(), strict=False)
    ]
    if view.rock_depth_m is None:
        said.append(f"No depth of rock: {view.refusal}")
    else:
        said.append(
            f"Depth to rock {view.rock_depth_m:.1f} m, range {view.rock_low_m:.1f} to"
            f" {view.rock_high_m:.1f} m."
        )
    return " ".join([*said, "The same values stand in the table of numbers."])
