"""The drawings of one appraisal: its section and its soundings."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.drawing.sounding import draw_sounding
from structures.drawing.sounding_view import view_sounding
from structures.drawing.survey import view_section

if TYPE_CHECKING:
    from costing.appraisal import Appraisal
    from structures.drawing.view import SectionView


def appraised_section(found: Appraisal) -> SectionView:
    """Give what is drawn of the section of an appraisal."""
    return view_section(
        found.pack,
        found.rock,
        None if found.design is None else found.design.cutoff,
        soundings=found.soundings,
        cautions=found.cautions,
    )


def appraised_soundings(found: Appraisal, *, narrow: bool = False) -> list[str]:
    """Give the drawing of each sounding, in the order of the survey; `narrow` for a telephone."""
    pairs = zip(found.pack.soundings, found.soundings, strict=True)
    name = "sounding-narrow" if narrow else "sounding"
    return [
        draw_sounding(view_sounding(sounding, said), name=f"{name}-{place}", narrow=narrow)
        for place, (sounding, said) in enumerate(pairs, 1)
    ]
