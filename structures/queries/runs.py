from __future__ import annotations

from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from django.db.models import Q, Value
from django.db.models.functions import Concat
from django.utils import timezone

from structures import access
from structures.models.run import Run

if TYPE_CHECKING:
    from datetime import date
    from uuid import UUID

    from django.db.models import QuerySet

    from structures.models import District, User

SITE: Final = "site "  # before the code, in the subject of a run on a site


def runs_of_kind(kind: str) -> QuerySet[Run]:
    return Run.objects.filter(kind=kind)


def visible_runs(user: User) -> QuerySet[Run]:
    """Runs the user asked for, and those on sites that the user may see."""
    subjects = access.sites(user).annotate(run_subject=Concat(Value(SITE), "code"))
    # A run without an account carries the name of a file as its subject, which may be any text.
    on_sites = Q(asked_by__isnull=False, subject__in=subjects.values("run_subject"))
    mine = Q(asked_by=user) | on_sites
    return Run.objects.filter(mine).select_related("asked_by").defer("params", "result")


def runs_of_site(user: User, code: str) -> QuerySet[Run]:
    """Runs on one site, newest first."""
    return visible_runs(user).filter(subject=site_subject(code))


def site_subject(code: str) -> str:
    """What a run on a site carries as its subject."""
    return f"{SITE}{code}"


def site_of_run(run: Run) -> str | None:
    """Code of the site a run is about; None where it is about none."""
    on_site = run.asked_by_id is not None and run.subject.startswith(SITE)
    return run.subject.removeprefix(SITE) if on_site else None


def day_asked(run_id: UUID, district: District) -> date:
    """The day of a run's request as its district counts it."""
    asked = Run.objects.only("created_at").get(pk=run_id).created_at
    return district.as_of or timezone.localdate(asked, timezone=ZoneInfo(district.zone))
