"""May this structure move, and if not, what is missing: all of it, each with what to do.

Rules SL-01 (papers) and SL-02 (roles) of the office's practice, maker is never checker, and the
named blocks of the table. What a paper says is not looked into here; a fact of it is.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.life.blocks import BLOCKS
from structures.life.move_table import find_move, moves_from, return_stage
from structures.life.papers import PAPERS
from structures.life.people import DISTRICT, PROGRAMME, title, whom
from structures.life.stages import CLOSED_OFF, HALTED, RISING, next_on_line

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import datetime

    from structures.life.blocks import Block
    from structures.life.facts import Facts
    from structures.life.move_table import Move

REASON_LEAST: Final = 10  # characters: less is no reason (project choice)


@dataclass(frozen=True, slots=True)
class Evidence:
    """A paper as a move asks for it: its kind, the digest of its content, who made it and when."""

    kind: str
    digest: str
    by: str
    at: datetime


@dataclass(frozen=True, slots=True)
class MoveAsked:
    """What somebody asks: from stage to stage, by whom, in which roles at that place.

    `left` is the stage at which the structure was halted or closed off; "" for all other moves.
    """

    site: str
    stage: str
    to: str
    by: str
    roles: frozenset[str]
    reason: str = ""
    left: str = ""


@dataclass(frozen=True, slots=True)
class Missing:
    """One line of "what is missing for the next stage": what, and who can bring it."""

    name: str
    what: str
    who: str


def judge_move(asked: MoveAsked, evidence: Iterable[Evidence], facts: Facts) -> tuple[Finding, ...]:
    """Give all that stands against a move; empty where it may be made.

    Every finding blocks. `field` names the role, the reason, the papers or the block.
    """
    move = find_move(asked.stage, asked.to)
    if move is None:
        return (_no_way(asked),)
    have = tuple(evidence)
    found = [
        *_judge_role(asked, move, facts),
        *_judge_reason(asked, move),
        *_judge_return(asked, move),
        *_judge_papers(asked, papers_of(move, facts), have),
        *_judge_own_work(asked, move, have),
    ]
    missing = _not_attached(papers_of(move, facts), have)
    for block in _blocks(move):
        said = _judge_block(block, facts, missing)
        if said:
            found.append(Finding(asked.site, block.name, *said, rule=block.rule))
    return tuple(found)


def missing_for_next(
    stage: str, evidence: Iterable[Evidence], facts: Facts, *, left: str = ""
) -> tuple[Missing, ...]:
    """Give what is missing for the next stage, papers first; empty where nothing follows.

    What follows a halt is the restart to where it left; a closed-off structure waits for nothing.

    Raises
    ------
    ValueError
        If there is no such stage.
    """
    to = (left or RISING) if stage == HALTED else next_on_line(stage)
    move = find_move(stage, to) if to else None
    if move is None:
        return ()
    missing = _not_attached(papers_of(move, facts), tuple(evidence))
    lines = [Missing(kind, PAPERS[kind].title, PAPERS[kind].who()) for kind in missing]
    for block in _blocks(move):
        said = _judge_block(block, facts, missing)
        if said:
            who = PAPERS[block.paper].who() if block.paper else whom(move.roles)
            lines.append(Missing(block.name, " ".join(said), who))
    return tuple(lines)


def papers_of(move: Move, facts: Facts) -> tuple[str, ...]:
    """Give the kinds of evidence a move asks for; an option paper besides where the cost moves."""
    if move.name == "restart" and facts.cost_moves is not False:
        return (*move.papers, "option-paper")
    return move.papers


def may_move(roles: Iterable[str], move: Move, facts: Facts) -> bool:
    """Tell whether one of the roles may make the move, papers and blocks aside."""
    return not set(_roles_of(move, facts)).isdisjoint(roles)


def _roles_of(move: Move, facts: Facts) -> tuple[str, ...]:
    """Roles that may; over the limit of the district the programme sanctions alone."""
    if move.name == "sanctioned" and facts.within_district_limit is not True:
        return (PROGRAMME,)
    return move.roles


def _judge_role(asked: MoveAsked, move: Move, facts: Facts) -> list[Finding]:
    if may_move(asked.roles, move, facts):
        return []
    who = whom(_roles_of(move, facts))
    said = f"{title(asked.roles)} cannot move to {asked.to}."
    if move.name == "sanctioned" and DISTRICT in asked.roles:
        said = (
            "Cannot be judged: whether the amount lies within the limit of the district."
            if facts.within_district_limit is None
            else "The amount lies over the limit of the district."
        )
    return [Finding(asked.site, "role", said, f"Ask {who}.", rule="SL-02")]


def _judge_reason(asked: MoveAsked, move: Move) -> list[Finding]:
    if not move.reason or len(asked.reason.strip()) >= REASON_LEAST:
        return []
    said = f"To move from {asked.stage} to {asked.to} a reason is needed."
    return [Finding(asked.site, "reason", said, "Write it in a sentence; it stays in the thread.")]


def _judge_return(asked: MoveAsked, move: Move) -> list[Finding]:
    if not move.to_where_it_left:
        return []
    if not asked.left:
        said = f"Cannot be judged: the stage at which it was {asked.stage}."
        return [Finding(asked.site, "to", said, "Look it up in the thread of the structure.")]
    back = return_stage(asked.left) if asked.stage == CLOSED_OFF else asked.left
    if asked.to == back:
        return []
    said = f"It was {asked.stage} at {asked.left} and comes back as {back}, not {asked.to}."
    return [Finding(asked.site, "to", said, f"Ask for {back}.")]


def _not_attached(papers: tuple[str, ...], have: tuple[Evidence, ...]) -> tuple[str, ...]:
    kinds = {one.kind for one in have}
    return tuple(kind for kind in papers if kind not in kinds)


def _judge_papers(
    asked: MoveAsked, papers: tuple[str, ...], have: tuple[Evidence, ...]
) -> list[Finding]:
    missing = _not_attached(papers, have)
    if not missing:
        return []
    names = ", ".join(PAPERS[kind].title for kind in missing)
    who = " ".join(f"{_headed(PAPERS[kind].title)}: {PAPERS[kind].who()}." for kind in missing)
    return [
        Finding(asked.site, "papers", f"Missing for {asked.to}: {names}.", who, rule="SL-01"),
    ]


def _judge_own_work(asked: MoveAsked, move: Move, have: tuple[Evidence, ...]) -> list[Finding]:
    own = tuple(
        dict.fromkeys(
            one.kind for one in have if one.kind in move.others_work and one.by == asked.by
        )
    )
    if not own:
        return []
    names = ", ".join(PAPERS[kind].title for kind in own)
    said = f"Your own work, which somebody else must decide on: {names}."
    return [Finding(asked.site, "maker", said, f"Ask another person: {whom(move.roles)}.")]


def _headed(words: str) -> str:
    return words[:1].upper() + words[1:]


def _blocks(move: Move) -> tuple[Block, ...]:
    return tuple(BLOCKS[name] for name in move.blocks)


def _judge_block(block: Block, facts: Facts, missing: tuple[str, ...]) -> tuple[str, str] | None:
    stands = block.judge(facts)
    if stands is None:
        if block.paper in missing:
            return None
        return f"Cannot be judged: {block.doubt}.", "Enter it first."
    if not stands:
        return None
    return block.says.format(list=", ".join(stands)), block.remedy


def _no_way(asked: MoveAsked) -> Finding:
    if asked.stage == asked.to:
        return Finding(asked.site, "to", f"It is {asked.to} already.", "Nothing to do.")
    said = f"No move leads from {asked.stage or 'nowhere'} to {asked.to}."
    ways = [to for move in moves_from(asked.stage) for to in move.ends if to != asked.stage]
    open_ways = tuple(dict.fromkeys(to for to in ways if find_move(asked.stage, to)))
    remedy = f"From here: {', '.join(open_ways)}." if open_ways else "Nothing follows."
    return Finding(asked.site, "to", said, remedy)
