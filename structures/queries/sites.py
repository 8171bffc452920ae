"""Sites that a user may see, and what one of them has so far."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from django.db.models import OuterRef, Q, Subquery

from structures import access
from structures.models import LongProfilePoint, RockLine, Site, Survey
from structures.queries.verdicts import with_verdict

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import Design, User, Watershed


def visible_sites(user: User) -> QuerySet[Site]:
    """Sites with stage, watershed, stream, what was handed in last and the word on their wall."""
    newest = Survey.objects.filter(site=OuterRef("pk")).order_by("-version")
    return (
        with_verdict(access.sites(user))
        .select_related("watershed__district", "stream", "structure")
        .annotate(
            newest_survey_id=Subquery(newest.values("pk")[:1]),
            newest_survey_version=Subquery(newest.values("version")[:1]),
            newest_survey_at=Subquery(newest.values("at")[:1]),
        )
    )


def search_sites(user: User, text: str) -> QuerySet[Site]:
    """Sites by code, name, village, stream or watershed, over all that the user may see."""
    found = visible_sites(user)
    for word in text.split():
        found = found.filter(
            Q(code__icontains=word)
            | Q(name__icontains=word)
            | Q(village_upstream__icontains=word)
            | Q(village_downstream__icontains=word)
            | Q(stream__name__icontains=word)
            | Q(watershed__name__icontains=word)
            | Q(watershed__code__icontains=word)
        )
    return found


def search_watersheds(user: User, text: str) -> QuerySet[Watershed]:
    found = access.watersheds(user).select_related("district")
    for word in text.split():
        found = found.filter(
            Q(code__icontains=word) | Q(name__icontains=word) | Q(streams__name__icontains=word)
        )
    return found.distinct()


@dataclass(frozen=True, slots=True)
class SiteSheet:
    """One site with its newest survey, the line settled on it and the newest design; None is none."""

    site: Site
    survey: Survey | None
    rock_line: RockLine | None
    design: Design | None


def site_sheet(user: User, code: str) -> SiteSheet:
    """Everything on one site that needs no money.

    Raises
    ------
    Site.DoesNotExist
        If there is no such site where the user serves.
    """
    site = visible_sites(user).get(code=code)
    survey = newest_survey(site)
    line = None if survey is None else newest_rock_line(survey)
    design = site.structure.designs.select_related("by").first()
    return SiteSheet(site, survey, line, design)


def newest_survey(site: Site) -> Survey | None:
    return site.surveys.select_related("by", "upload").order_by("-version").first()


def newest_rock_line(survey: Survey) -> RockLine | None:
    return survey.rock_lines.select_related("by").order_by("-version").first()


def long_profile(user: User, code: str) -> QuerySet[LongProfilePoint]:
    return LongProfilePoint.objects.filter(site__in=access.sites(user), site__code=code)


def bed_on_profile_m(site: Site) -> float | None:
    """Level of the bed at the site on its long profile; None where the profile does not reach it."""
    points = list(site.long_profile.values_list("distance_upstream_m", "bed_level_m"))
    if not points or not points[0][0] <= 0.0 <= points[-1][0]:
        return None
    return float(np.interp(0.0, *zip(*points, strict=True)))
