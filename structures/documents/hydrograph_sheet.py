"""The hydrograph on paper: drawing and what it rests on, on one sheet."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.documents.press import press

if TYPE_CHECKING:
    from datetime import date

NAME: Final = "hydrograph.svg"
SOURCE: Final = """
#let data = json("data.json")
#set document(title: data.title)
#set page(paper: "a4", margin: 15mm)
#set text(font: "Noto Sans", size: 9pt)
#text(size: 13pt, weight: "bold")[#data.title]
#v(2mm)
#image("hydrograph.svg", width: 180mm)
#v(2mm)
#for line in data.lines [#line \\ ]
"""


def hydrograph_pdf(markup: str, title: str, lines: list[str], *, made_on: date) -> bytes:
    """Give the PDF of a hydrograph.

    Parameters
    ----------
    markup
        The drawing as it is made for a page.
    lines
        Words below it.
    """
    data = {"title": title, "lines": lines}
    return press(SOURCE, data, made_on=made_on, drawings={NAME: markup})
