"""The marks of a map: sites by the stage of their structure, wells by their role."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.life.stages import BESIDE_IT, ON_THE_LINE

if TYPE_CHECKING:
    from structures.drawing.svg import Point, Sheet

MARK_MM: Final = 1.5  # half the size of a site's mark
FIRST_BUILT: Final = "digging"
FIRST_STANDING: Final = "handed-over"
FIRST_ON_PAPER: Final = "drawn"
WORDS: Final = {
    "open circle": "no wall drawn yet",
    "open square": "wall on paper",
    "full square": "being built",
    "full circle": "handed over",
    "cross": "halted or closed off",
}
WELL: Final = "well"  # begins the stage of a spot that is a well; its role follows
WELL_WORDS: Final = {"dot in a circle": "well or pipe", "diamond": "control well"}
KEY: Final = WORDS | WELL_WORDS
WELL_MM: Final = 1.0  # half the size of a well's mark


def is_well(stage: str) -> bool:
    """Tell whether a spot is a well by what stands for its stage."""
    return stage.startswith(WELL)


def mark_of(stage: str) -> str:
    """Give the shape of a stage: one of the keys of WORDS, for a well of WELL_WORDS."""
    if is_well(stage):
        return "diamond" if stage.endswith("control") else "dot in a circle"
    if stage in BESIDE_IT:
        return "cross"
    order = list(ON_THE_LINE)
    place = order.index(stage)
    if place >= order.index(FIRST_STANDING):
        return "full circle"
    if place >= order.index(FIRST_BUILT):
        return "full square"
    return "open square" if place >= order.index(FIRST_ON_PAPER) else "open circle"


def draw_mark(sheet: Sheet, centre: Point, kind: str) -> None:
    """Draw the mark of a kind about its centre."""
    x, y = centre
    if kind == "cross":
        sheet.line((x - MARK_MM, y - MARK_MM), (x + MARK_MM, y + MARK_MM), "p5")
        sheet.line((x - MARK_MM, y + MARK_MM), (x + MARK_MM, y - MARK_MM), "p5")
        return
    if kind == "diamond":
        ends = ((0, -1), (1, 0), (0, 1), (-1, 0))
        sheet.area(
            [(x + 1.2 * WELL_MM * u, y + 1.2 * WELL_MM * v) for u, v in ends], "p3 fill-paper"
        )
        return
    if kind == "dot in a circle":
        sheet.circle(centre, WELL_MM, "p3 fill-paper")
        sheet.circle(centre, WELL_MM / 3.0, "fill-ink")
        return
    css = "p3 fill-ink" if kind.startswith("full") else "p3 fill-paper"
    if kind.endswith("circle"):
        sheet.circle(centre, MARK_MM, css)
    else:
        sheet.rect((x - MARK_MM, y - MARK_MM), 2.0 * MARK_MM, 2.0 * MARK_MM, css)
