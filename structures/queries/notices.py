"""What a person should look at today in the ground and at the trench, each line with its reason."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import timedelta
from typing import TYPE_CHECKING, Any, Final

from django.db.models import Min
from django.utils import timezone
from django.utils.translation import gettext as _

from structures import access
from structures.access import Act
from structures.life.stages import CLOSED_OFF
from structures.models import Alarm, Run
from structures.queries.measurements import visible_measurements
from structures.queries.repairs import waiting_repairs
from structures.queries.second_factor import resets_to_agree
from structures.queries.upkeep import last_restore_trial
from structures.queries.works import (
    hold_requests,
    looks_missing_today,
    open_clashes,
    visible_strips,
)

if TYPE_CHECKING:
    from collections.abc import Iterator
    from datetime import date, datetime

    from structures.models import User

FAILED_DAYS: Final = 7  # an older failure was seen or is of no use any more (project choice)
TRIAL_DAYS: Final = 90  # a backup not restored for longer is a hope (project choice)


@dataclass(frozen=True, slots=True)
class Notice:
    """One line: about what, why, since when, whether work stands still by it, and its page."""

    subject: str
    sentence: str
    since: date | datetime | None
    page: str
    args: tuple[Any, ...] = ()
    hold: bool = False


def notices_of_works(user: User) -> list[Notice]:
    """Lines of the ground and the trench for one person."""
    return [
        *_alarms(user),
        *_looks(user),
        *_holds(user),
        *_unseen(user),
        *_clashes(user),
        *_measurements(user),
        *_readings(user),
        *_runs(user),
        *_resets(user),
        *_upkeep(user),
    ]


def _alarms(user: User) -> Iterator[Notice]:
    mine = access.sites(user, Act.SET_ALARM)
    found = Alarm.objects.filter(lifted_at=None, structure__site__in=mine)
    for one in found.select_related("structure__site", "set_by").order_by("set_at"):
        words = _("Alarm by %(who)s: %(why)s Nobody digs on until it is lifted.")
        said = words % {"who": one.set_by.username, "why": one.why}
        code = one.structure.site.code
        yield Notice(code, said, one.set_at, "structures:works", (code,), hold=True)


def _looks(user: User) -> Iterator[Notice]:
    if not access.sites(user, Act.RECORD_WORKS).exists():
        return
    for one in looks_missing_today(user):
        code = one.structure.site.code
        said = _("The trench is open and today's look is missing: nobody enters.")
        yield Notice(code, said, one.today, "structures:works", (code,), hold=True)


def _holds(user: User) -> Iterator[Notice]:
    for one in hold_requests(user):
        code = one.strip.structure.site.code
        words = _("Strip %(strip)s asks that %(hold)s be seen; work waits.")
        said = words % {"strip": one.strip.number, "hold": one.hold}
        yield Notice(code, said, one.asked_at, "structures:hold", (one.pk,), hold=True)


def _unseen(user: User) -> Iterator[Notice]:
    mine = access.sites(user, Act.SEE_HOLD)
    found = visible_strips(user).filter(covered_unseen=True, structure__site__in=mine)
    for one in found.exclude(structure__stage=CLOSED_OFF).order_by("structure__site__code"):
        code = one.structure.site.code
        said = _("Strip %(strip)s was covered before it was seen.") % {"strip": one.number}
        args = (code, one.number)
        yield Notice(code, said, one.covered_on, "structures:strip", args)


def _clashes(user: User) -> Iterator[Notice]:
    mine = access.sites(user, Act.SETTLE_CLASH)
    for one in open_clashes(user).filter(record__site__in=mine):
        said = _("Two forms of one record came from phones: say which counts.")
        code = one.record.site.code
        yield Notice(code, said, one.received_at, "structures:clash", (one.pk,))


def _measurements(user: User) -> Iterator[Notice]:
    mine = access.sites(user, Act.MEASURE)
    found = visible_measurements(user).filter(structure__site__in=mine, checked_by=None)
    for one in found.exclude(measured_by=user):
        code = one.structure.site.code
        words = _("Measurement %(code)s by %(who)s is to be checked.")
        said = words % {"code": one.code, "who": one.measured_by.username}
        yield Notice(code, said, one.measured_on, "structures:measurement", (one.pk,))


def _readings(user: User) -> Iterator[Notice]:
    mine = access.watersheds(user, Act.DECIDE_REPAIR)
    found = waiting_repairs(user).filter(reading__well__watershed__in=mine)
    count = found.count()
    if count:
        first = found.aggregate(first=Min("reading__read_at"))["first"]
        said = _("Doubted readings to decide on: %(count)s.") % {"count": count}
        yield Notice(_("Wells"), said, first, "structures:repairs")


def _runs(user: User) -> Iterator[Notice]:
    since = timezone.now() - timedelta(days=FAILED_DAYS)
    found = Run.objects.filter(asked_by=user, state=Run.State.FAILED, finished_at__gte=since)
    for one in found.defer("params", "result").order_by("-finished_at"):
        said = _("It failed: %(why)s") % {"why": one.message}
        yield Notice(one.subject or one.kind, said, one.finished_at, "structures:run", (one.pk,))


def _resets(user: User) -> Iterator[Notice]:
    for one in resets_to_agree(user):
        words = _("%(who)s asks that a lost second step be taken away.")
        said = words % {"who": one.asked_by.username}
        yield Notice(one.user.username, said, one.asked_at, "structures:factor-resets")


def _upkeep(user: User) -> Iterator[Notice]:
    if not access.keeps_office(user):
        return
    trial = last_restore_trial()
    if trial is None:
        said = _("No restore of a backup was ever tried.")
    elif not trial.whole:
        said = _("The last restore that was tried failed.")
    elif timezone.now() - trial.at > timedelta(days=TRIAL_DAYS):
        said = _("No restore of a backup was tried for 90 days.")
    else:
        return
    yield Notice(_("Backup"), said, trial and trial.at, "structures:people")
