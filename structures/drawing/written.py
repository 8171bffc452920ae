"""The words of a drawing, read back from its markup, and lifted out for a better writer.

A typesetter's reader of SVG files joins the letters of Indian scripts wrongly; its own text does
not. So words in such scripts are lifted out of a drawing and set over it.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from html import unescape
from typing import TYPE_CHECKING, Final

from structures.drawing.letters import (
    PHONE_SMALL_MM,
    PHONE_TEXT_MM,
    SCRIPTS,
    SMALL_MM,
    TEXT_MM,
)

if TYPE_CHECKING:
    from structures.drawing.places import Anchor

WORDS: Final = re.compile(r"(<text[^>]*>)([^<]*)(</text>)")
ATTRIBUTE: Final = re.compile(r'([a-z]+)="([^"]*)"')
SIZES: Final = ((TEXT_MM, SMALL_MM), (PHONE_TEXT_MM, PHONE_SMALL_MM))
NARROW: Final = re.compile(r'^<svg class="[^"]*\bdw-narrow\b')


@dataclass(frozen=True, slots=True)
class Written:
    """Words on a sheet; x and y are the place of the anchor on the base line, in millimetres."""

    x: float
    y: float
    words: str
    size_mm: float
    anchor: Anchor
    strong: bool


def size_mm(css: list[str], *, narrow: bool) -> float:
    """Size of letters with these classes, as drawing.css has it."""
    return SIZES[narrow]["small" in css]


def anchor_of(css: list[str]) -> Anchor:
    """Which part of the words stands at their place."""
    return "mid" if "mid" in css else "end" if "end" in css else "start"


def lift_other_scripts(markup: str) -> tuple[str, tuple[Written, ...]]:
    """Take the words with letters that the Latin font lacks out of a drawing.

    Parameters
    ----------
    markup
        A drawing as it is made for a page. Words that stand upright there are never names.

    Returns
    -------
    tuple
        The drawing without them, and what was taken out.
    """
    narrow = NARROW.match(markup) is not None
    lifted: list[Written] = []

    def take(match: re.Match[str]) -> str:
        start, words, _ = match.groups()
        if not any(letters.search(words) for letters, _ in SCRIPTS):
            return match[0]
        given = dict(ATTRIBUTE.findall(start))
        css = given.get("class", "").split()
        lifted.append(
            Written(
                float(given["x"]),
                float(given["y"]),
                unescape(words),
                size_mm(css, narrow=narrow),
                anchor_of(css),
                "strong" in css,
            )
        )
        return ""

    return WORDS.sub(take, markup), tuple(lifted)
