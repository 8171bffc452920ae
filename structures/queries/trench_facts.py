"""What the records of the trench say when a structure is to be moved: holds, looks, strips, alarms."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from structures.life.chain import content_digest
from structures.life.moves import Evidence
from structures.life.stages import COVERED, DIGGING, RISING
from structures.models import HoldPoint, TrenchLook
from structures.queries.trench_day import alarm_since, look_that_counts

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from structures.models import Strip, Structure

# Source: the office's practice, table of stages, column "must be attached".
ASKED: Final[dict[str, tuple[str, ...]]] = {
    DIGGING: ("H1",),
    RISING: ("H2", "H3", "H4", "H5"),
    COVERED: ("H6", "H7", "H8", "H9"),
}
SEEN: Final = (HoldPoint.Result.GO, HoldPoint.Result.NOTE)


def trench_evidence(structure: Structure, today: date) -> Iterable[Evidence]:
    """Give the hold points that were seen, and the look of the day if it found no stop."""
    seen = (
        HoldPoint.objects.filter(strip__structure=structure, result__in=SEEN)
        .select_related("seen_by")
        .order_by("seen_at", "pk")
    )
    rows = list(seen)
    if rows:
        told = {"seen": [[str(one.pk), one.hold, one.result] for one in rows]}
        last = rows[-1]
        yield Evidence("hold-points", content_digest(told), last.seen_by.username, last.seen_at)
    look = look_that_counts(structure, today)
    if look is not None and look.result == TrenchLook.Result.NONE_FOUND:
        told = {"look": [str(look.pk), str(look.day), look.result]}
        yield Evidence("trench-look", content_digest(told), look.by.username, look.received_at)


def trench_facts(structure: Structure, to: str, today: date) -> dict[str, Any]:
    """Give the facts of the trench; what nobody wrote down is left out."""
    strips = list(structure.strips.prefetch_related("holds").order_by("number"))
    look = look_that_counts(structure, today)
    known: dict[str, Any] = {
        "alarm_set": structure.alarms.filter(lifted_at__isnull=True).exists(),
        "trench_look_today": look is not None
        and look.result == TrenchLook.Result.NONE_FOUND
        and alarm_since(look, structure.alarms.all(), structure) is None,
    }
    open_now = tuple(str(one) for one in strips if one.stands in ("open", "halted"))
    never = tuple(f"{one}, not begun" for one in strips if one.stands == "not begun")
    known["strips_open"] = (*open_now, *never) if to == COVERED else open_now
    if not strips:
        return known
    seen = {one.number: _seen(one) for one in strips}
    at_work = [one for one in strips if one.opened_on is not None and one.covered_on is None]
    known["rock_seen"] = any("H3" in seen[one.number] for one in at_work or strips)
    known["water_in_trench"] = False if any("H5" in seen[one.number] for one in at_work) else None
    if to in ASKED:
        known["holds_not_seen"] = _not_seen(ASKED[to], strips, seen, every=to == COVERED)
    return known


def _seen(strip: Strip) -> frozenset[str]:
    """Give the hold points whose last attempt was seen and let go on; layers count as H7."""
    last: dict[str, HoldPoint] = {}
    for hold in sorted(strip.holds.all(), key=lambda one: one.attempt):
        last[hold.hold] = hold
    return frozenset(one.hold.partition(".")[0] for one in last.values() if one.result in SEEN)


def _not_seen(
    asked: tuple[str, ...],
    strips: list[Strip],
    seen: dict[int, frozenset[str]],
    *,
    every: bool,
) -> tuple[str, ...]:
    """Name what was not seen: on every strip, or on the one that is nearest to it.

    A strip that was covered unseen keeps its mark instead; nobody can look any more.
    """
    lacking = [
        tuple(f"{hold} of {strip}" for hold in asked if hold not in seen[strip.number])
        for strip in strips
        if not (every and strip.covered_unseen)
    ]
    if every:
        return tuple(one for strip in lacking for one in strip)
    return min(lacking, key=len)
