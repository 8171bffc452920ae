"""Moving a structure from stage to stage: judged under its lock, written down, entered in the register."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max

from structures.access import Act, insist, place_of, roles
from structures.actions.design import draw_design, freeze_design, settled_line
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.errors import Refused
from structures.life.move_table import find_move
from structures.life.moves import MoveAsked, judge_move
from structures.models import Move, Site, Structure
from structures.queries.delegation import delegator_of
from structures.queries.districts import today_of
from structures.queries.evidence import left_at, records_of, settle
from structures.queries.sites import newest_survey

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.life.moves import Evidence
    from structures.models import Design, Paper, User

MOVED: Final = "moved"
SENT_BACK: Final = "sent back"
BACKWARDS: Final = frozenset({"send back", "take back"})


@transaction.atomic
def move_stage(
    *,
    structure_id: int,
    to: str,
    by: User,
    reason: str = "",
    evidence: Sequence[Evidence] = (),
    known: Mapping[str, Any] | None = None,
) -> Move:
    """Move a structure on, back or aside; a move back keeps what was sent and says why.

    Parameters
    ----------
    evidence
        What was made outside the records of metres: estimate, sanctions, contract, bills.
    known
        Facts of `life.facts` that those records answer.

    Raises
    ------
    Refused
        With every reason why not; `findings` names role, papers and blocks.
    """
    structure = locked(structure_id)
    insist(by, Act.MOVE, structure)
    records = records_of(structure, to=to)
    attached = (*records.evidence, *evidence)
    facts = settle(records.facts, known or {})
    asked = MoveAsked(
        site=structure.site.code,
        stage=structure.stage,
        to=to,
        by=by.username,
        roles=roles(by, place_of(structure)),
        reason=reason,
        left=left_at(structure),
    )
    against = judge_move(asked, attached, facts)
    if against:
        raise refusal(against, "move")
    return _moved(structure, to, by, reason, attached, records.papers)


def locked(structure_id: int) -> Structure:
    """Lock a structure: whoever moves it looks at it and writes under one lock."""
    return (
        Structure.objects.select_for_update(of=("self",))
        .select_related("site__watershed__district")
        .get(pk=structure_id)
    )


def _moved(
    structure: Structure,
    to: str,
    by: User,
    reason: str,
    attached: Sequence[Evidence],
    papers: Sequence[Paper],
) -> Move:
    move, district = find_move(structure.stage, to), structure.site.watershed.district
    wanted = set(move.papers) if move.name not in BACKWARDS else None
    sent = [one for one in attached if wanted is None or one.kind in wanted]
    filed = [one for one in papers if wanted is None or one.kind in wanted]
    told = [{"kind": one.kind, "digest": one.digest, "by": one.by} for one in sent]
    instead_of = delegator_of(by, Act.MOVE, structure)
    entry = append(
        district=district,
        by=by,
        act=SENT_BACK if move.name in BACKWARDS else MOVED,
        subject=f"{structure.site.code} from {structure.stage} to {to}",
        structure=structure,
        content={
            "from": structure.stage,
            "to": to,
            "reason": reason.strip(),
            "evidence": told,
            **({} if instead_of is None else {"instead_of": instead_of.username}),
        },
    )
    day = today_of(district)
    newest = structure.moves.aggregate(newest=Max("number"))["newest"] or 0
    row = Move.objects.create(
        structure=structure,
        number=newest + 1,
        from_stage=structure.stage,
        to_stage=to,
        day=day,
        reason=reason.strip(),
        evidence=told,
        by=by,
        entry=entry,
    )
    row.papers.set(filed)
    if to == "checked":
        freeze_design(structure.designs.order_by("-version").values_list("pk", flat=True)[0])
    Structure.objects.filter(pk=structure.pk).update(stage=to, since=day)
    return row


@transaction.atomic
def draw_wall(*, site_id: int, by: User) -> Design:
    """Draw the wall on the newest survey and the line settled on it, with the settings in force.

    Raises
    ------
    Refused
        If there is no survey, or no rock line was settled on it.
    """
    site = Site.objects.select_related("watershed__district", "structure").get(pk=site_id)
    insist(by, Act.DRAW, site)
    survey = newest_survey(site)
    if survey is None:
        raise Refused(f"{site.code} has no survey.", remedy="Hand in its survey first.")
    survey.site = site
    line = settled_line(survey, None)
    if line is None:
        raise Refused(
            "No rock line is settled on the newest survey.",
            where=site.code,
            remedy="Settle it; a wall is drawn on a line that somebody answers for.",
        )
    return draw_design(survey=survey, rock_line=line, wall={}, by=by)
