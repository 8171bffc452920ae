"""Complaints as far as their reader may see the site, and what the readings of the well say."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import TYPE_CHECKING, Final

from structures import access
from structures.documents.complaint_answer import draft_answer, mark_sentences
from structures.models import Complaint, Well
from structures.queries.wells_of_wall import completed_on, rain_of, readings_for, rules_of
from structures.water.one_well import explain_well

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import Site, User
    from structures.water.one_well import Explained

FEBRUARY: Final = 2


@dataclass(frozen=True, slots=True)
class Looked:
    """What a complaint's well says: since when, the shares of its change, and a draft answer."""

    since: date | None
    completed: date | None
    explained: Explained | None
    draft: str

    @property
    def sentences(self) -> tuple[str, ...]:
        """What was measured, in plain words; none where the readings are too few."""
        found = self.explained
        return () if found is None else (*found.sentences(), *mark_sentences(found))


def visible_complaints(user: User) -> QuerySet[Complaint]:
    """Complaints with their site, well and answers, the newest first."""
    found = Complaint.objects.filter(site__in=access.sites(user))
    return (
        found.select_related("site__watershed__district", "site__structure", "well", "by")
        .prefetch_related("answers__by")
        .order_by("-received_on", "-pk")
    )


def complaints_of(user: User, site: Site) -> QuerySet[Complaint]:
    return visible_complaints(user).filter(site=site)


def look_into(complaint: Complaint, since: date | None = None) -> Looked:
    """Look into the readings of a complaint's well since a day, else since its water year began.

    Source: handbook 10.1, 10.5 and 10.10, for one well.
    """
    site, well = complaint.site, complaint.well
    completed = completed_on(site)
    day = since or _water_year_of(complaint, completed)
    explained = None
    if well is not None and completed is not None and day is not None:
        controls = Well.objects.filter(watershed=site.watershed_id, role=Well.Role.CONTROL)
        wells = [well, *controls.exclude(pk=well.pk)]
        explained = explain_well(
            readings_for(wells, site),
            well.code,
            completed,
            max(day, completed),
            rules_of(site.watershed.district),
            rain=rain_of(site.watershed),
        )
    code = "" if well is None else well.code
    draft = draft_answer(complaint.received_on, code, completed, explained)
    return Looked(day, completed, explained, draft)


def _water_year_of(complaint: Complaint, completed: date | None) -> date | None:
    """Give the first day of the water year in which the complaint came, not before completion."""
    if completed is None:
        return None
    district, on = complaint.site.watershed.district, complaint.received_on
    month, day = district.water_year_month, district.water_year_day
    year = on.year if (on.month, on.day) >= (month, day) else on.year - 1
    return max(date(year, month, min(day, 28) if month == FEBRUARY else day), completed)
