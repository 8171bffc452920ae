"""Where a structure may go from where it stands, and what is missing for its next stage."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from costing.queries.standing import standing_of
from structures import access
from structures.life.move_table import moves_from, return_stage
from structures.life.moves import Missing, MoveAsked, judge_move, may_move, missing_for_next
from structures.life.stages import CLOSED_OFF, HALTED, LINE, next_on_line
from structures.queries.evidence import left_at, records_of, settle

if TYPE_CHECKING:
    from collections.abc import Iterable

    from costing.queries.standing import Standing
    from structures.errors import Finding
    from structures.life.move_table import Move
    from structures.life.moves import Evidence
    from structures.models import Structure, User

# Given on the decision sheet, with its figures before one's eyes.
DECIDED: frozenset[str] = frozenset({"sanctioned", "approved"})


@dataclass(frozen=True, slots=True)
class Ways:
    """The next stage with what is missing for it, and the other ways the reader may take."""

    next_stage: str | None
    missing: tuple[Missing, ...]
    may_go_on: bool
    others: tuple[str, ...]

    @property
    def decided(self) -> bool:
        return self.next_stage in DECIDED


@dataclass(frozen=True, slots=True)
class Asked:
    """One move as it would be judged now."""

    against: tuple[Finding, ...]
    evidence: tuple[Evidence, ...]
    standing: Standing


def ways_of(user: User, structure: Structure) -> Ways:
    """Read what a structure waits for and where the user may take it."""
    left = left_at(structure)
    onward = (left or None) if structure.stage == HALTED else next_on_line(structure.stage)
    records, standing = records_of(structure, to=onward or ""), standing_of(structure)
    facts = settle(records.facts, standing.facts)
    evidence = (*records.evidence, *standing.evidence)
    roles = access.roles(user, access.place_of(structure))
    open_ways = [move for move in moves_from(structure.stage) if may_move(roles, move, facts)]
    others = [
        to
        for move in open_ways
        if move.name not in ("send back", "take back")
        for to in move.ends
        if to not in (onward, structure.stage)
        and not (structure.stage == CLOSED_OFF and to != _back_to(left))
    ]
    return Ways(
        next_stage=onward,
        missing=missing_for_next(structure.stage, evidence, facts, left=left),
        may_go_on=any(onward in move.ends for move in open_ways),
        others=tuple(dict.fromkeys([*others, *_backwards(structure.stage, open_ways)])),
    )


def judged(user: User, structure: Structure, to: str, reason: str = "") -> Asked:
    """Judge a move as the action would, without making it."""
    records, standing = records_of(structure, to=to), standing_of(structure)
    evidence = (*records.evidence, *standing.evidence)
    asked = MoveAsked(
        site=structure.site.code,
        stage=structure.stage,
        to=to,
        by=user.username,
        roles=access.roles(user, access.place_of(structure)),
        reason=reason,
        left=left_at(structure),
    )
    facts = settle(records.facts, standing.facts)
    return Asked(judge_move(asked, evidence, facts), evidence, standing)


def _backwards(stage: str, moves: Iterable[Move]) -> tuple[str, ...]:
    """Give the earlier stages to which one of the moves may send a structure, nearest first."""
    if stage not in LINE:
        return ()
    names = {move.name for move in moves}
    earlier = LINE[: LINE.index(stage)][::-1]
    if "send back" in names:
        return earlier
    return earlier[:1] if "take back" in names else ()


def _back_to(left: str) -> str | None:
    return return_stage(left) if left else None
