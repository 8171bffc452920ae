"""Advance widths read from the shipped fonts themselves: the oracle for the room words take."""

from __future__ import annotations

import struct
from functools import cache
from pathlib import Path

import structures.documents

FONTS = Path(structures.documents.__file__).parent / "fonts"


def _numbers(data, at, form):
    return struct.unpack_from(">" + form, data, at)


@cache
def advances(name):
    """Letter -> advance width in em, from the tables cmap (format 4) and hmtx of a TrueType font."""
    data = (FONTS / name).read_bytes()
    (count,) = _numbers(data, 4, "H")
    tables = {
        data[12 + 16 * i : 16 + 16 * i].decode(): _numbers(data, 20 + 16 * i, "I")[0]
        for i in range(count)
    }
    (units,) = _numbers(data, tables["head"] + 18, "H")
    (metrics,) = _numbers(data, tables["hhea"] + 34, "H")
    widths = [
        _numbers(data, tables["hmtx"] + 4 * glyph, "H")[0] / units for glyph in range(metrics)
    ]
    return {
        chr(code): widths[min(glyph, metrics - 1)]
        for code, glyph in _glyphs(data, tables["cmap"]).items()
    }


def _glyphs(data, cmap):
    (count,) = _numbers(data, cmap + 2, "H")
    starts = [cmap + _numbers(data, cmap + 8 + 8 * i, "I")[0] for i in range(count)]
    at = next(start for start in starts if _numbers(data, start, "H") == (4,))
    segments = _numbers(data, at + 6, "H")[0] // 2
    parts = [at + 14, at + 16 + 2 * segments, at + 16 + 4 * segments, at + 16 + 6 * segments]
    found = {}
    for place in range(segments):
        stop, start = (_numbers(data, part + 2 * place, "H")[0] for part in parts[:2])
        (shift,) = _numbers(data, parts[2] + 2 * place, "h")
        (offset,) = _numbers(data, parts[3] + 2 * place, "H")
        for code in range(start, stop + 1):
            glyph = code
            if offset:
                (glyph,) = _numbers(data, parts[3] + 2 * place + offset + 2 * (code - start), "H")
            if glyph or not offset:
                found[code] = (glyph + shift) & 0xFFFF
    return found


def width_em(words, *, strong):
    """Width of words without kerning; letters the Latin font lacks come from Devanagari."""
    weight = "Bold" if strong else "Regular"
    latin, other = advances(f"NotoSans-{weight}.ttf"), advances(f"NotoSansDevanagari-{weight}.ttf")
    return sum(latin.get(letter, other.get(letter, 0.6)) for letter in words)
