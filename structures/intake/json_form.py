"""JSON bytes to the neutral tree, or a refusal: RFC 8259, one meaning a key, no bottomless nesting."""

from __future__ import annotations

import json
import re
from collections import Counter
from typing import Final

import numpy as np

from structures.errors import Finding, Refused
from structures.intake.tree import Node, shown

DEPTH_MOST: Final = 32  # a pack nests five deep; deeper is no pack
DIGITS_MOST: Final = 20  # digits of an integer read exactly; longer ones are read as floats
_STRING: Final = re.compile(rb'"(?:[^"\\]|\\.)*+"?', re.DOTALL)  # an unclosed one too: one pass
_STEP: Final = np.zeros(256, dtype=np.int8)
_STEP[list(b"[{")] = 1
_STEP[list(b"]}")] = -1


def read_json(name: str, data: bytes) -> Node:
    """Read one JSON document.

    Raises
    ------
    Refused
        If the bytes are no UTF-8, no JSON, nest too deep or give a key of an object twice.
    """
    text = _text(name, data)
    if _depth(data) > DEPTH_MOST:
        raise _refusal(name, f"The document nests deeper than {DEPTH_MOST}.", "Send a survey pack.")
    twice: list[str] = []

    def members(pairs: list[tuple[str, object]]) -> dict[str, object]:
        seen = dict(pairs)
        if len(seen) < len(pairs):
            counts = Counter(key for key, _ in pairs)
            twice.extend(key for key, count in counts.items() if count > 1)
        return seen

    try:
        value = json.loads(text, object_pairs_hook=members, parse_int=_whole)
    except json.JSONDecodeError as error:
        place = f"{name} line {error.lineno} column {error.colno}".strip()
        raise _refusal(
            place, f"This is not JSON: {error.msg}.", "Mend it there, or export the pack again."
        ) from error
    if twice:
        findings = tuple(
            Finding(
                f"{name} $".strip(),
                shown(key)[1:-1],
                "This key stands twice in one object.",
                "Keep one.",
            )
            for key in dict.fromkeys(twice)
        )
        raise Refused(
            findings[0].what,
            where=f"{name}, {findings[0].field}",
            remedy="Keep one.",
            findings=findings,
        )
    return Node(value, f"{name} $".strip())


def _text(name: str, data: bytes) -> str:
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise _refusal(
            f"{name} line {line}".strip(), "This is not UTF-8 text.", "Save the file as UTF-8."
        ) from error


def _depth(data: bytes) -> int:
    """Give the deepest nesting, brackets inside strings left out."""
    steps = _STEP[np.frombuffer(_STRING.sub(b"", data), dtype=np.uint8)]
    return int(np.cumsum(steps, dtype=np.int64).max(initial=0))


def _whole(digits: str) -> int | float:
    return int(digits) if len(digits) <= DIGITS_MOST else float(digits)


def _refusal(where: str, what: str, remedy: str) -> Refused:
    finding = Finding(where, "", what, remedy)
    return Refused(what, where=where, remedy=remedy, findings=(finding,))
