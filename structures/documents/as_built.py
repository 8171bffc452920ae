"""The sheet as built on A4, its drawing as vectors."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

from structures.documents.press import press
from structures.drawing.section import describe, draw_section
from structures.life.cautions import CLOSING_SENTENCE

if TYPE_CHECKING:
    from datetime import date

    from structures.drawing.view import SectionView

SOURCE: Final = Path(__file__).resolve().parent / "as_built.typ"
NOT_KNOWN: Final = "not known"
UNITS: Final = {"m2": "m²", "m3": "m³"}


@dataclass(frozen=True, slots=True)
class AsBuiltWords:
    """What the sheet says beside its drawing; rows are words, ready to be printed."""

    site: str
    stream: str
    revision: str
    answer: str
    unknown: tuple[str, ...]
    strips: tuple[tuple[str, ...], ...]
    quantities: tuple[tuple[str, ...], ...]
    note: str


def as_built_pdf(view: SectionView, words: AsBuiltWords, *, made_on: date) -> bytes:
    """Typeset the sheet as built.

    Returns
    -------
    bytes
        A PDF on A4; the same wall on the same day gives the same bytes.
    """
    data: dict[str, Any] = {
        "title": f"{words.site}: the wall as built",
        "site": words.site,
        "stream": words.stream or NOT_KNOWN,
        "document": "subsurface dam as built",
        "date": f"{made_on.day} {made_on:%b %Y}",
        "revision": words.revision,
        "closing": CLOSING_SENTENCE,
        "answer": words.answer,
        "unknown": words.unknown,
        "words": describe(view),
        "strips": words.strips,
        "quantities": words.quantities,
        "note": words.note,
    }
    source = SOURCE.read_text(encoding="utf-8")
    return press(source, data, made_on=made_on, drawings={"as-built.svg": draw_section(view)})


def metres(value: float | None, places: int = 2) -> str:
    """Write a figure with fixed decimals; None is "not known", and minus nothing is nothing."""
    return NOT_KNOWN if value is None else f"{round(value, places) + 0.0:.{places}f}"


def item_words(item: str) -> str:
    """Write an item's code as words."""
    return item.replace("_", " ")


def unit_words(unit: str) -> str:
    """Write a unit as it is printed."""
    return UNITS.get(unit, unit)
