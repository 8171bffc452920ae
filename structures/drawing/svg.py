"""A small pen for SVG made on the server: one user unit is one millimetre on paper.

Shapes carry classes of drawing.css and no style of their own, so a strict content policy holds and
the same drawing turns dark with its page. Words are escaped here and nowhere else.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from html import escape
from typing import TYPE_CHECKING, Final, Literal

if TYPE_CHECKING:
    from collections.abc import Iterable

Hatch = Literal["sand", "rock", "clay"]
Point = tuple[float, float]

NAME: Final = re.compile(r"[A-Za-z][A-Za-z0-9_-]*")
# Characters that XML 1.0 forbids (its production 2), in whatever words come from a survey.
FORBIDDEN: Final = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
SAND_DOTS: Final = (
    (0.7, 0.8),
    (2.6, 0.5),
    (4.4, 1.3),
    (1.6, 2.2),
    (3.5, 2.7),
    (5.3, 3.3),
    (0.5, 3.6),
    (2.5, 4.1),
)
ROCK_STROKES: Final = (
    "M.8 1.4l1.5-.5M4.3 .9l1.2 .9M8 1.9l1.6-.2M2.4 3.9l.9 1.1"
    "M6 3.6l1.7-.6M.6 6.3l1.6 .3M4.4 6.6l1.3-.9M8.2 5.6l1 1"
)
CLAY_DASHES: Final = "M.4 .9h2.2M3.8 2.5h2.2"
# Hatches of our own, after the families of the FGDC cartographic standard: width, height, strokes.
HATCHES: Final[dict[Hatch, tuple[float, float, str]]] = {
    "sand": (
        6.0,
        4.8,
        "".join(f'<circle class="sand-dot" cx="{x}" cy="{y}" r=".2"/>' for x, y in SAND_DOTS),
    ),
    "rock": (10.2, 7.4, f'<path class="rock-stroke" d="{ROCK_STROKES}"/>'),
    "clay": (6.4, 3.2, f'<path class="clay-dash" d="{CLAY_DASHES}"/>'),
}


def clean(words: str) -> str:
    """Give words as XML text: markup escaped, characters that XML forbids left out."""
    return escape(FORBIDDEN.sub("", words))


def points(pairs: Iterable[Point]) -> str:
    """Give 'x,y x,y' with hundredths of a millimetre, which is finer than any printer."""
    return " ".join(f"{x:.2f},{y:.2f}" for x, y in pairs)


@dataclass(slots=True)
class Sheet:
    """One drawing in the making. `name` keeps ids apart when several stand on one page.

    Raises
    ------
    ValueError
        If the name cannot be part of an id.
    """

    name: str
    width_mm: float
    title: str
    desc: str = ""
    css: str = ""
    height_mm: float = 0.0
    parts: list[str] = field(default_factory=list)

    def __post_init__(self) -> None:
        if not NAME.fullmatch(self.name):
            raise ValueError(f"{self.name!r} cannot be part of an id")

    def line(self, start: Point, stop: Point, css: str) -> None:
        """Draw a straight line."""
        (x1, y1), (x2, y2) = start, stop
        self.parts.append(
            f'<line class="{css}" x1="{x1:.2f}" y1="{y1:.2f}" x2="{x2:.2f}" y2="{y2:.2f}"/>'
        )

    def path(self, pairs: Iterable[Point], css: str) -> None:
        """Draw an open line through points."""
        self.parts.append(f'<polyline class="{css}" points="{points(pairs)}"/>')

    def area(self, pairs: Iterable[Point], css: str) -> None:
        """Draw a closed shape."""
        self.parts.append(f'<polygon class="{css}" points="{points(pairs)}"/>')

    def hatch(self, pairs: Iterable[Point], kind: Hatch) -> None:
        """Fill a closed shape with a hatch."""
        self.parts.append(
            f'<polygon class="hatch" fill="url(#{self.name}-{kind})" points="{points(pairs)}"/>'
        )

    def rect(self, corner: Point, width_mm: float, height_mm: float, css: str) -> None:
        """Draw a rectangle from its upper left corner."""
        x, y = corner
        self.parts.append(
            f'<rect class="{css}" x="{x:.2f}" y="{y:.2f}"'
            f' width="{width_mm:.2f}" height="{height_mm:.2f}"/>'
        )

    def circle(self, centre: Point, radius_mm: float, css: str) -> None:
        """Draw a circle."""
        x, y = centre
        self.parts.append(f'<circle class="{css}" cx="{x:.2f}" cy="{y:.2f}" r="{radius_mm:.2f}"/>')

    def text(self, place: Point, words: str, css: str = "", *, turn: float = 0.0) -> None:
        """Write words from their base line's start, or its middle or end with those classes."""
        x, y = place
        spin = f' transform="rotate({turn:g} {x:.2f} {y:.2f})"' if turn else ""
        style = f' class="{css}"' if css else ""
        self.parts.append(f'<text{style} x="{x:.2f}" y="{y:.2f}"{spin}>{clean(words)}</text>')

    def markup(self) -> str:
        """Give the drawing as a page takes it in, its size on paper in millimetres."""
        name, body = self.name, "\n".join(self.parts)
        width, height = f"{self.width_mm:g}", f"{self.height_mm:g}"
        return (
            f'<svg class="{f"dw {self.css}".strip()}" xmlns="http://www.w3.org/2000/svg"'
            f' width="{width}mm" height="{height}mm" viewBox="0 0 {width} {height}" fill="none"'
            f' role="img" aria-labelledby="{name}-t {name}-d">'
            f'<title id="{name}-t">{clean(self.title)}</title>'
            f'<desc id="{name}-d">{clean(self.desc)}</desc>'
            f"<defs>{self._patterns(body)}</defs>\n{body}\n</svg>"
        )

    def _patterns(self, body: str) -> str:
        """Give the hatches that the drawing uses."""
        return "".join(
            f'<pattern id="{self.name}-{kind}" width="{width:g}" height="{height:g}"'
            f' patternUnits="userSpaceOnUse">{strokes}</pattern>'
            for kind, (width, height, strokes) in HATCHES.items()
            if f"url(#{self.name}-{kind})" in body
        )
