"""A drawing read back from its markup: words with the room they take, shapes by class."""

from __future__ import annotations

import math
import xml.etree.ElementTree as ET
from dataclasses import dataclass

from tests.structures.drawing.font import width_em

SVG = "{http://www.w3.org/2000/svg}"


@dataclass(frozen=True)
class Word:
    words: str
    css: frozenset
    left: float
    top: float
    right: float
    bottom: float

    def meets(self, other):
        return (
            self.left < other.right
            and other.left < self.right
            and self.top < other.bottom
            and other.top < self.bottom
        )


def read(markup):
    """The drawing's root element; fails where the markup is not well-formed."""
    return ET.fromstring(markup)  # noqa: S314 -- our own markup


def size(root):
    return tuple(float(v) for v in root.get("viewBox").split()[2:])


def words(root):
    """Every text of a drawing with its box: capital height 0.714 em, descender 0.2 em, real widths."""
    narrow = {"dw-narrow", "dw-phone"} & set(root.get("class").split())
    return [_word(text, narrow=bool(narrow)) for text in root.iter(f"{SVG}text")]


def _word(text, *, narrow):
    css = frozenset((text.get("class") or "").split())
    letters = "".join(text.itertext())
    em = ((3.2, 3.0) if narrow else (2.6, 2.3))["small" in css]
    x, y = float(text.get("x")), float(text.get("y"))
    long = width_em(letters, strong="strong" in css) * em
    left = x - long * (1.0 if "end" in css else 0.5 if "mid" in css else 0.0)
    up, down = 0.714 * em, 0.2 * em
    if text.get("transform"):
        assert text.get("transform").startswith("rotate(-90 ")
        return Word(letters, css, x - up, y - long, x + down, y)
    return Word(letters, css, left, y - up, left + long, y + down)


def overlaps(root):
    """Pairs of texts that touch."""
    all_words = words(root)
    return [
        (one.words, other.words)
        for place, one in enumerate(all_words)
        for other in all_words[place + 1 :]
        if one.meets(other)
    ]


def cut_off(root):
    """Texts that leave the sheet."""
    width, height = size(root)
    return [
        word.words
        for word in words(root)
        if word.left < 0 or word.right > width or word.top < 0 or word.bottom > height
    ]


def shapes(root, css):
    """Point lists of the lines and areas that carry a class."""
    found = []
    for element in root:
        if css not in (element.get("class") or "").split():
            continue
        if element.get("points"):
            found.append([tuple(map(float, p.split(","))) for p in element.get("points").split()])
        elif element.tag == f"{SVG}line":
            ends = [[float(element.get(a + n)) for a in "xy"] for n in "12"]
            found.append([tuple(end) for end in ends])
    return found


def close(a, b):
    return math.isclose(a, b, abs_tol=0.006)  # the pen writes hundredths of a millimetre
