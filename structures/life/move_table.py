"""The one table of moves: from where to where, who may, on which papers, what blocks it.

Source: the office's practice, "the life of one structure". The ways back, which that table leaves
open, are decided here: before a trench is open a structure may go back to any earlier stage; after
the last strip is covered, one stage at a time, since the papers of the office can be wrong while
what is dug, built and covered stays so. A structure set aside comes back where it left, at the
latest as signed: `cleared` is said for one season only.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from structures.life.people import DISTRICT, ENGINEER, FIELD, PROGRAMME
from structures.life.stages import (
    CLEARED,
    CLOSED_OFF,
    COVERED,
    DIGGING,
    FLOW_JUDGED,
    HALTED,
    LINE,
    NOTED,
    RISING,
    SIGNED,
    before,
)

NOWHERE: Final = ""  # where a structure stands before it is noted


@dataclass(frozen=True, slots=True)
class Move:
    """One way to move: `starts` and `ends` are the stages it may lead between.

    `papers` are the kinds of evidence to be attached; `others_work` those of them whose maker may
    not be the mover; `blocks` the names in `blocks.BLOCKS`. `to_where_it_left` asks for the stage
    at which the structure was halted or closed off; `reason` for a sentence.
    """

    name: str
    starts: tuple[str, ...]
    ends: tuple[str, ...]
    roles: tuple[str, ...]
    papers: tuple[str, ...] = ()
    others_work: tuple[str, ...] = ()
    blocks: tuple[str, ...] = ()
    reason: bool = False
    to_where_it_left: bool = False


def _step(
    to: str,
    *roles: str,
    papers: tuple[str, ...],
    blocks: tuple[str, ...],
    others_work: tuple[str, ...] = (),
) -> Move:
    """Give the move along the line that ends at a stage."""
    place = LINE.index(to)
    start = LINE[place - 1] if place else NOWHERE
    return Move(to, (start,), (to,), roles, papers, others_work, blocks)


_UNTIL_CLEARED: Final = LINE[: LINE.index(CLEARED) + 1]
_BEFORE_COVERED: Final = LINE[: LINE.index(COVERED)]

ALONG_THE_LINE: Final = (
    _step(
        NOTED,
        FIELD,
        ENGINEER,
        papers=("note",),
        blocks=("no-position", "place-near"),
    ),
    _step("walked", FIELD, papers=("walk-over",), blocks=("downstream-blank",)),
    _step(
        "surveying",
        ENGINEER,
        papers=("survey-permission",),
        blocks=("no-land-permission", "no-benchmark"),
    ),
    _step(
        FLOW_JUDGED,
        ENGINEER,
        papers=("survey", "rock-line", "underflow"),
        blocks=("flank-open", "k-without-source"),
    ),
    _step(
        "drawn",
        ENGINEER,
        papers=("underflow", "design", "drawing-sheet"),
        blocks=("vertical-sides", "end-in-sand", "crest-above-bed"),
    ),
    _step(
        "checked",
        ENGINEER,
        papers=("design", "drawing-sheet", "check"),
        others_work=("design", "drawing-sheet"),
        blocks=("check-of-other-design", "check-open"),
    ),
    _step(
        "priced",
        ENGINEER,
        papers=("estimate",),
        blocks=("estimate-of-other-design", "typed-quantity"),
    ),
    _step("heard", DISTRICT, papers=("hearing",), blocks=("not-heard", "objection-open")),
    _step(
        "sanctioned",
        DISTRICT,
        PROGRAMME,
        papers=("estimate", "technical-sanction"),
        others_work=("estimate",),
        blocks=(
            "schedule-ended",
            "estimate-of-other-design",
            "check-of-other-design",
            "check-open",
        ),
    ),
    _step(
        "approved",
        DISTRICT,
        PROGRAMME,
        papers=("administrative-approval",),
        blocks=("money-line-small", "approval-below-technical"),
    ),
    _step(
        SIGNED,
        DISTRICT,
        papers=("contract",),
        blocks=("no-safety-terms", "no-contractor-authority"),
    ),
    _step(
        CLEARED,
        PROGRAMME,
        papers=("season",),
        others_work=("season",),
        blocks=("too-late", "clay-not-tested", "no-trained-person", "services-not-known"),
    ),
    _step(
        DIGGING,
        ENGINEER,
        papers=("hold-points", "trench-look"),
        blocks=("too-late", "hold-not-seen", "no-look-today", "alarm"),
    ),
    _step(
        RISING,
        ENGINEER,
        papers=("hold-points",),
        blocks=("hold-not-seen", "water-in-trench", "rock-not-seen"),
    ),
    _step(
        COVERED,
        ENGINEER,
        papers=("hold-points", "restored-bed"),
        blocks=("hold-not-seen", "trench-open", "no-bed-photo"),
    ),
    _step(
        "measured-up",
        DISTRICT,
        papers=("final-measurement",),
        others_work=("final-measurement",),
        blocks=("line-undecided", "billed-twice", "measured-unchecked"),
    ),
    _step(
        "handed-over",
        DISTRICT,
        papers=("handover",),
        blocks=("no-control-well", "no-reader"),
    ),
    _step(
        "judged",
        PROGRAMME,
        papers=("verdict",),
        others_work=("verdict",),
        blocks=("too-few-years",),
    ),
)
BESIDE_THE_LINE: Final = (
    Move(
        "send back",
        _UNTIL_CLEARED[1:],
        _UNTIL_CLEARED[:-1],
        (ENGINEER, DISTRICT, PROGRAMME),
        reason=True,
    ),
    Move(
        "take back",
        LINE[LINE.index(COVERED) + 1 :],
        LINE[LINE.index(COVERED) : -1],
        (DISTRICT, PROGRAMME),
        reason=True,
    ),
    Move(
        "halt",
        (DIGGING, RISING),
        (HALTED,),
        (FIELD, ENGINEER, DISTRICT, PROGRAMME),
        papers=("halt",),
    ),
    Move(
        "restart",
        (HALTED,),
        (DIGGING, RISING),
        (DISTRICT, PROGRAMME),
        papers=("restart",),
        others_work=("option-paper",),
        blocks=("option-undecided", "revision-missing", "too-late", "no-look-today", "alarm"),
        to_where_it_left=True,
    ),
    Move(
        "shift",
        (HALTED,),
        (FLOW_JUDGED,),
        (DISTRICT, PROGRAMME),
        papers=("option-paper",),
        others_work=("option-paper",),
        blocks=("option-no-shift", "trench-open"),
        reason=True,
    ),
    Move(
        "close off",
        (*_BEFORE_COVERED, HALTED),
        (CLOSED_OFF,),
        (DISTRICT,),
        papers=("close-off",),
        blocks=("trench-open", "unpaid-line", "committee-not-told"),
    ),
    Move(
        "come back",
        (CLOSED_OFF,),
        LINE[: LINE.index(SIGNED) + 1],
        (DISTRICT,),
        blocks=("given-up",),
        reason=True,
        to_where_it_left=True,
    ),
)
MOVES: Final = (*ALONG_THE_LINE, *BESIDE_THE_LINE)


def find_move(start: str, to: str) -> Move | None:
    """Give the move that leads from one stage to another; None where there is none."""
    for move in MOVES:
        if start in move.starts and to in move.ends and _leads(move, start, to):
            return move
    return None


def moves_from(start: str) -> tuple[Move, ...]:
    """Give the moves that lead away from a stage, in the order of the table."""
    return tuple(
        move
        for move in MOVES
        if start in move.starts and any(_leads(move, start, to) for to in move.ends)
    )


def return_stage(left: str) -> str:
    """Give the stage at which a structure set aside comes back, by the stage it left.

    Raises
    ------
    ValueError
        If it cannot have been closed off there.
    """
    if left not in (*_BEFORE_COVERED, HALTED):
        raise ValueError(f"nothing is closed off from {left!r}")
    return left if left in LINE and before(left, SIGNED) else SIGNED


def _leads(move: Move, start: str, to: str) -> bool:
    if move.name == "send back":
        return before(to, start)
    if move.name == "take back":
        return LINE.index(start) - LINE.index(to) == 1
    return True
