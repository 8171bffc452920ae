"""The section under the line: ground, rock with its range, wall, trench, tests, as one SVG sheet.

Conventions: firm line where rock was seen, dashed where it was read, a band from 10 % to 90 %, and
nothing where it was not surveyed. Two sheets of one drawing: wide for paper and screen, narrow for
a telephone; a page shows one of them.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.as_built import (
    blank_missed,
    built_words,
    draw_built,
    strips_row,
)
from structures.drawing.frame import (
    NARROW,
    WIDE,
    Board,
    header,
    header_mm,
    make_frame,
    make_places,
    staff,
    under,
)
from structures.drawing.ground_tests import draw_seen_rock, draw_tests, name_tests, write_names
from structures.drawing.places import Box
from structures.drawing.section_foot import (
    caution_words,
    footing,
    notice,
    number_rows,
    offset_scale,
)
from structures.drawing.svg import Sheet
from structures.drawing.wall_marks import (
    GROUND_KEPT_MM,
    draw_bars,
    draw_ends,
    draw_gaps,
    draw_levels,
    draw_open_flanks,
    draw_water,
    write,
)

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.drawing.frame import Frame
    from structures.drawing.view import SectionView, WallDrawn

FILM_MM: Final = 0.75  # the film's line stands this far inside the wall's top, to be seen


def draw_section(view: SectionView, *, name: str = "section", narrow: bool = False) -> str:
    """Draw one section as SVG markup for a page.

    Source: standard drafting practice; offsets and levels of handbook section 1.

    Parameters
    ----------
    view
        What is drawn.
    name
        Keeps the ids of several drawings on one page apart; letters, digits, - and _.
    narrow
        The sheet for a telephone.

    Raises
    ------
    ValueError
        If the name cannot be part of an id.
    """
    frame = make_frame(view, NARROW if narrow else WIDE)
    frame = under(frame, header_mm(view, frame.form) - _highest_word(view, frame))
    sheet = Sheet(
        f"{name}-narrow" if narrow else name,
        frame.form.width_mm,
        f"{view.site}: section under the line, looking downstream",
        describe(view),
        frame.form.css,
    )
    board = Board(sheet, view, frame, make_places(frame))
    _earth(board)
    if view.wall is not None:
        _wall(board, view.wall)
    blank_missed(board)
    _ground(board)
    draw_built(board)
    unnamed = _marks(board)
    edge = strips_row(board, offset_scale(board) if narrow else number_rows(board))
    sheet.height_mm = round(notice(board, footing(board, edge, unnamed)) + 0.5, 2)
    return sheet.markup()


def _highest_word(view: SectionView, frame: Frame) -> float:
    """Find how far words over the ground reach above the frame, at most -5 mm for the staff's head."""
    board = Board(Sheet("trial", frame.form.width_mm, ""), view, frame, make_places(frame))
    draw_levels(board)
    named, _ = name_tests(board)
    labels = [label for _, label in named]
    if view.wall is not None and view.ends_known:
        labels += draw_open_flanks(board, view.wall)
    tops = [label.box(frame.form.text_mm, frame.form.step_mm).top for label in labels]
    return min([-5.0, *(top - 1.0 for top in tops)])


def _earth(board: Board) -> None:
    """Sand under the ground, rock under the rock line, bare paper where nothing is known."""
    view, frame, sheet = board.view, board.frame, board.sheet
    ground = frame.points(view.offset_m, view.ground_m)
    shape = [*ground, (frame.right, frame.foot), (frame.left, frame.foot)]
    sheet.area(shape, "sand-wash")
    sheet.hatch(shape, "sand")
    if view.rock is not None:
        x = _bends(view)
        line = frame.points(x, np.minimum(view.rock.at(x), view.ground(x)))
        below = [*line, (line[-1][0], frame.foot), (line[0][0], frame.foot)]
        sheet.area(below, "rock-wash")
        sheet.hatch(below, "rock")
    for start, stop in view.gaps:
        inside = view.offset_m[(view.offset_m > start) & (view.offset_m < stop)]
        x = np.array([start, *inside, stop])
        line = [
            (a, min(b + GROUND_KEPT_MM, frame.foot)) for a, b in frame.points(x, view.ground(x))
        ]
        sheet.area([*line, (line[-1][0], frame.foot), (line[0][0], frame.foot)], "fill-paper")


def _bends(view: SectionView) -> NDArray[np.float64]:
    """Offsets inside the rock's reach where ground or rock changes direction."""
    first, last = view.rock.reach
    x = np.unique(np.concatenate((view.rock.offset_m, view.offset_m)))
    return x[(x >= first) & (x <= last)]


def _wall(board: Board, wall: WallDrawn) -> None:
    """Clay between top and rock, the rock's range over its foot, key, outline and film."""
    frame, sheet = board.frame, board.sheet
    runs = []
    for run in wall.runs():
        x = wall.offset_m[run].ravel()
        upper = frame.points(x, wall.top_m[run].ravel())
        lower = frame.points(x, wall.rock_m[run].ravel())
        bottom = frame.points(x, wall.rock_m[run].ravel() - wall.key_m)
        runs.append((upper, lower, bottom))
        sheet.area([*upper, *lower[::-1]], "clay")
        sheet.hatch([*upper, *lower[::-1]], "clay")
    _band(board)
    for upper, lower, bottom in runs:
        sheet.area([*lower, *bottom[::-1]], "key")
        sheet.area([*upper, *bottom[::-1]], "wall-line")
        if wall.film:
            film = [(x, y + FILM_MM) for x, y in upper]
            sheet.path(film, "film-casing")
            sheet.path(film, "film")


