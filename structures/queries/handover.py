"""What a village takes over: where the wall lies, which wells are read from which mark and by whom."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.db.models import Prefetch

from structures.models import MeasuringPoint, Well
from structures.queries.districts import today_of
from structures.queries.verdicts import NOT_KNOWN, completed_on, standing_verdict
from structures.queries.wells import wells_of_site

if TYPE_CHECKING:
    from datetime import date

    from structures.models import Paper, Strip, Structure


@dataclass(frozen=True, slots=True)
class WellHanded:
    """A well with the mark in use; who reads it stands on the filed sheet, "" until then."""

    well: Well
    mark: MeasuringPoint | None
    reader: str


@dataclass(frozen=True, slots=True)
class HandoverSheet:
    """Everything on the sheet; what is None is not known."""

    structure: Structure
    today: date
    from_m: float | None
    to_m: float | None
    covered_on: date | None
    markers: int | None
    wells: tuple[WellHanded, ...]
    unseen: tuple[Strip, ...]
    word: str
    filed: Paper | None

    @property
    def has_control(self) -> bool:
        return any(one.well.role == Well.Role.CONTROL for one in self.wells)

    @property
    def unread(self) -> tuple[WellHanded, ...]:
        """Wells for which nobody is named."""
        return tuple(one for one in self.wells if not one.reader)

    @property
    def unmarked(self) -> tuple[WellHanded, ...]:
        return tuple(one for one in self.wells if one.mark is None)


def handover_of(structure: Structure) -> HandoverSheet:
    strips = list(structure.strips.order_by("number"))
    filed = structure.papers.filter(kind="handover").order_by("-version").first()
    readers = {} if filed is None else _readers(filed)
    restored = structure.papers.filter(kind="restored-bed").order_by("-version").first()
    verdict = standing_verdict(structure)
    codes = [one.pk for one in wells_of_site(structure.site)]
    now = Prefetch("marks", MeasuringPoint.objects.filter(valid_to__isnull=True), to_attr="in_use")
    rows = {one.pk: one for one in Well.objects.filter(pk__in=codes).prefetch_related(now)}
    return HandoverSheet(
        structure,
        today_of(structure.site.watershed.district),
        strips[0].from_m if strips else None,
        strips[-1].to_m if strips else None,
        completed_on(structure),
        None if restored is None else restored.content["markers"],
        tuple(
            WellHanded(rows[pk], next(iter(rows[pk].in_use), None), readers.get(rows[pk].code, ""))
            for pk in codes
        ),
        tuple(one for one in strips if one.covered_unseen),
        NOT_KNOWN if verdict is None else verdict.word,
        filed,
    )


def _readers(filed: Paper) -> dict[str, str]:
    """Who reads which well: the sheet names a well by its code, perhaps with its name behind."""
    return {row["well"].split()[0]: row["reader"] or "" for row in filed.content["wells"]}
