"""What the templates of drawing, rock, wall and water take from the reading of a survey."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from structures.drawing.section import draw_section
from structures.drawing.survey import view_section
from structures.ground.rock_line import RockLine
from structures.life.cautions import ALWAYS, CONTRADICTED

if TYPE_CHECKING:
    from structures.intake.pack import SurveyPack
    from structures.models import Run


def reading_context(run: Run | None) -> dict[str, Any]:
    """Give the appraisal with its figures and cautions; `appraisal` is None until it is there."""
    result = None if run is None else run.result
    if not result:
        return {"appraisal": None}
    cautions = result["appraisal"]["cautions"]
    source = result["appraisal"]["rock"]["source"]
    return {
        "appraisal": result["appraisal"],
        # A line is to be settled where none was given, or where a test has proved it wrong.
        "line_waits": source != "given" or any(one["code"] == CONTRADICTED for one in cautions),
        "figures": result["figures"],
        "doubts": [one for one in cautions if one["code"] not in ALWAYS],
        "always": [one for one in cautions if one["code"] in ALWAYS],
    }


def drawn_alone(pack: SurveyPack) -> dict[str, str]:
    """Draw ground, tests and a line handed in, before anything is read from them."""
    points = pack.rock_line or ()
    levels = [one.level_m for one in points]
    line = RockLine("given" if points else "none", [one.offset_m for one in points], levels)
    view = view_section(pack, line, None)
    wide = draw_section(view)
    return {"wide": wide, "narrow": draw_section(view, name="section-narrow", narrow=True)}
