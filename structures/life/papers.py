"""All kinds of papers: those with a short form here, and those that are made elsewhere."""

from __future__ import annotations

from typing import Final

from structures.life.paper import Paper
from structures.life.papers_of_office import CHECK, DRAWING_SHEET, HEARING, SEASON
from structures.life.papers_of_site import NOTE, SURVEY_PERMISSION, UNDERFLOW, WALK_OVER
from structures.life.papers_of_works import (
    CLOSE_OFF,
    HALT,
    HANDOVER,
    RESTART,
    RESTORED_BED,
    VERDICT,
)
from structures.life.people import DISTRICT, ENGINEER, FIELD, PROGRAMME

WRITTEN_HERE: Final = (
    NOTE,
    WALK_OVER,
    SURVEY_PERMISSION,
    UNDERFLOW,
    DRAWING_SHEET,
    CHECK,
    HEARING,
    SEASON,
    HALT,
    RESTART,
    CLOSE_OFF,
    RESTORED_BED,
    HANDOVER,
    VERDICT,
)
MADE_ELSEWHERE: Final = (
    Paper("survey", "survey", "What lies on the line?", (FIELD, ENGINEER)),
    Paper("rock-line", "rock line", "Where is rock, and how sure is it?", (ENGINEER,)),
    Paper("design", "drawing of the wall", "Which wall?", (ENGINEER,)),
    Paper("estimate", "estimate", "What will it cost?", (ENGINEER,)),
    Paper(
        "technical-sanction",
        "technical sanction",
        "Is it sound at this cost?",
        (DISTRICT, PROGRAMME),
    ),
    Paper(
        "administrative-approval",
        "administrative approval",
        "Is it wanted, and who pays?",
        (DISTRICT, PROGRAMME),
        signers="the funder",
    ),
    Paper(
        "contract",
        "contract",
        "Who builds it, at which rates and on which terms?",
        (DISTRICT,),
        signers="the contractor",
    ),
    Paper("option-paper", "option paper", "Go on, step, shift or close?", (ENGINEER,)),
    Paper("hold-points", "hold points", "Was each strip seen before it was covered?", (ENGINEER,)),
    Paper("trench-look", "trench look of the day", "Is there a reason to stop?", (FIELD, ENGINEER)),
    Paper(
        "final-measurement",
        "final measurement",
        "How much was built?",
        (ENGINEER,),
        signers="the contractor",
    ),
)
PAPERS: Final[dict[str, Paper]] = {paper.kind: paper for paper in WRITTEN_HERE + MADE_ELSEWHERE}
