"""Doubts about readings as rows: what was sent, what is suggested, and nothing decided yet."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from structures.models import Repair
from structures.queries.wells import facts_of, past_of
from structures.water.quality import Sent, doubts_of, held

if TYPE_CHECKING:
    from collections.abc import Collection, Iterable, Sequence
    from datetime import datetime
    from uuid import UUID

    from structures.intake.doubt import Doubt
    from structures.models import Reading, Well
    from structures.water.quality import Past, WellFacts

VALUE_MOST: Final = 60  # characters of a value, as the table keeps it
AT_ONCE: Final = 500  # rows of one statement


def repair_of(reading_id: UUID, doubt: Doubt) -> Repair:
    """Give a doubt as the row that waits for a decision."""
    return Repair(
        reading_id=reading_id,
        field=doubt.field,
        rule=doubt.rule,
        raw=doubt.raw[:VALUE_MOST],
        suggested=doubt.suggested[:VALUE_MOST],
        told=f"{doubt.what} {doubt.remedy}".strip(),
    )


def open_doubts(
    well: Well,
    readings: Sequence[Reading],
    *,
    only: Collection[str] = (),
    now: datetime | None = None,
) -> int:
    """Hold readings that are there already against their well; gives how many wait because of it.

    A doubt that somebody has decided on, or that stands open, is not opened again. Without `now`
    no clock is looked at.
    """
    facts, past = facts_of(well), past_of(well)
    zone = ZoneInfo(well.watershed.district.zone)
    known = set(
        Repair.objects.filter(reading__in=[one.pk for one in readings]).values_list(
            "reading_id", "field", "rule"
        )
    )
    new = [
        repair
        for one in readings
        for repair in _new(one, facts, past, zone, now)
        if (not only or repair.rule in only) and (one.pk, repair.field, repair.rule) not in known
    ]
    Repair.objects.bulk_create(new, batch_size=AT_ONCE)
    return len({one.reading_id for one in new})


def _new(
    reading: Reading, facts: WellFacts, past: Past, zone: ZoneInfo, now: datetime | None
) -> Iterable[Repair]:
    sent = Sent(
        reading.read_at.astimezone(zone),
        reading.state,
        reading.dry,
        reading.depth_m,
        None if reading.mark is None else reading.mark.mark,
    )
    found = doubts_of(sent, facts, past, now=now or sent.read_at)
    return [repair_of(reading.pk, one) for one in held(found)]
