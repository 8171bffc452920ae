"""The wells of a site with what was read of them last."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from django.db.models import F, OuterRef, Subquery

from structures import access
from structures.models import Reading, Well

if TYPE_CHECKING:
    from datetime import date

    from structures.models import Site, User

IN_ORDER: Final = ("upstream", "downstream", "control", "other")


@dataclass(frozen=True, slots=True)
class LastRead:
    """A well with its last reading that was not left out, and its day at the place.

    All of it is None where nothing was read; `level_m` of a dry well is that of its bottom.
    """

    well: Well
    day: date | None
    level_m: float | None
    state: str
    dry: bool

    @property
    def moving(self) -> bool:
        """Whether the pump was on, or had been a while before: no level at rest."""
        return self.state not in ("", Reading.State.STATIC)


def wells_of(user: User, site: Site) -> list[LastRead]:
    """Wells of a site by role: upstream, downstream, control, other."""
    newest = (
        Reading.objects.filter(well=OuterRef("pk"))
        .exclude(standing=Reading.Standing.LEFT_OUT)
        .order_by("-read_at")
    )
    found = Well.objects.filter(site=site, watershed__in=access.watersheds(user)).annotate(
        read_at=Subquery(newest.values("read_at")[:1]),
        read_level_m=Subquery(newest.values("level_m")[:1]),
        read_state=Subquery(newest.values("state")[:1]),
        read_dry=Subquery(newest.values("dry")[:1]),
        zone=F("watershed__district__zone"),
    )
    return sorted(map(_last_read, found), key=lambda one: IN_ORDER.index(one.well.role))


def _last_read(well: Well) -> LastRead:
    at = well.read_at
    day = None if at is None else at.astimezone(ZoneInfo(well.zone)).date()
    return LastRead(well, day, well.read_level_m, well.read_state or "", bool(well.read_dry))
