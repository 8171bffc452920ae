"""Watersheds, streams, sites and wells from above: each by shape and code, north up."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from structures.drawing.letters import PHONE_SMALL_MM, PHONE_TEXT_MM, SMALL_MM, TEXT_MM, width_mm
from structures.drawing.map_marks import (
    KEY,
    MARK_MM,
    WELL_WORDS,
    WORDS,
    draw_mark,
    is_well,
    mark_of,
)
from structures.drawing.places import Box, Label, Places
from structures.drawing.scales import round_step
from structures.drawing.svg import Sheet
from structures.ground.place import on_grid

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Sequence

    from structures.drawing.svg import Point

Position = tuple[float, float]  # longitude, latitude in degrees, WGS 84
Cell = tuple[int, int]  # of paper, BESIDE_MM wide and high: across, down

EDGE_MM: Final = 6.0  # paper around what is drawn
LEAST_SPAN_M: Final = 500.0  # [A] a lone site is shown with some land around it
BAR_SHARE: Final = 0.2  # of the width, that the scale bar takes at least
BESIDE_MM: Final = 0.6  # room that a stream's line takes
TRIED: Final = 100  # [A] points of a stream, or up to twice as many, beside which its name is tried
KM_M: Final = 1000.0  # exact
COURSE: Final = "stream"  # in the key


@dataclass(frozen=True, slots=True)
class Outline:
    """A watershed as the map shows it; its rings as GeoJSON gives them."""

    code: str
    name: str
    rings: tuple[tuple[Position, ...], ...]


@dataclass(frozen=True, slots=True)
class Run:
    """A stream as the map shows it: its name and the lines of its course."""

    name: str
    lines: tuple[tuple[Position, ...], ...]


@dataclass(frozen=True, slots=True)
class Spot:
    """A site on the map, or a well: its stage is then "well" and its role, as "well control"."""

    code: str
    name: str
    position: Position
    stage: str


@dataclass(frozen=True, slots=True)
class Form:
    """One of the two sheets: sizes in millimetres."""

    width_mm: float
    most_mm: float
    text_mm: float
    small_mm: float
    step_mm: float
    css: str


WIDE: Final = Form(180.0, 110.0, TEXT_MM, SMALL_MM, 3.4, "dw-wide")
NARROW: Final = Form(97.0, 97.0, PHONE_TEXT_MM, PHONE_SMALL_MM, 4.2, "dw-narrow")


def draw_map(
    outlines: Sequence[Outline],
    spots: Sequence[Spot],
    runs: Sequence[Run] = (),
    *,
    name: str = "map",
    narrow: bool = False,
) -> str:
    """Draw outlines, streams, sites and wells as SVG markup for a page.

    Source: azimuthal equidistant projection about the middle of what is shown (Snyder 1987, 25).

    Parameters
    ----------
    outlines, spots, runs
        What to show, at least one of any.
    name
        Keeps ids apart on one page.
    narrow
        The telephone's sheet.

    Raises
    ------
    ValueError
        If there is nothing to show.
    """
    positions = [spot.position for spot in spots]
    positions += [place for one in outlines for ring in one.rings for place in ring]
    positions += [place for run in runs for line in run.lines for place in line]
    if not positions:
        raise ValueError("a map shows an outline, a stream or a site")
    form = NARROW if narrow else WIDE
    lons, lats = zip(*positions, strict=True)
    origin = ((min(lons) + max(lons)) / 2.0, (min(lats) + max(lats)) / 2.0)
    on_paper = _Paper(form, on_grid(positions, origin), origin)
    sheet = Sheet(name, form.width_mm, "Map of sites", _describe(outlines, spots, runs), form.css)
    places = Places(Box(0.0, 0.0, form.width_mm, on_paper.foot_mm), form.text_mm, form.step_mm)
    for outline in outlines:
        for ring in outline.rings:
            sheet.area(on_paper.points(ring), "gap-wash p3")
    beside: set[Cell] = set()
    for run in runs:
        for line in run.lines:
            points = on_paper.points(line)
            sheet.path(points, "level-a")
            beside.update(_along(points))
    sites, wells = _apart(spots)
    for found in (wells, sites):  # where the two meet the site lies on top
        _marks(sheet, places, on_paper, found)
    _name_spots(sheet, places, beside, on_paper, sites)
    for outline in outlines:
        _name_outline(sheet, places, beside, on_paper, outline)
    for run in runs:
        _name_run(sheet, places, beside, on_paper, run)
    _name_spots(sheet, places, beside, on_paper, wells)
    sheet.height_mm = _foot(sheet, on_paper, spots, streams=bool(runs))
    return sheet.markup()


class _Paper:
    """Where a position lies on the sheet."""

    def __init__(self, form: Form, grid: list[tuple[float, float]], origin: Position) -> None:
        east, north = zip(*grid, strict=True)
        self.form, self.origin = form, origin
        self.middle = ((min(east) + max(east)) / 2.0, (min(north) + max(north)) / 2.0)
        span = (
            max(max(east) - min(east), LEAST_SPAN_M),
            max(max(north) - min(north), LEAST_SPAN_M),
        )
        inner = (form.width_mm - 2.0 * EDGE_MM, form.most_mm - 2.0 * EDGE_MM)
        self.mm_per_m = min(inner[0] / span[0], inner[1] / span[1])
        self.foot_mm = span[1] * self.mm_per_m + 2.0 * EDGE_MM

    def points(self, positions: Sequence[Position]) -> list[Point]:
        """Places of positions, in millimetres."""
        return (
            [
                (
                    self.form.width_mm / 2.0 + (east - self.middle[0]) * self.mm_per_m,
                    self.foot_mm / 2.0 - (north - self.middle[1]) * self.mm_per_m,
                )
                for east, north in on_grid(positions, self.origin)
            ]
            if positions
            else []
        )


def _apart(spots: Sequence[Spot]) -> tuple[list[Spot], list[Spot]]:
    """Give the sites and the wells."""
    return tuple([one for one in spots if is_well(one.stage) is well] for well in (False, True))


def _marks(sheet: Sheet, places: Places, paper: _Paper, spots: Sequence[Spot]) -> None:
    for (x, y), spot in zip(paper.points([one.position for one in spots]), spots, strict=True):
        draw_mark(sheet, (x, y), mark_of(spot.stage))
        places.take(Box(x - MARK_MM, y - MARK_MM, x + MARK_MM, y + MARK_MM))


def _name_spots(
    sheet: Sheet, places: Places, beside: set[Cell], paper: _Paper, spots: Sequence[Spot]
) -> None:
    for (x, y), spot in zip(paper.points([one.position for one in spots]), spots, strict=True):
        strong = not is_well(spot.stage)
        label = _put(
            places,
            beside,
            (
                Label(x + dx, y + dy, (spot.code,), anchor, strong=strong)
                for dx, dy, anchor in (
                    (2.6, 0.9, "start"),
                    (-2.6, 0.9, "end"),
                    (0.0, -2.6, "mid"),
                    (0.0, 4.6, "mid"),
                    (2.6, -2.2, "start"),
                    (2.6, 4.2, "start"),
                    (-2.6, -2.2, "end"),
                    (-2.6, 4.2, "end"),
                )
            ),
        )
        if label is not None:
            ends = {"start": "", "mid": " mid", "end": " end"}[label.anchor]
            css = "halo strong" if strong else "halo"
            sheet.text((label.x, label.y), spot.code, f"{css}{ends}")


def _name_outline(
    sheet: Sheet, places: Places, beside: set[Cell], paper: _Paper, outline: Outline
) -> None:
    """Write the name where there is room inside the outline's box, from its middle outwards."""
    xs, ys = zip(*paper.points(outline.rings[0]), strict=True)
    left, right, top, bottom = min(xs), max(xs), min(ys), max(ys)
    shares = (0.5, 0.35, 0.65, 0.2, 0.8)
    label = _put(
        places,
        beside,
        (
            Label(left + u * (right - left), top + v * (bottom - top), (words,), "mid")
            for words in (f"{outline.name} {outline.code}".strip(), outline.code)
            for v in shares
            for u in shares
        ),
    )
    if label is not None:
        sheet.text((label.x, label.y), label.lines[0], "halo quiet mid")