def _band(board: Board) -> None:
    """Range of the rock line from 10 % to 90 %, cut at the ground."""
    view, frame = board.view, board.frame
    if view.rock is None or view.rock.low_m is None or view.rock.high_m is None:
        return
    x = _bends(view)
    low = np.interp(x, view.rock.offset_m, view.rock.low_m)
    high = np.minimum(np.interp(x, view.rock.offset_m, view.rock.high_m), view.ground(x))
    up, down = frame.points(x, high), frame.points(x, low)
    board.sheet.area([*up, *down[::-1]], "band")
    board.sheet.path(up, "band-edge")
    board.sheet.path(down, "band-edge")


def _ground(board: Board) -> None:
    """Rock line, end batters of the trench, and the ground over everything below it."""
    view, frame, sheet = board.view, board.frame, board.sheet
    if view.rock is not None:
        if view.wall is None:
            _band(board)
        if view.built is None:
            sheet.path(frame.points(view.rock.offset_m, view.rock.level_m), "rock-read")
    if view.wall is not None:
        for side in (0, 1):
            if view.wall.closed[side]:
                _batter(board, view.wall, side)
    sheet.path(frame.points(view.offset_m, view.ground_m), "ground")
    sheet.line((frame.left, frame.foot), (frame.right, frame.foot), "p2")


def _batter(board: Board, wall: WallDrawn, side: int) -> None:
    """Draw the end slope of the trench from the rock at a closed end up to the ground."""
    view, frame = board.view, board.frame
    end, step = wall.ends_m[side], (-1.0, 1.0)[side]
    start = float(view.rock.at(np.array(end)))
    edge = view.reach[side]
    x = np.unique(np.concatenate((view.offset_m, [end])))
    x = x[(x - end) * step >= 0.0][:: int(step)]
    over = start + np.abs(x - end) / wall.slopes[side] - view.ground(x)
    reached = np.flatnonzero(over >= 0.0)
    if not reached.size:
        stop = edge
    elif reached[0] == 0:
        return
    else:
        a, b = reached[0] - 1, reached[0]
        stop = float(x[a] + (x[b] - x[a]) * over[a] / (over[a] - over[b]))
    top = start + abs(stop - end) / wall.slopes[side]
    board.sheet.line(frame.point(end, start), frame.point(stop, top), "trench-beyond")


def _marks(board: Board) -> int:
    """Put tests, words and levels; gives the number of tests that found no room for a name."""
    view, frame = board.view, board.frame
    draw_levels(board)
    draw_tests(board)
    named, unnamed = name_tests(board)
    write_names(board, named)
    draw_seen_rock(board)
    for test in view.tests:
        x, top = frame.point(test.offset_m, float(view.ground(test.offset_m)))
        foot = float(frame.y(float(view.ground(test.offset_m)) - test.foot_m))
        board.places.take(Box(x - 1.3, top, x + 1.3, foot + 2.6))
    if view.wall is not None and view.ends_known:
        for label in draw_open_flanks(board, view.wall):
            write(board, label, "t-stop halo")
        draw_ends(board, view.wall)
    draw_water(board)
    if view.wall is not None:
        draw_bars(board, view.wall)
    draw_gaps(board)
    header(board.sheet, view, frame)
    staff(board.sheet, frame)
    return unnamed


def describe(view: SectionView) -> str:
    """Say in words what the drawing shows, for those who cannot see it."""
    ground = view.ground_m
    said = [
        f"Ground falls from {ground[0]:.2f} m to the bed at {view.bed_m:.2f} m and rises to {ground[-1]:.2f} m."
    ]
    if view.rock is None:
        said.append("Rock is not surveyed; wall and trench are not known.")
    else:
        said.append(f"Rock is lowest at {view.lowest_rock_m:.2f} m.")
        said += [f"Rock not surveyed from {a:.2f} to {b:.2f} m." for a, b in view.gaps]
    if view.wall is not None and view.ends_known:
        said.append(_wall_words(view.wall))
    elif view.wall is not None:
        left, right = view.wall.ends_m
        said.append(f"The wall was found from {left:.2f} to {right:.2f} m; beyond is not known.")
    if view.built is not None:
        said += built_words(view.built)
    if view.water_m is not None:
        said.append(f"Water stands at {view.water_m:.2f} m.")
    said += [f"Caution: {caution_words(view)}", "The same values stand in the table of numbers."]
    return " ".join(said)


def _wall_words(wall: WallDrawn) -> str:
    if not len(wall.offset_m):
        return "Rock stands at or above the crest: no wall is drawn."
    left, right = ("closed on rock" if shut else "OPEN, rock not reached" for shut in wall.closed)
    words = (
        f"The wall runs from {wall.ends_m[0]:.2f} m ({left}) to {wall.ends_m[1]:.2f} m ({right}),"
        f" crest {wall.crest_m:.2f} m."
    )
    bars = [f" Rock bar from {bar.from_m:.2f} to {bar.to_m:.2f} m." for bar in wall.bars]
    return words + "".join(bars)
