"""The stages of one structure, in their order: eighteen on the line and two beside it.

Source: the office's practice, "the life of one structure". The names are what code, tables and the
interface use; the words are what pages print. Who moves a structure on which paper: `moves`.
"""

from __future__ import annotations

from typing import Final

NOTED: Final = "noted"
FLOW_JUDGED: Final = "flow-judged"
SIGNED: Final = "signed"
CLEARED: Final = "cleared"
DIGGING: Final = "digging"
RISING: Final = "rising"
COVERED: Final = "covered"
HALTED: Final = "halted"
CLOSED_OFF: Final = "closed-off"

# name -> what it means, in the order in which a structure passes them.
ON_THE_LINE: Final[dict[str, str]] = {
    NOTED: "somebody thinks a wall could stand here",
    "walked": "walked over, sheet complete",
    "surveying": "lines, probes, soundings under way",
    FLOW_JUDGED: "underflow and storable volume judged with a range",
    "drawn": "wall drawn",
    "checked": "another engineer checked it",
    "priced": "estimate from drawing and rate schedule",
    "heard": "villages upstream and downstream heard",
    "sanctioned": "technical sanction given",
    "approved": "administrative approval and a money line",
    SIGNED: "contract or muster agreed",
    CLEARED: "papers complete for this season",
    DIGGING: "trench open on at least one strip",
    RISING: "clay and film going in on at least one strip",
    COVERED: "all strips backfilled, ground restored",
    "measured-up": "final measurement agreed, final bill decided",
    "handed-over": "committee has it, with wells and marks",
    "judged": "a verdict stands",
}
BESIDE_IT: Final[dict[str, str]] = {
    HALTED: "stopped, cause given",
    CLOSED_OFF: "not going on",
}
STAGES: Final[dict[str, str]] = ON_THE_LINE | BESIDE_IT
LINE: Final[tuple[str, ...]] = tuple(ON_THE_LINE)


def next_on_line(stage: str) -> str | None:
    """Give the stage that follows; None for the last one and for those beside the line.

    Raises
    ------
    ValueError
        If there is no such stage.
    """
    if stage not in STAGES:
        raise ValueError(f"there is no stage {stage!r}")
    if stage not in ON_THE_LINE or stage == LINE[-1]:
        return None
    return LINE[LINE.index(stage) + 1]


def before(stage: str, other: str) -> bool:
    """Tell whether a stage of the line comes before another one of it.

    Raises
    ------
    ValueError
        If one of the two is not on the line.
    """
    for name in (stage, other):
        if name not in ON_THE_LINE:
            raise ValueError(f"{name!r} is no stage of the line")
    return LINE.index(stage) < LINE.index(other)
