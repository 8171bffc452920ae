"""What a section as built shows besides: as drawn, thin, under as built, firm; strips and their words.

Source: drawing conventions of this project; a stretch that nobody measured has no firm line.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.frame import LEVEL_SPACE_MM
from structures.drawing.letters import width_mm, wrap_mm

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.drawing.frame import Board
    from structures.drawing.view import Built, RockDrawn, WallDrawn
    from structures.wall.stretch import Stretch

ROW_MM: Final = 5.0  # height of the row of strips
TICK_MM: Final = 1.2  # half the length of a level that was found
PAPER_MM: Final = 0.6  # by which the white of a missed stretch covers the firm outline under it
NOT_MEASURED: Final = "not measured"
UNSEEN: Final = "covered unseen"


def blank_missed(board: Board) -> None:
    """Take back what is drawn of the wall where nobody measured it."""
    view = board.view
    if view.built is None or view.wall is None or view.rock is None:
        return
    for one in view.built.missed:
        for run in view.wall.runs():
            x0, x1 = view.wall.offset_m[run][:, 0].min(), view.wall.offset_m[run][:, 1].max()
            start, stop = max(x0, one.from_m), min(x1, one.to_m)
            if stop <= start:
                continue
            x = _between(view.wall.offset_m[run].ravel(), start, stop)
            top = np.interp(x, view.wall.offset_m[run].ravel(), view.wall.top_m[run].ravel())
            foot = np.interp(x, view.wall.offset_m[run].ravel(), view.wall.rock_m[run].ravel())
            upper = board.frame.points(x, top)
            lower = board.frame.points(x, foot - view.wall.key_m)
            board.sheet.area(
                [
                    *((a, b - PAPER_MM) for a, b in upper),
                    *((a, b + PAPER_MM) for a, b in lower[::-1]),
                ],
                "fill-paper",
            )


def draw_built(board: Board) -> None:
    """Draw the line and the wall as drawn, thin, and the rock as found, firm, over them."""
    view, frame, sheet = board.view, board.frame, board.sheet
    built = view.built
    if built is None:
        return
    if built.line is not None:
        sheet.path(frame.points(built.line.offset_m, built.line.level_m), "wall-thin")
    if built.wall is not None:
        for upper, lower in _outline(board, built.wall):
            sheet.area([*upper, *lower[::-1]], "wall-thin")
    if view.rock is not None:
        for one in built.measured:
            x = _inside(view.rock, one)
            if x.size > 1:
                sheet.path(frame.points(x, view.rock.at(x)), "p5")
    for offset_m, level_m in built.found:
        x, y = frame.point(offset_m, level_m)
        for css in ("rock-casing", "rock-seen"):
            sheet.line((x - TICK_MM, y), (x + TICK_MM, y), css)


def strips_row(board: Board, y: float) -> float:
    """Write the strips under their stretch, and in words what was not measured or not seen.

    Gives the lower edge.
    """
    built, frame, sheet = board.view.built, board.frame, board.sheet
    if built is None or not built.strips:
        return y
    small = frame.form.small_mm
    top, foot = y + 1.4, y + 1.4 + ROW_MM
    for strip in built.strips:
        x0, x1 = float(frame.x(strip.from_m)), float(frame.x(strip.to_m))
        sheet.rect((x0, top), x1 - x0, ROW_MM, "p1")
        number = str(strip.number)
        if x1 - x0 > width_mm(number, small) + 0.6:
            sheet.text(((x0 + x1) / 2, foot - 1.5), number, "small mid strong")
        if strip.unseen:  # a cross beside the words below: black on white, so grey paper keeps it
            sheet.line((x0, top), (x1, foot), "p1")
            sheet.line((x0, foot), (x1, top), "p1")
    sheet.text((frame.right + LEVEL_SPACE_MM, foot - 1.5), "strips", "small quiet")
    left = 1.0 if frame.narrow else frame.left
    y = foot + 0.8
    for words, css in _strip_words(built):
        for line in wrap_mm(words, frame.form.width_mm - left - 1.0, frame.form.text_mm):
            y += frame.form.step_mm
            sheet.text((left, y), line, css)
    return y + 1.0


def built_words(built: Built) -> list[str]:
    """Say in words what the sheet as built shows."""
    said = [words for words, _ in _strip_words(built)]
    if built.found:
        lowest = min(level for _, level in built.found)
        said.append(f"Rock was levelled at {len(built.found)} places, lowest at {lowest:.2f} m.")
    if built.line is None:
        said.append("No drawing is kept here: only what was found is drawn.")
    return said


def _strip_words(built: Built) -> list[tuple[str, str]]:
    unseen = [(one.number, one.unseen) for one in built.strips if one.unseen]
    said = [(f"{UNSEEN}: strip {number} ({what}).", "t-stop") for number, what in unseen]
    missed = []
    for strip in built.strips:
        for one in built.missed:
            start, stop = max(one.from_m, strip.from_m), min(one.to_m, strip.to_m)
            if stop > start:
                whole = (start, stop) == (strip.from_m, strip.to_m)
                part = "" if whole else f", {start:.2f} to {stop:.2f} m"
                missed.append(f"strip {strip.number}{part}")
    if missed:
        said.append((f"{NOT_MEASURED}: {'; '.join(missed)}.", "t-doubt"))
    return said


def _outline(board: Board, wall: WallDrawn) -> list[tuple[list, list]]:
    frame = board.frame
    sides = []
    for run in wall.runs():
        x = wall.offset_m[run].ravel()
        upper = frame.points(x, wall.top_m[run].ravel())
        sides.append((upper, frame.points(x, wall.rock_m[run].ravel() - wall.key_m)))
    return sides


def _inside(rock: RockDrawn, one: Stretch) -> NDArray[np.float64]:
    first, last = rock.reach
    start, stop = max(first, one.from_m), min(last, one.to_m)
    return _between(rock.offset_m, start, stop) if stop > start else np.array([])


def _between(x: NDArray, start: float, stop: float) -> NDArray[np.float64]:
    """Give the points of a line inside a reach, its ends included."""
    return np.unique(np.concatenate([[start], x[(x > start) & (x < stop)], [stop]]))
