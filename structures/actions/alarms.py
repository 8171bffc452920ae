"""Alarms: a forecast of rain or a word from the watch upstream; while one is set nobody digs on."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist
from structures.actions.register import append
from structures.actions.trench import locked
from structures.errors import Refused
from structures.models import Alarm

if TYPE_CHECKING:
    from structures.models import Structure, User

SET: Final = "alarm set"
LIFTED: Final = "alarm lifted"
WHY_MOST: Final = 300


@transaction.atomic
def set_alarm(*, structure_id: int, why: str, by: User) -> Alarm:
    """Set the alarm of a trench; a second word on the same danger is the alarm that is set.

    Raises
    ------
    Refused
        If the user may not, or no reason is given.
    """
    structure = locked(structure_id)
    insist(by, Act.SET_ALARM, structure)
    said = _reason(why)
    standing = structure.alarms.filter(lifted_at__isnull=True).first()
    if standing is not None:
        return standing
    alarm = Alarm.objects.create(structure=structure, why=said, set_by=by, set_at=timezone.now())
    _enter(structure, by, SET, said)
    return alarm


@transaction.atomic
def lift_alarm(*, structure_id: int, why: str, by: User) -> Alarm:
    """Lift the alarm of a trench; nobody goes in before the next look all the same.

    Raises
    ------
    Refused
        If none is set, the user may not, or no reason is given.
    """
    structure = locked(structure_id)
    insist(by, Act.LIFT_ALARM, structure)
    alarm = structure.alarms.filter(lifted_at__isnull=True).first()
    if alarm is None:
        raise Refused("No alarm is set here.", where=structure.site.code)
    alarm.lifted_why = _reason(why)
    alarm.lifted_by, alarm.lifted_at = by, timezone.now()
    alarm.save()
    _enter(structure, by, LIFTED, alarm.lifted_why)
    return alarm


def _reason(why: str) -> str:
    said = why.strip()[:WHY_MOST]
    if not said:
        raise Refused("No reason is given.", where="why", remedy="Write it in a sentence.")
    return said


def _enter(structure: Structure, by: User, act: str, why: str) -> None:
    append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"{act} at {structure.site.code}",
        structure=structure,
        content={"site": structure.site.code, "why": why},
    )
