"""Words and lines about the wall: ends, open flanks, length, bars, water, parts not surveyed."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.frame import LEVEL_SPACE_MM, LOWEST_ROCK
from structures.drawing.letters import width_mm
from structures.drawing.places import Anchor, Box, Label, spread

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from structures.drawing.frame import Board
    from structures.drawing.svg import Sheet
    from structures.drawing.view import WallDrawn

ANCHORS: Final = {"start": "", "mid": " mid", "end": " end"}
FIXED_SHARES: Final = (
    0.5,
    0.35,
    0.65,
    0.2,
    0.8,
    0.1,
    0.9,
    0.27,
    0.73,
)  # places tried along a line, the middle first
OPEN_ROWS: Final = 12  # rows over the ground that are tried for the words of an open flank
NOT_SURVEYED: Final = "rock not surveyed"
GROUND_KEPT_MM: Final = 6.0  # of sand drawn under the ground where nothing is known below


def write(board: Board, label: Label, css: str) -> None:
    """Write a label line by line, the first in bold where it is strong."""
    y = label.y
    for line in label.lines:
        strong = " strong" if label.strong else ""
        board.sheet.text((label.x, y), line, f"{css}{ANCHORS[label.anchor]}{strong}".strip())
        y += board.frame.form.step_mm


def put(board: Board, css: str, candidates: Iterable[Label]) -> None:
    """Write the first of the candidates that finds room; the table twin has it in any case."""
    label = board.places.put(candidates)
    if label is not None:
        write(board, label, css)


def dimension(sheet: Sheet, start_mm: float, stop_mm: float, y: float) -> None:
    """Draw a dimension line with its arrows."""
    for css in ("dim-casing", "p2"):
        sheet.line((start_mm, y), (stop_mm, y), css)
    for x, way in ((start_mm, 1.0), (stop_mm, -1.0)):
        arrow = [(x, y), (x + way * 2.2, y - 0.5), (x + way * 2.2, y + 0.5)]
        sheet.area(arrow, "fill-ink")


def draw_ends(board: Board, wall: WallDrawn) -> None:
    """Draw where the wall ends and how long it is, with the words of closed ends."""
    view, frame = board.view, board.frame
    y = frame.foot - 2.6
    left, right = (float(frame.x(end)) for end in wall.ends_m)
    for x, end in ((left, wall.ends_m[0]), (right, wall.ends_m[1])):
        rock = float(frame.y(float(view.rock.at(np.array(end)))))
        board.sheet.line((x, rock + 1.2), (x, y + 1.2), "p1")
        board.places.take(Box(x - 0.2, y - 1.2, x + 0.2, y + 1.2))
    dimension(board.sheet, left, right, y)
    put(
        board,
        "halo",
        (
            label
            for words in _length_words(wall)
            for label in (
                Label((left + right) / 2, y - 0.9, (words,), "mid"),
                Label(right + 1.4, y + 0.9, (words,), "start"),
                Label(left - 1.4, y + 0.9, (words,), "end"),
            )
        ),
    )
    if frame.narrow:
        return
    for side, (x, end) in enumerate(((left, wall.ends_m[0]), (right, wall.ends_m[1]))):
        if wall.closed[side]:
            inward, outward = (("start", "end"), ("end", "start"))[side]
            put(board, "halo", _end_labels(x, y, f"end {end:.2f} m,", (inward, outward)))


def _length_words(wall: WallDrawn) -> tuple[str, str]:
    """Say the length in full, and in short for a sheet without room."""
    short = f"wall {wall.length_m:.2f} m"
    bars = " without the rock bars" if wall.bars else ""
    return short + bars + ("" if all(wall.closed) else " as far as surveyed"), short


def _end_labels(x: float, y: float, words: str, anchors: tuple[str, str]) -> Iterator[Label]:
    for up in (7.2, 14.2):
        for anchor in anchors:
            nudge = 1.4 if anchor == "start" else -1.4
            yield Label(x + nudge, y - up, (words, "closed on rock"), anchor)  # type: ignore[arg-type]


def draw_open_flanks(board: Board, wall: WallDrawn) -> list[Label]:
    """Draw the break line at each open end; gives the words for it, placed above the ground."""
    view, frame = board.view, board.frame
    labels = []
    for side in (0, 1):
        if wall.closed[side]:
            continue
        end = wall.ends_m[side]
        x, ground = frame.point(end, float(view.ground(end)))
        rock = float(frame.y(float(view.rock.at(np.array(end))))) + 2.5
        heights = np.linspace(ground, rock, 9)
        zigzag = [(x + (0.9 if i % 2 else -0.9), float(y)) for i, y in enumerate(heights)]
        board.sheet.path(zigzag, "open-end")
        label = board.places.put(_open_labels(board, end, side))
        if label is not None:
            labels.append(label)
    return labels


def _open_labels(board: Board, end_m: float, side: int) -> Iterator[Label]:
    frame, form = board.frame, board.frame.form
    where = "survey" if end_m == board.view.reach[side] else "rock line"
    lines = ("open: rock not reached", f"{where} ends at {end_m:.2f} m")
    wide = width_mm(lines[0], form.text_mm, strong=True)
    for row in range(OPEN_ROWS):
        for anchor in (("start", "end"), ("end", "start"))[side]:
            x = float(frame.x(end_m)) + (2.2 if anchor == "start" else -2.2)
            reach = (x, x + wide) if anchor == "start" else (x - wide, x)
            top = min(board.ground_y(at) for at in np.linspace(*reach, 5))
            base = top - 2.0 - form.step_mm * (1 + row)
            yield Label(x, base, lines, anchor, strong=True)  # type: ignore[arg-type]


def draw_bars(board: Board, wall: WallDrawn) -> None:
    """Name the stretches where rock stands above the crest."""
    frame = board.frame
    for bar in wall.bars:
        middle = float(frame.x((bar.from_m + bar.to_m) / 2))
        crest = float(frame.y(wall.crest_m))
        lines = ("rock bar", f"{bar.from_m:.2f} to {bar.to_m:.2f} m")
        sides: tuple[tuple[float, Anchor], ...] = (
            (middle, "mid"),
            (float(frame.x(bar.to_m)) + 1.8, "start"),
            (float(frame.x(bar.from_m)) - 1.8, "end"),
        )
        downs = np.arange(5.0, frame.foot - crest - 8.0, 3.5).tolist()
        put(
            board,
            "halo",
            (Label(x, crest + down, lines, anchor) for down in downs for x, anchor in sides),
        )


def draw_water(board: Board) -> None:
    """Draw the water level where there is ground to hold it, with its mark."""
    view, frame = board.view, board.frame
    if view.water_m is None:
        return
    y = float(frame.y(view.water_m))
    segments = [(float(frame.x(a)), float(frame.x(b))) for a, b in _wet(board)]
    for start, stop in segments:
        for css in ("water-casing", "water-line"):
            board.sheet.line((start, y), (stop, y), css)
        board.places.take(Box(start, y - 0.6, stop, y + 0.6))
    if not segments:
        return
    start, stop = max(segments, key=lambda ends: ends[1] - ends[0])
    for share in FIXED_SHARES:
        x = start + share * (stop - start)
        above, below = (
            Box(x - 1.7, y - 2.8, x + 1.7, y - 0.6),
            Box(x - 1.7, y + 0.6, x + 1.7, y + 2.8),
        )
        if board.places.free(above) and board.places.free(below):
            board.places.take(above, below)
            _water_mark(board.sheet, x, y)
            return


def _wet(board: Board) -> list[tuple[float, float]]:
    """Stretches where the rock lies under the water level; the whole survey where none is known."""
    view, level = board.view, board.view.water_m
    if view.rock is None:
        return [view.reach]
    x, rock = view.rock.offset_m, view.rock.level_m - level
    cross = np.flatnonzero(rock[:-1] * rock[1:] < 0)
    at = x[cross] + (x[cross + 1] - x[cross]) * rock[cross] / (rock[cross] - rock[cross + 1])
    ends = np.unique(np.concatenate((x, at)))
    below = view.rock.at((ends[:-1] + ends[1:]) / 2) < level
    edges = np.flatnonzero(np.diff(np.concatenate(([False], below, [False])).astype(int)))
    return [(float(ends[a]), float(ends[b])) for a, b in edges.reshape(-1, 2)]


def _water_mark(sheet: Sheet, x: float, y: float) -> None:
    """Inverted triangle on the level, short lines below it."""
    sheet.area([(x - 1.5, y - 2.5), (x + 1.5, y - 2.5), (x, y - 0.2)], "water-mark")
    for place, half in enumerate((1.2, 0.7, 0.3)):
        down = y + 0.9 + 0.75 * place
        for css in ("water-casing", "water-line"):
            sheet.line((x - half, down), (x + half, down), css)


def draw_gaps(board: Board) -> None:
    """Write "rock not surveyed" into each part without a rock line, and draw its edge."""
    view, frame = board.view, board.frame
    for start, stop in view.gaps:
        left, right = float(frame.x(start)), float(frame.x(stop))
        for offset, x in ((start, left), (stop, right)):
            if view.reach[0] < offset < view.reach[1]:
                top = float(frame.y(float(view.ground(offset)))) + GROUND_KEPT_MM
                board.sheet.line((x, top), (x, frame.foot), "p1")
        _gap_words(board, left, right)


def _gap_words(board: Board, left: float, right: float) -> None:
    """Write across the part, in one, two or three lines, or turned where it is narrow."""
    label = board.places.put(_gap_labels(board, left, right))
    if label is not None:
        write(board, label, "t-doubt halo")
        return
    frame, form = board.frame, board.frame.form
    long = width_mm(NOT_SURVEYED, form.text_mm, strong=True)
    for share in FIXED_SHARES:
        x = left + share * (right - left)
        top = board.ground_y(x) + GROUND_KEPT_MM
        half = (0.5 * form.text_mm, 0.5 * long)
        middle = (top + frame.foot) / 2
        box = Box(x - half[0], middle - half[1], x + half[0], middle + half[1])
        if Box(left, top, right, frame.foot).holds(box) and board.places.free(box):
            board.places.take(box)
            place = (x + 0.35 * form.text_mm, middle + half[1])
            board.sheet.text(place, NOT_SURVEYED, "strong t-doubt halo", turn=-90)
            return


def _gap_labels(board: Board, left: float, right: float) -> Iterator[Label]:
    frame, form = board.frame, board.frame.form
    for lines in ((NOT_SURVEYED,), ("rock not", "surveyed"), ("rock", "not", "surveyed")):
        half = max(width_mm(line, form.text_mm, strong=True) for line in lines) / 2 + 0.5
        tall = form.step_mm * len(lines)
        for across in FIXED_SHARES:
            x = left + across * (right - left)
            if not left + half <= x <= right - half:
                continue
            top = max(board.ground_y(x - half), board.ground_y(x + half)) + GROUND_KEPT_MM + 3.0
            for down in FIXED_SHARES:
                y = top + down * (frame.foot - top - tall)
                if y >= top:
                    yield Label(x, y, lines, "mid", strong=True)


def draw_levels(board: Board) -> None:
    """Read the levels that matter off at the right edge, spread so that no two labels touch."""
    view, frame, form = board.view, board.frame, board.frame.form
    read = [(view.bed_m, "bed", "")]
    if view.wall is not None and len(view.wall.offset_m):
        read.append((view.wall.crest_m, "crest", ""))
    if view.rock is not None:
        read.append((view.lowest_rock_m, "rock" if frame.narrow else LOWEST_ROCK, ""))
    if view.water_m is not None:
        read.append((view.water_m, "water", "t-water"))
    read.sort(key=lambda item: -item[0])
    places = spread([float(frame.y(level)) for level, _, _ in read], form.level_gap_mm)
    edge = frame.right
    for (level, words, css), y in zip(read, places, strict=True):
        at = float(frame.y(level))
        board.sheet.line((frame.left, at), (edge, at), "grid")
        board.sheet.path([(edge + 0.6, at), (edge + 2.6, y), (edge + 3.4, y)], "p1")
        if frame.narrow:
            board.sheet.text((edge + LEVEL_SPACE_MM, y - 1.2), words, f"small {css}".strip())
            board.sheet.text((edge + LEVEL_SPACE_MM, y + 2.2), f"{level:.2f}", css)
        else:
            board.sheet.text((edge + LEVEL_SPACE_MM, y + 0.9), f"{level:.2f} {words}", css)
        board.places.take(
            Box(edge + 0.4, y - form.level_gap_mm / 2, form.width_mm, y + form.level_gap_mm / 2)
        )
