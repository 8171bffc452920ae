"""Paper: a typeset document from a source, plain values and drawings, as the bytes of a PDF.

Only the fonts that are shipped are used, and the day printed is the day handed in: the same input
gives the same bytes on every machine.
"""

from __future__ import annotations

import json
from datetime import UTC, datetime, time
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

import typst

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import date

FONTS: Final = Path(__file__).resolve().parent / "fonts"
LEAF: Final = Path(__file__).resolve().parent / "leaf.typ"
DATA_NAME: Final = "data.json"


def press(
    source: str, data: Mapping[str, Any], *, made_on: date, drawings: Mapping[str, str]
) -> bytes:
    """Typeset one document.

    Parameters
    ----------
    source
        Typst source of the document; it may take in "leaf.typ" and reads "data.json".
    data
        Plain values for the source; words stand in them as they are and are never read as source.
    made_on
        The day that the document carries.
    drawings
        SVG files that stand alone, by the name that the source gives them.

    Returns
    -------
    bytes
        A PDF.
    """
    files = {
        "main": source.encode(),
        "leaf.typ": LEAF.read_bytes(),
        DATA_NAME: json.dumps(data, ensure_ascii=False).encode(),
        **{name: markup.encode() for name, markup in drawings.items()},
    }
    noon = datetime.combine(made_on, time(12), tzinfo=UTC)
    return typst.compile(
        files,
        format="pdf",
        font_paths=[str(FONTS)],
        ignore_system_fonts=True,
        timestamp=int(noon.timestamp()),
    )
