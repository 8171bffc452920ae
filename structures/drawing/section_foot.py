"""Below the section: numbers under their points, scale bar, datum, key, caution."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from structures.drawing.frame import LEVEL_SPACE_MM
from structures.drawing.ground_tests import probe_foot
from structures.drawing.letters import width_mm, wrap_mm
from structures.drawing.scales import round_step
from structures.drawing.view import SEEN
from structures.life.cautions import CLOSING_SENTENCE, caution

if TYPE_CHECKING:
    from structures.drawing.frame import Board
    from structures.drawing.svg import Sheet
    from structures.drawing.view import SectionView

NUMBER_GAP_MM: Final = 3.4  # least distance of numbers that stand upright side by side
ROW_MM: Final = 10.2
BAR_MM: Final = 5.0  # least length of one part of the scale bar
SWATCH_MM: Final = 7.0
SCALE_WORDS_MM: Final = 58.0  # from the section's left edge, clear of the longest scale bar
DATUM: Final = "Levels are heights above the site bench mark; offsets run from the left bank."
# Cautions that a sheet carries wherever a copy of it goes; the others stand beside it.
DRAWN: Final = (
    "rock-not-known",
    "rock-untied",
    "rock-default-spread",
    "no-wall",
    "trench-deep",
    "side-steep",
    "side-drained",
    "side-supported",
)


def number_rows(board: Board) -> float:
    """Write offset, ground and rock under the points they belong to; gives the lower edge.

    Points that would touch are left out; how many are written is said, the table twin has all.
    """
    view, frame, sheet = board.view, board.frame, board.sheet
    chosen = view.offset_m[chosen_points(view, frame.scales.mm_per_m)]
    rows = [("offset m", chosen), ("ground m", view.ground(chosen))]
    if view.rock is not None:
        first, last = view.rock.reach
        known = (chosen >= first) & (chosen <= last)
        words = "settled" if view.rock.low_m is None else "50 %"
        if view.built is not None:
            known, words = known & view.built.levelled(chosen), "found"
        rock = np.where(known, view.rock.at(chosen), np.nan)
        rows.append((f"rock m, {words}", rock))
    x, y = frame.x(chosen), frame.foot
    for at in x:
        sheet.line((float(at), y), (float(at), y + 0.9), "p2")
    for words, values in rows:
        y += ROW_MM
        for at, value in zip(x.tolist(), values.tolist(), strict=True):
            if not np.isnan(value):
                sheet.text((at + 0.9, y - 0.9), f"{value:.2f}", turn=-90)
        sheet.line((frame.left - 2.0, y), (frame.right + 2.0, y), "frame")
        sheet.text((frame.right + LEVEL_SPACE_MM, y - 4.0), words, "quiet")
    if chosen.size < view.offset_m.size:
        words = f"{chosen.size} of {view.offset_m.size} points"
        sheet.text((frame.right + LEVEL_SPACE_MM, frame.foot + 3.0), words, "small quiet")
    return y


def chosen_points(view: SectionView, mm_per_m: float) -> list[int]:
    """Choose the ground points whose numbers fit: ends, toes and lowest first, then in order."""
    x = view.offset_m
    toes = [int(np.abs(x - toe).argmin()) for toe in view.toes_m]
    first = [0, x.size - 1, *toes, int(view.ground_m.argmin())]
    kept: list[int] = []
    for index in [*first, *range(x.size)]:
        if all(abs(x[index] - x[other]) * mm_per_m >= NUMBER_GAP_MM for other in kept):
            kept.append(index)
    return sorted(kept)


def offset_scale(board: Board) -> float:
    """Write round offsets under the narrow sheet; gives the lower edge."""
    frame, sheet = board.frame, board.sheet
    step = round_step(11.0 / frame.scales.mm_per_m)
    for place in range(int(np.ceil(frame.first_m / step)), int(frame.last_m / step + 1e-9) + 1):
        x = float(frame.x(place * step))
        sheet.line((x, frame.foot), (x, frame.foot + 1.2), "p2")
        sheet.text((x, frame.foot + 4.4), f"{place * step:g}", "mid small")
    sheet.text((frame.right + LEVEL_SPACE_MM, frame.foot + 4.4), "offset m", "small quiet")
    return frame.foot + 6.0


def footing(board: Board, y: float, unnamed: int) -> float:
    """Draw scale bar, exaggeration in words, datum and key; gives the lower edge."""
    frame, sheet = board.frame, board.sheet
    y += 3.0 if frame.narrow else 4.6
    _scale_bar(board, y)
    if frame.narrow:
        sheet.text((1.0, y + 9.4), _scale_words(board), "small")
        return _key(board, y + 10.6)
    x = frame.form.left_mm + SCALE_WORDS_MM
    lines = [(_scale_words(board), ""), (DATUM, "quiet")]
    if unnamed:
        stand = "test stands" if unnamed == 1 else "tests stand"
        words = f"{unnamed} {stand} too close to be named here; the table names them all."
        lines.append((words, "quiet"))
    for line, (words, css) in enumerate(lines):
        sheet.text((x, y + 1.2 + 3.6 * line), words, css)
    return _key(board, y + 3.6 * len(lines))


def _scale_bar(board: Board, y: float) -> None:
    frame, sheet = board.frame, board.sheet
    part = round_step(BAR_MM / frame.scales.mm_per_m)
    long = part * frame.scales.mm_per_m
    for place in range(4):
        on = " staff-on" if place % 2 == 0 else ""
        sheet.rect((frame.left + place * long, y), long, 1.4, f"staff{on}")
    for place in (0, 2, 4):
        sheet.text((frame.left + place * long, y + 4.6), f"{place * part:g}", "mid small")
    half = width_mm(f"{4 * part:g}", frame.form.small_mm) / 2
    sheet.text((frame.left + 4 * long + half + 1.0, y + 4.6), "m", "small")


def _scale_words(board: Board) -> str:
    """Say how much taller heights are drawn, and on paper the two scales."""
    scales = board.frame.scales
    if scales.times == 1.0:
        words, both = "True to scale, heights as lengths", f"1:{scales.length:g}"
    else:
        words = f"Heights are drawn {scales.words} as tall as lengths"
        both = f"1:{scales.length:g} and 1:{scales.height:g}"
    return f"{words}." if board.frame.narrow else f"{words}: {both} on A4."


def _key(board: Board, y: float) -> float:
    """Explain only what this sheet shows."""
    form, sheet = board.frame.form, board.sheet
    entries = key_entries(board.view)
    size = form.small_mm if board.frame.narrow else form.text_mm
    left = 1.0 if board.frame.narrow else board.frame.left
    wide = max(width_mm(words, size) for _, words in entries) + SWATCH_MM + 4.6
    across = max(1, int((form.width_mm - left) // wide))
    for place, (kind, words) in enumerate(entries):
        x = left + (place % across) * wide
        base = y + 4.8 * (place // across + 1)
        _swatch(sheet, kind, x, base)
        sheet.text((x + SWATCH_MM + 1.6, base + 0.2), words, "small" if board.frame.narrow else "")
    return y + 4.8 * ((len(entries) - 1) // across + 1) + 1.6


def key_entries(view: SectionView) -> list[tuple[str, str]]:
    """List the signs on the sheet of a section with their meaning."""
    kinds = {test.kind for test in view.tests}
    ranges = any(test.deep_m is not None for test in view.tests)
    rock, wall = view.rock, view.wall
    wall = wall if wall is not None and len(wall.offset_m) else None
    banded = rock is not None and rock.low_m is not None
    built = view.built
    entries = (
        ("ground", "ground", True),
        ("rock-seen", "rock seen", rock is not None and any(kind in SEEN for kind in kinds)),
        ("rock-read", "rock read, 50 %", banded),
        ("rock-read", "rock, settled line", rock is not None and not banded and built is None),
        ("p5", "rock as found, wall as built", built is not None),
        ("wall-thin", "rock and wall as drawn", built is not None and built.line is not None),
        ("rock-seen", "rock levelled in the trench", built is not None and bool(built.found)),
        ("band", "its 10 to 90 % range", banded),
        ("clay", "puddle clay, key", wall is not None),
        ("film", "film, fold over top", wall is not None and wall.film),
        ("trench-beyond", "end batter of trench", wall is not None and any(wall.closed)),
        ("sand", "sand and gravel", True),
        ("range", "range of a sounding", ranges),
        ("column", "bore: black in rock", bool({"bore", "hole", "weathered"} & kinds)),
        ("pit", "pit: black in rock", "pit" in kinds),
        ("outcrop", "rock at the surface", "outcrop" in kinds),
        ("refused", "rock at or below the tip", bool({"probe refused", "weathered"} & kinds)),
        ("not-refused", "rock below the tip", bool({"probe stopped", "hole"} & kinds)),
    )
    return [(kind, words) for kind, words, there in entries if there]


def _swatch(sheet: Sheet, kind: str, x: float, y: float) -> None:
    middle, right = x + SWATCH_MM / 2, x + SWATCH_MM
    box = [(x, y - 1.9), (right, y - 1.9), (right, y + 0.7), (x, y + 0.7)]
    if kind in ("clay", "sand"):
        sheet.area(box, "clay" if kind == "clay" else "sand-wash")
        sheet.hatch(box, "clay" if kind == "clay" else "sand")
        if kind == "clay":
            sheet.rect((x, y + 0.1), SWATCH_MM, 0.7, "key")
    elif kind == "band":
        for edge in (y - 1.9, y + 0.5):
            sheet.line((x, edge), (right, edge), "band-edge")
    elif kind == "range":
        sheet.line((middle, y - 2.4), (middle, y + 0.6), "p2")
        for edge in (y - 2.4, y + 0.6):
            sheet.line((middle - 0.8, edge), (middle + 0.8, edge), "p2")
    elif kind in ("column", "pit"):
        half = 1.2 if kind == "pit" else 0.45
        sheet.rect((middle - half, y - 2.6), 2 * half, 2.0, "fill-paper p2")
        sheet.rect((middle - half, y - 0.6), 2 * half, 1.4, "fill-ink")
    elif kind == "outcrop":
        sheet.rect((middle - 0.9, y - 1.6), 1.8, 1.8, "fill-ink")
    elif kind in ("refused", "not-refused"):
        sheet.line((middle, y - 3.2), (middle, y - 1.4), "p3")
        probe_foot(sheet, middle, y - 1.6, refused=kind == "refused")
    else:
        sheet.line((x, y - 0.7), (right, y - 0.7), kind)


def caution_words(view: SectionView) -> str:
    """Give what the sheet of a section says in its frame.

    Source: handbook section 11; each time it ends with the closing sentence.
    """
    said = [one.text for one in view.cautions if one.code in DRAWN]
    if view.wall is not None:
        said.append(caution("sides-drawn").text)
    return " ".join([*said, CLOSING_SENTENCE])


def notice(board: Board, y: float) -> float:
    """Write the caution in a frame of its own, so that a copy of the drawing carries it."""
    form, sheet = board.frame.form, board.sheet
    left = 1.0 if board.frame.narrow else board.frame.left
    wide = form.width_mm - left - 0.5
    step = form.step_mm
    lines = wrap_mm(f"Caution: {caution_words(board.view)}", wide - 4.0, form.text_mm)
    height = step * len(lines) + 2.4
    sheet.rect((left, y + 1.0), wide, height, "change")
    for place, line in enumerate(lines, 1):
        sheet.text((left + 2.0, y + 0.8 + step * place), line)
    return y + 1.0 + height
