"""How wide words are on paper, so that labels are placed and wrapped without trying them first."""

from __future__ import annotations

import re
import unicodedata
from typing import Final

TEXT_MM: Final = 2.6  # the drawings' letters, as in drawing.css
SMALL_MM: Final = 2.3
PHONE_TEXT_MM: Final = 3.2  # the narrow sheet's letters
PHONE_SMALL_MM: Final = 3.0
ASCENT_EM: Final = 0.78  # capitals and ascenders of Noto Sans over the base line, rounded up
DESCENT_EM: Final = 0.24  # its descenders under the base line, rounded up

FIRST: Final = 32  # the tables below begin with the space and hold the 95 printable ASCII letters
# fmt: off
# Advance widths of Noto Sans Regular and Bold (hmtx table of the fonts shipped), 1/1000 em.
REGULAR: Final = (
    260, 269, 408, 646, 572, 831, 732, 225, 300, 300, 551, 572, 268, 322, 268, 372, 572, 572, 572,
    572, 572, 572, 572, 572, 572, 572, 268, 268, 572, 572, 572, 434, 899, 639, 650, 632, 730, 556,
    519, 728, 741, 339, 273, 619, 524, 907, 760, 781, 605, 781, 622, 549, 556, 731, 600, 930, 586,
    566, 572, 329, 372, 329, 572, 444, 281, 561, 615, 480, 615, 564, 344, 615, 618, 258, 258, 534,
    258, 935, 618, 605, 615, 615, 413, 479, 361, 618, 508, 786, 529, 510, 470, 380, 551, 380, 572,
)
BOLD: Final = (
    260, 286, 472, 646, 572, 901, 750, 266, 339, 339, 545, 572, 285, 322, 285, 413, 572, 572, 572,
    572, 572, 572, 572, 572, 572, 572, 285, 285, 572, 572, 572, 477, 897, 690, 672, 637, 740, 560,
    549, 724, 765, 389, 331, 664, 565, 943, 813, 796, 628, 796, 660, 551, 579, 756, 650, 967, 667,
    624, 579, 331, 413, 331, 572, 411, 362, 604, 633, 514, 633, 591, 387, 633, 657, 305, 305, 620,
    305, 982, 657, 619, 633, 633, 454, 497, 434, 657, 569, 856, 578, 569, 488, 394, 551, 394, 572,
)
# fmt: on
# Letters of a script, marks and joiners between them included: their ranges in Unicode, the font.
DEVANAGARI: Final = re.compile("[\u0900-\u097f\u1cd0-\u1cff\ua8e0-\ua8ff\u200c\u200d]+")
SCRIPTS: Final = ((DEVANAGARI, "Noto Sans Devanagari"),)
OTHER: Final = (
    1030  # any other letter: the widest single letter of Noto Sans Devanagari, rounded up
)
ELLIPSIS: Final = "..."


def width_mm(words: str, size_mm: float = TEXT_MM, *, strong: bool = False) -> float:
    """Width of one line of words.

    Source: sum of the advance widths of the fonts shipped; exact for ASCII without kerning, an
    upper guess for other letters. Marks that combine with a letter have no width.
    """
    table = BOLD if strong else REGULAR
    return sum(_advance(letter, table) for letter in words) * size_mm / 1000.0


def _advance(letter: str, table: tuple[int, ...]) -> int:
    place = ord(letter) - FIRST
    if 0 <= place < len(table):
        return table[place]
    return 0 if unicodedata.category(letter) in ("Mn", "Cf") else OTHER


def wrap_mm(words: str, limit_mm: float, size_mm: float = TEXT_MM) -> list[str]:
    """Break words into lines no wider than the limit; a single longer word is broken by letters."""
    lines: list[str] = []
    line = ""
    for word in words.split():
        longer = f"{line} {word}".strip()
        if width_mm(longer, size_mm) <= limit_mm:
            line = longer
            continue
        if line:
            lines.append(line)
        *full, line = _pieces(word, limit_mm, size_mm)
        lines += full
    return [*lines, line] if line else lines


def _pieces(word: str, limit_mm: float, size_mm: float) -> list[str]:
    pieces = [""]
    for letter in word:
        if pieces[-1] and width_mm(pieces[-1] + letter, size_mm) > limit_mm:
            pieces.append("")
        pieces[-1] += letter
    return pieces


def shorten(words: str, limit_mm: float, size_mm: float = TEXT_MM, *, strong: bool = False) -> str:
    """Cut words that are wider than the limit and say so with three dots."""
    if width_mm(words, size_mm, strong=strong) <= limit_mm:
        return words
    kept = words
    while kept and width_mm(kept + ELLIPSIS, size_mm, strong=strong) > limit_mm:
        kept = kept[:-1]
    return kept.rstrip() + ELLIPSIS
