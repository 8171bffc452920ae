"""The stages of one structure, in their order: eighteen on the line and two beside it.

Source: the office's practice, "the life of one structure". The names are what code, tables and the
interface use; the words are what pages print.
"""

from __future__ import annotations

from typing import Final

NOTED: Final = "noted"
CLOSED_OFF: Final = "closed-off"

# name -> what it means, in the order in which a structure passes them.
ON_THE_LINE: Final[dict[str, str]] = {
    NOTED: "somebody thinks a wall could stand here",
    "walked": "walked over, sheet complete",
    "surveying": "lines, probes, soundings under way",
    "flow-judged": "underflow and storable volume judged with a range",
    "drawn": "wall drawn",
    "checked": "another engineer checked it",
    "priced": "estimate from drawing and rate schedule",
    "heard": "villages upstream and downstream heard",
    "sanctioned": "technical sanction given",
    "approved": "administrative approval and a money line",
    "signed": "contract or muster agreed",
    "cleared": "papers complete for this season",
    "digging": "trench open on at least one strip",
    "rising": "clay and film going in on at least one strip",
    "covered": "all strips backfilled, ground restored",
    "measured-up": "final measurement agreed, final bill decided",
    "handed-over": "committee has it, with wells and marks",
    "judged": "a verdict stands",
}
BESIDE_IT: Final[dict[str, str]] = {
    "halted": "stopped, cause given",
    CLOSED_OFF: "not going on",
}
STAGES: Final[dict[str, str]] = ON_THE_LINE | BESIDE_IT
