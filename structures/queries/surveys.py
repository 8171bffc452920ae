"""Surveys as records again, for pages that show them and runs that compute with them."""

from __future__ import annotations

import json
from dataclasses import replace
from functools import lru_cache
from typing import TYPE_CHECKING, Any, Final

from django.db.models import Count

from structures import access
from structures.errors import Finding
from structures.intake.pack import Note
from structures.intake.survey_pack import read_pack_bytes
from structures.models import RockLine, Sounding, Survey

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from django.db.models import QuerySet

    from structures.intake.pack import SurveyPack
    from structures.models import User

NAME = "survey.json"  # how findings on a kept survey name it
PACKS_KEPT: Final = 32  # packs in memory, some 50 kB each: what a handful of people try at once


def visible_surveys(user: User) -> QuerySet[Survey]:
    """Surveys of all sites the user may see, newest first, without the pack itself."""
    found = Survey.objects.filter(site__in=access.sites(user)).defer("pack", "notes")
    return (
        found.select_related("site", "by", "upload")
        .annotate(line_count=Count("rock_lines", distinct=True))
        .order_by("-at", "-pk")
    )


def surveys_of(user: User, code: str) -> QuerySet[Survey]:
    return visible_surveys(user).filter(site__code=code).order_by("-version")


def visible_soundings(user: User) -> QuerySet[Sounding]:
    found = Sounding.objects.filter(survey__site__in=access.sites(user))
    return found.select_related("survey__site").prefetch_related("readings")


def visible_rock_lines(user: User) -> QuerySet[RockLine]:
    found = RockLine.objects.filter(survey__site__in=access.sites(user))
    return found.select_related("survey__site", "by").order_by("-at", "-pk")


def pack_of(
    survey: Survey,
    *,
    points: Sequence[Mapping[str, float]] | None = None,
    wall: Mapping[str, Any] | None = None,
) -> SurveyPack:
    """Give a kept survey as a pack, with a settled rock line or other wall settings in their place.

    What was doubted when it was handed in is doubted still; what line or wall add comes behind it.

    Raises
    ------
    Refused
        If line or wall cannot be used; `findings` names each point and field.
    """
    plain = _read(survey.pack)
    kept = tuple(Finding(**one) for one in survey.findings)
    notes = tuple(Note(**one) for one in survey.notes)
    if points is None and not wall:
        return replace(plain, findings=kept, notes=notes)
    document = dict(survey.pack)
    if points is not None:
        document["rock_line"] = list(points)
    document["wall"] = {**document.get("wall", {}), **(wall or {})}
    changed = _read(document)
    added = tuple(one for one in changed.findings if one not in plain.findings)
    return replace(changed, findings=kept + added, notes=notes)


def names_of_tests(pack: SurveyPack) -> tuple[str, ...]:
    """Name the tests a rock line can rest on: `bore@30`, `probe@36`, `sounding@S1`."""
    return (
        *(f"{test.method}@{test.offset_m:g}" for test in pack.rock),
        *(f"probe@{probe.offset_m:g}" for probe in pack.probes),
        *(f"sounding@{sounding.label}" for sounding in pack.soundings),
        *(f"refraction@{line.label}" for line in pack.refraction),
    )


def _read(document: Mapping[str, Any]) -> SurveyPack:
    return _read_text(json.dumps(document, ensure_ascii=False))


@lru_cache(maxsize=PACKS_KEPT)
def _read_text(text: str) -> SurveyPack:
    """Read a document once as long as somebody works with it; a pack never changes."""
    return read_pack_bytes(NAME, text.encode())
