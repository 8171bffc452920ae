"""Any move of a structure, with what money says of it handed down as values."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from django.db import transaction

from costing.queries.standing import standing_of
from structures.actions.stage import locked, move_stage

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.models import Move, User


@transaction.atomic
def move(
    *,
    structure_id: int,
    to: str,
    by: User,
    reason: str = "",
    known: Mapping[str, Any] | None = None,
) -> Move:
    """Move a structure on, back or aside.

    Parameters
    ----------
    known
        Facts that the caller has just established under the same lock.

    Raises
    ------
    Refused
        With every reason why not.
    """
    structure = locked(structure_id)
    standing = standing_of(structure)
    return move_stage(
        structure_id=structure_id,
        to=to,
        by=by,
        reason=reason,
        evidence=standing.evidence,
        known={**standing.facts, **(known or {})},
    )