def _name_run(sheet: Sheet, places: Places, beside: set[Cell], paper: _Paper, run: Run) -> None:
    """Write the stream's name beside its line where there is room, from its middle outwards."""
    points = paper.points(max(run.lines, key=len))
    middle = len(points) // 2
    tried = range(0, len(points), max(1, len(points) // TRIED))
    near = sorted(tried, key=lambda place: abs(place - middle))
    label = _put(
        places,
        beside,
        (
            Label(points[place][0] + dx, points[place][1] + dy, (run.name,), anchor)
            for place in near
            for dx, dy, anchor in (
                (2.0, -1.0, "start"),
                (-2.0, 3.0, "end"),
                (2.0, 3.0, "start"),
                (-2.0, -1.0, "end"),
                (2.0, -3.0, "start"),
                (-2.0, 5.0, "end"),
            )
        ),
    )
    if label is not None:
        end = " end" if label.anchor == "end" else ""
        sheet.text((label.x, label.y), run.name, f"halo t-water{end}")


def _put(places: Places, beside: set[Cell], candidates: Iterable[Label]) -> Label | None:
    """Take the first free place, one off the streams before one over them."""

    def over(label: Label) -> bool:
        box = label.box(places.size_mm, places.step_mm)
        return any(
            (across, down) in beside
            for across in range(_cell(box.left), _cell(box.right) + 1)
            for down in range(_cell(box.top), _cell(box.bottom) + 1)
        )

    return places.put(sorted(candidates, key=over))


def _along(points: Sequence[Point]) -> Iterator[Cell]:
    """Give the cells of paper that a line runs through, so that words keep off it."""
    for (x1, y1), (x2, y2) in pairwise(points):
        steps = max(1, math.ceil(2.0 * math.hypot(x2 - x1, y2 - y1) / BESIDE_MM))
        for step in range(steps + 1):
            x, y = (start + (stop - start) * step / steps for start, stop in ((x1, x2), (y1, y2)))
            yield _cell(x), _cell(y)


def _cell(place_mm: float) -> int:
    return math.floor(place_mm / BESIDE_MM)


def _foot(sheet: Sheet, paper: _Paper, spots: Sequence[Spot], *, streams: bool) -> float:
    """Draw scale bar, north and the key below the map; gives the height of the sheet."""
    form, y = paper.form, paper.foot_mm + 3.0
    bar_m = round_step(BAR_SHARE * form.width_mm / paper.mm_per_m)
    stop = EDGE_MM + bar_m * paper.mm_per_m
    sheet.rect((EDGE_MM, y), stop - EDGE_MM, 1.4, "staff staff-on")
    words = f"{bar_m / KM_M:g} km" if bar_m >= KM_M else f"{bar_m:g} m"
    sheet.text((stop + 1.5, y + 1.6), words, "small")
    x = stop + 6.0 + width_mm(words, form.small_mm)
    sheet.area(
        [(x, y + 2.2), (x + 1.1, y - 2.2), (x + 2.2, y + 2.2), (x + 1.1, y + 1.2)], "fill-ink"
    )
    sheet.text((x + 3.4, y + 1.6), "north", "small")
    shown = [kind for kind in KEY if any(mark_of(spot.stage) == kind for spot in spots)]
    x, y = EDGE_MM + MARK_MM, y + 6.5
    for kind in shown:
        wide = 2.0 * MARK_MM + 6.0 + width_mm(KEY[kind], form.small_mm)
        if x + wide > form.width_mm and x > EDGE_MM + MARK_MM:
            x, y = EDGE_MM + MARK_MM, y + form.step_mm + 1.0
        draw_mark(sheet, (x, y), kind)
        sheet.text((x + 2.8, y + 0.9), KEY[kind], "small")
        x += wide
    if streams:
        if x + 9.0 + width_mm(COURSE, form.small_mm) > form.width_mm:
            x, y = EDGE_MM + MARK_MM, y + form.step_mm + 1.0
        sheet.line((x - MARK_MM, y), (x + 4.0, y), "level-a")
        sheet.text((x + 5.5, y + 0.9), COURSE, "small")
    return y + 3.0


def _describe(outlines: Sequence[Outline], spots: Sequence[Spot], runs: Sequence[Run]) -> str:
    sites, wells = _apart(spots)
    names = ", ".join(f"{spot.code} ({WORDS[mark_of(spot.stage)]})" for spot in sites)
    sheds = ", ".join(f"{one.name} {one.code}".strip() for one in outlines)
    streams = ", ".join(run.name for run in runs)
    read = ", ".join(f"{spot.code} ({WELL_WORDS[mark_of(spot.stage)]})" for spot in wells)
    parts = [
        f"Outlines: {sheds}." if sheds else "",
        f"Streams: {streams}." if streams else "",
        f"Sites: {names}." if names else "No site.",
        f"Wells: {read}." if read else "",
    ]
    return " ".join(part for part in parts if part)
