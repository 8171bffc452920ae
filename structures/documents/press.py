"""Paper: a typeset document from a source, plain values and drawings, as the bytes of a PDF.

Only the fonts that are shipped are used, and the day printed is the day handed in: the same input
gives the same bytes on every machine.
"""

from __future__ import annotations

import json
from dataclasses import asdict
from datetime import UTC, datetime, time
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

import typst

from structures.drawing.standalone import standalone
from structures.drawing.written import lift_other_scripts

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
        The key "lifted" is added: words that are set over each drawing, by its name.
    made_on
        The day that the document carries.
    drawings
        Drawings as they are made for a page, by the file name that the source gives them.

    Returns
    -------
    bytes
        A PDF.
    """
    lifted = {name: lift_other_scripts(markup) for name, markup in drawings.items()}
    over = {name: [asdict(one) for one in words] for name, (_, words) in lifted.items()}
    files = {
        "main": source.encode(),
        "leaf.typ": LEAF.read_bytes(),
        DATA_NAME: json.dumps({**data, "lifted": over}, ensure_ascii=False).encode(),
        **{name: standalone(markup).encode() for name, (markup, _) in lifted.items()},
    }
    noon = datetime.combine(made_on, time(12), tzinfo=UTC)
    return typst.compile(
        files,
        format="pdf",
        font_paths=[str(FONTS)],
        ignore_system_fonts=True,
        timestamp=int(noon.timestamp()),
    )
