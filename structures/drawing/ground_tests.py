"""Tests on the section: ticks, columns, rods, ranges, and their names above the ground.

A probe never proves rock and is never drawn firm: an arrow down says rock lies at or below.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.letters import width_mm
from structures.drawing.places import Box, Label

if TYPE_CHECKING:
    from collections.abc import Iterator

    from structures.drawing.frame import Board
    from structures.drawing.places import Anchor
    from structures.drawing.svg import Sheet
    from structures.drawing.view import GroundTest

TICK_MM: Final = 2.6
NAME_MM: Final = 3.4  # base line of a name over the ground
NAME_ROWS: Final = 6  # names that find no place in these rows stand in the table only
SEEN_MM: Final = 3.0  # half the length of the firm line where rock was seen
COLUMN_MM: Final = {"bore": 0.9, "hole": 0.9, "weathered": 0.9, "pit": 2.4}
BOUNDS: Final = {"probe refused": True, "weathered": True, "probe stopped": False, "hole": False}
FIRST_NAMED: Final = ("bore", "pit", "outcrop")
SHIFT_MM: Final = {"mid": 0.0, "start": -0.1, "end": 0.1}  # a leaning name begins at its tick
NARROW_UNNAMED: Final = ("sounding", "refraction")


def draw_tests(board: Board) -> None:
    """Draw what each test did in the ground, then a tick on the ground over it."""
    for test in board.view.tests:
        if test.kind in COLUMN_MM:
            _column(board, test)
        elif test.kind in BOUNDS:
            _rod(board, test)
        elif test.kind == "outcrop":
            x, y = board.frame.point(test.offset_m, float(board.view.ground(test.offset_m)))
            board.sheet.rect((x - 0.9, y - 0.9), 1.8, 1.8, "fill-ink")
        else:
            _range(board, test)
        x, y = board.frame.point(test.offset_m, float(board.view.ground(test.offset_m)))
        board.sheet.line((x, y), (x, y - TICK_MM), "p3")


def _column(board: Board, test: GroundTest) -> None:
    """Draw a bore or pit: black foot where sheet rock was met, else an arrow."""
    x, top, foot = _ends(board, test)
    wide = COLUMN_MM[test.kind]
    board.sheet.rect((x - wide / 2, top), wide, foot - top, "fill-paper p2")
    if test.seen:
        board.sheet.rect((x - wide / 2, foot), wide, 2.4, "fill-ink")
    else:
        probe_foot(board.sheet, x, foot, refused=BOUNDS[test.kind])


def _rod(board: Board, test: GroundTest) -> None:
    x, top, foot = _ends(board, test)
    for css in ("film-casing", "p3"):
        board.sheet.line((x, top), (x, foot), css)
    probe_foot(board.sheet, x, foot, refused=BOUNDS[test.kind])


def _range(board: Board, test: GroundTest) -> None:
    """Draw the 10 % to 90 % range that a sounding or refraction line gives."""
    if test.shallow_m is None or test.deep_m is None:
        return
    ground = float(board.view.ground(test.offset_m))
    x = float(board.frame.x(test.offset_m))
    ends = [float(board.frame.y(ground - depth)) for depth in (test.shallow_m, test.deep_m)]
    for css in ("dim-casing", "p2"):
        board.sheet.line((x, ends[0]), (x, ends[1]), css)
    for y in ends:
        board.sheet.line((x - 0.8, y), (x + 0.8, y), "p2")


def _ends(board: Board, test: GroundTest) -> tuple[float, float, float]:
    ground = float(board.view.ground(test.offset_m))
    x, top = board.frame.point(test.offset_m, ground)
    return x, top, float(board.frame.y(ground - (test.depth_m or 0.0)))


def probe_foot(sheet: Sheet, x: float, y: float, *, refused: bool) -> None:
    """Point down. Refused: a bar and a filled arrow, rock at or below; else open: rock below."""
    if refused:
        for css in ("rock-casing", "p5"):
            sheet.line((x - 1.2, y), (x + 1.2, y), css)
    arrow = [(x - 0.9, y + 0.5), (x + 0.9, y + 0.5), (x, y + 2.6)]
    sheet.area(arrow, "fill-ink" if refused else "fill-paper p2")


def draw_seen_rock(board: Board) -> None:
    """Draw the rock line firm for a short way about each place where sheet rock was met."""
    view, frame = board.view, board.frame
    if view.rock is None:
        return
    first, last = view.rock.reach
    half = SEEN_MM / frame.scales.mm_per_m
    for test in view.tests:
        if test.seen and first <= test.offset_m <= last:
            start, stop = max(first, test.offset_m - half), min(last, test.offset_m + half)
            x = view.rock.offset_m
            near = np.array([start, *x[(x > start) & (x < stop)], stop])
            line = frame.points(near, view.rock.at(near))
            for css in ("rock-casing", "rock-seen"):
                board.sheet.path(line, css)


def name_tests(board: Board) -> tuple[list[tuple[GroundTest, Label]], int]:
    """Find a place for every name; where rock was met comes first.

    Returns
    -------
    tuple
        Tests with the places of their names, and how many names found none.
    """
    for test in board.view.tests:
        x, y = board.frame.point(test.offset_m, float(board.view.ground(test.offset_m)))
        board.places.take(Box(x - 0.3, y - TICK_MM, x + 0.3, y))
    named: list[tuple[GroundTest, Label]] = []
    wanted = [t for t in board.view.tests if not (board.frame.narrow and t.kind in NARROW_UNNAMED)]
    for test in sorted(wanted, key=lambda t: t.kind not in FIRST_NAMED):
        label = _place(board, test, [other for _, other in named])
        if label is not None:
            named.append((test, label))
    return named, len(wanted) - len(named)


def _place(board: Board, test: GroundTest, named: list[Label]) -> Label | None:
    x, y = board.frame.point(test.offset_m, float(board.view.ground(test.offset_m)))
    form, places = board.frame.form, board.places
    others = [label.box(form.text_mm, form.step_mm) for label in named]
    for label in _candidates(board, test, x, y):
        box = label.box(form.text_mm, form.step_mm)
        leader = Box(x - 0.2, box.bottom, x + 0.2, y - TICK_MM)
        if places.free(box) and not any(leader.meets(other) for other in others):
            places.take(box, leader)
            return label
    return None


def _candidates(board: Board, test: GroundTest, x: float, y: float) -> Iterator[Label]:
    """Go up row by row, in each over the test, then to its right and to its left."""
    step = board.frame.form.step_mm
    for row in range(NAME_ROWS):
        for anchor in _anchors(board, test, x):
            shift = SHIFT_MM[anchor]
            label = Label(x + shift, y, (test.label,), anchor, test.seen)
            box = label.box(board.frame.form.text_mm, step)
            highest = min(y, board.ground_y(box.left), board.ground_y(box.right))
            base = highest - NAME_MM - row * step
            yield Label(x + shift, base, (test.label,), anchor, test.seen)


def _anchors(board: Board, test: GroundTest, x: float) -> tuple[Anchor, ...]:
    """Lean a name away from a neighbour that is named before others and stands close."""
    room = width_mm(test.label, board.frame.form.text_mm, strong=test.seen) + 1.0
    others = [
        float(board.frame.x(t.offset_m)) - x
        for t in board.view.tests
        if t is not test and t.kind in FIRST_NAMED
    ]
    close_left = any(-room < gap <= 0.0 for gap in others)
    close_right = any(0.0 < gap < room for gap in others)
    if close_left == close_right:
        return ("mid", "start", "end")
    return ("start", "mid", "end") if close_left else ("end", "mid", "start")


def write_names(board: Board, named: list[tuple[GroundTest, Label]]) -> None:
    """Write the names, each with a thin line down to its tick where it stands higher."""
    for test, label in named:
        x, y = board.frame.point(test.offset_m, float(board.view.ground(test.offset_m)))
        if label.y < y - NAME_MM - 0.5:
            board.sheet.line((x, label.y + 0.8), (x, y - TICK_MM), "p1")
        anchor = {"start": "", "mid": " mid", "end": " end"}[label.anchor]
        css = f"halo{anchor}{' strong' if label.strong else ''}"
        board.sheet.text((label.x, label.y), label.lines[0], css)
