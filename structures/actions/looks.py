"""The look into the open trench: kept as it was seen, judged by the rules, never taken back."""

from __future__ import annotations

from datetime import datetime
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID, uuid4

from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import as_documents
from structures.actions.trench import days_not_to_come, locked
from structures.errors import Refused
from structures.life.trench import WORDS, Look, judge_look
from structures.models import TrenchLook
from structures.queries.trench_day import asked_of_trench, zone_of

if TYPE_CHECKING:
    from datetime import date, time

    from structures.models import Strip, User

SEEN: Final = (
    "depth_m",
    "slope_as_cut",
    "spoil_back_m",
    "ladder_within_m",
    "crack",
    "sides",
    "water",
    "rain_since_last",
)


@transaction.atomic
def keep_look(
    *,
    structure_id: int,
    day: date,
    looked_at: time,
    by: User,
    strip: Strip | None = None,
    row_id: UUID | None = None,
    **said: Any,
) -> TrenchLook:
    """Keep a look. What counts is the worse of what was ticked and what the rules say of it.

    `said` are `result`, `weather` and what was seen. A look is never refused for what it found: it
    is kept, and its result is "stop", or "not looked" where an answer is blank.

    Raises
    ------
    Refused
        If the user may not look here, the day is still to come, or no result was ticked.
    """
    structure = locked(structure_id)
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, day)
    if said.get("result") not in WORDS:
        raise Refused("It is not said what was found.", where="result", remedy="Tick one of three.")
    seen = {key: said.get(key) for key in SEEN}
    seen |= {key: (said.get(key) or "").strip() for key in ("sides", "water")}
    at = datetime.combine(day, looked_at, zone_of(structure))
    where = structure.site.code if strip is None else f"strip {strip.number}"
    judged = judge_look(
        Look(day, at, said["result"], **seen), asked_of_trench(structure, strip), where
    )
    return TrenchLook.objects.create(
        id=row_id or uuid4(),
        structure=structure,
        strip=strip,
        day=day,
        looked_at=looked_at,
        by=by,
        weather=(said.get("weather") or "").strip(),
        result=judged.result,
        findings=as_documents(judged.findings),
        **seen,
    )
