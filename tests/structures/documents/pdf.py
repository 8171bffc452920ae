"""A small reader of the PDFs that the press makes: sheets, fonts, words. Source: ISO 32000-1."""

from __future__ import annotations

import re
import zlib
from dataclasses import dataclass

OBJECT = re.compile(rb"(?:^|\n)(\d+) 0 obj\s(.*?)\nendobj", re.DOTALL)
STREAM = re.compile(rb"stream\r?\n(.*)endstream", re.DOTALL)
TEXT = re.compile(rb"BT\s(.*?)\sET\b", re.DOTALL)
FONT = re.compile(rb"/(f\d+) [\d.]+ Tf")
ESCAPE = re.compile(rb"\\([0-7]{1,3}|.)", re.DOTALL)
NAMED = {b"n": b"\n", b"r": b"\r", b"t": b"\t", b"b": b"\b", b"f": b"\f"}


@dataclass(frozen=True)
class Paper:
    """What a PDF says of itself."""

    sheets_mm: list
    fonts: set
    embedded: int
    words: str


def read_pdf(data):
    assert data.startswith(b"%PDF-")
    objects = {int(number): body for number, body in OBJECT.findall(data)}
    pages = [body for body in objects.values() if b"/Type/Page/" in body]
    boxes = [re.search(rb"/MediaBox\[0 0 ([\d.]+) ([\d.]+)\]", page) for page in pages]
    descriptors = [body for body in objects.values() if b"/Type/FontDescriptor" in body]
    names = {re.search(rb"/FontName/\w+\+([\w-]+)", body)[1].decode() for body in descriptors}
    return Paper(
        sheets_mm=[
            tuple(round(float(side) / 72 * 25.4, 1) for side in box.groups()) for box in boxes
        ],
        fonts=names,
        embedded=sum(b"/FontFile2" in body for body in descriptors),
        words="\n".join(_page_words(objects, page) for page in pages),
    )


def _content(body):
    raw = STREAM.search(body)[1]
    return zlib.decompress(raw) if b"/FlateDecode" in body[: body.index(b"stream")] else raw


def _page_words(objects, page):
    resources = objects[int(re.search(rb"/Resources (\d+) 0 R", page)[1])]
    fonts = {
        name: _letters(objects, int(number))
        for name, number in re.findall(rb"/(f\d+) (\d+) 0 R", resources)
    }
    content = _content(objects[int(re.search(rb"/Contents (\d+) 0 R", page)[1])])
    lines = []
    for shown in TEXT.findall(content):
        letters = fonts[FONT.search(shown)[1]]
        codes = b"".join(_strings(shown))
        pairs = zip(codes[::2], codes[1::2], strict=True)
        lines.append("".join(letters.get(256 * high + low, "") for high, low in pairs))
    return "\n".join(lines)


def _strings(shown):
    """The literal strings of a text object; parentheses may nest."""
    at = 0
    while (at := shown.find(b"(", at)) >= 0:
        depth, stop = 1, at + 1
        while depth:
            step = 2 if shown[stop : stop + 1] == b"\\" else 1
            depth += {b"(": 1, b")": -1}.get(shown[stop : stop + 1], 0)
            stop += step
        yield ESCAPE.sub(_plain, shown[at + 1 : stop - 1])
        at = stop


def _plain(match):
    code = match[1]
    return bytes([int(code, 8)]) if code[:1].isdigit() else NAMED.get(code, code)


def _letters(objects, number):
    """Code -> letters, from the font's ToUnicode map."""
    to_unicode = int(re.search(rb"/ToUnicode (\d+) 0 R", objects[number])[1])
    pairs = re.findall(rb"<([0-9A-F]{4})> <([0-9A-F]+)>\n", _content(objects[to_unicode]))
    return {
        int(code, 16): bytes.fromhex(letters.decode()).decode("utf-16-be")
        for code, letters in pairs
    }
