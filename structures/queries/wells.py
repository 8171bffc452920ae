"""Wells that a user may see, and what one of them has: marks, last readings, what is doubted."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from django.db.models import Count, Max, OuterRef, Q, Subquery

from structures import access
from structures.drawing.map import Spot
from structures.errors import Finding
from structures.models import MeasuringPoint, Reading, Repair, Well
from structures.queries.districts import today_of
from structures.water.marks import Mark, mark_findings
from structures.water.quality import Past, WellFacts
from structures.water.well_rules import Facts, Known, well_findings

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from django.db.models import QuerySet

    from structures.models import Site, User

LAST_SHOWN: Final = 24  # readings on a well's sheet: two years of monthly ones
SILENT_DAYS: Final = 60  # field practice 9, no. 21
COUNTS: Final = (Reading.Standing.TAKEN, Reading.Standing.REPAIRED)
ROLE_ORDER: Final = ("upstream", "control", "downstream", "other")


def visible_wells(user: User) -> QuerySet[Well]:
    """Wells with when they were last read and how many of their readings wait for a decision."""
    found = Well.objects.filter(watershed__in=access.watersheds(user))
    found = found.select_related("watershed__district", "site").order_by("code")
    return found.annotate(
        last_read_at=Max("readings__read_at"),
        waiting=Count("readings", filter=Q(readings__standing=Reading.Standing.HELD)),
    )


def search_wells(user: User, text: str = "", **chosen: str) -> QuerySet[Well]:
    """Wells by code, name, other name, site or village; `chosen` may name watershed, site, role."""
    found = visible_wells(user)
    for word in text.split():
        found = found.filter(
            Q(code__icontains=word)
            | Q(name__icontains=word)
            | Q(other_names__icontains=word)
            | Q(site__code__icontains=word)
            | Q(site__name__icontains=word)
        )
    paths = {"watershed": "watershed__code", "site": "site__code", "role": "role"}
    for key, value in chosen.items():
        if value:
            found = found.filter(**{paths[key]: value})
    return found


def places_of(wells: Iterable[Well]) -> list[Spot]:
    """Wells with a position as the map shows them."""
    return [
        Spot(one.code, one.name, (one.lon, one.lat), f"well {one.role}")
        for one in wells
        if one.lat is not None and one.lon is not None
    ]


@dataclass(frozen=True, slots=True)
class WellSheet:
    """One well with its marks newest first, last readings newest first, and what is doubted."""

    well: Well
    marks: tuple[MeasuringPoint, ...]
    readings: tuple[Reading, ...]
    findings: tuple[Finding, ...]
    today: date
    zone: str
    open_repairs: int

    @property
    def mark_now(self) -> MeasuringPoint | None:
        return next((one for one in self.marks if one.valid_to is None), None)

    @property
    def days_silent(self) -> int | None:
        """Days since the last reading where that is long; None where it was read, or never."""
        if not self.readings:
            return None
        last = self.readings[0].read_at.astimezone(ZoneInfo(self.zone)).date()
        days = (self.today - last).days
        return days if days > SILENT_DAYS else None


def well_sheet(user: User, code: str) -> WellSheet | None:
    """Everything on one well; None where there is none that the user may see."""
    well = visible_wells(user).filter(code=code).first()
    if well is None:
        return None
    marks = tuple(well.marks.select_related("by", "photo").order_by("-valid_from"))
    last = well.readings.select_related("mark", "upload", "by").order_by("-read_at")[:LAST_SHOWN]
    district = well.watershed.district
    return WellSheet(
        well,
        marks,
        tuple(last),
        findings_of(well),
        today_of(district),
        district.zone,
        Repair.objects.filter(reading__well=well, decision="").count(),
    )


def findings_of(well: Well) -> tuple[Finding, ...]:
    """What is doubted about a well today: by its own rules, its marks, and what a run found."""
    others = [
        known_of(one)
        for one in Well.objects.filter(watershed=well.watershed_id).exclude(pk=well.pk)
    ]
    kept = [one for one in well.findings if one.get("rule") != "kept apart"]
    apart = [one["where"] for one in well.findings if one.get("rule") == "kept apart"]
    today = today_of(well.watershed.district)
    return (
        *well_findings(facts_for_rules(well), others, today=today, kept_apart=apart),
        *mark_findings(well.code, marks_of(well)),
        *(Finding(**one) for one in kept),
    )


def known_of(well: Well) -> Known:
    names = tuple(name for name in (well.name, *well.other_names) if name)
    placed = well.lat is not None and well.lon is not None
    return Known(well.code, names, (well.lon, well.lat) if placed else None)


def facts_for_rules(well: Well) -> Facts:
    return Facts(
        known_of(well),
        well.role,
        well.bottom_below_ground_m,
        well.bottom_sounded_on,
        well.upstream_of_wall_m,
    )


def marks_of(well: Well) -> tuple[Mark, ...]:
    """Marks as the rules take them, in the order of their days."""
    return tuple(mark_of(one) for one in well.marks.all().order_by("valid_from"))


def mark_of(one: MeasuringPoint) -> Mark:
    # A mark taken over from before, whose photo stands elsewhere, says so in a finding of its own.
    pictured = one.photo_id is not None or any("photo" in f.get("field", "") for f in one.findings)
    return Mark(
        one.mark,
        one.valid_from,
        one.valid_to,
        one.level_m,
        one.height_above_ground_m,
        shown=pictured and bool(one.witness),
    )


def facts_of(well: Well) -> WellFacts:
    """What a reading of the well is held against."""
    return WellFacts(
        well.code,
        marks_of(well),
        well.ground_level_m,
        well.bottom_below_ground_m,
        well.existed_from,
        well.watershed.district.water_year_month,
    )


def past_of(well: Well) -> Past:
    """Readings of a well that count, static and wet."""
    zone = ZoneInfo(well.watershed.district.zone)
    rows = Reading.objects.filter(
        well=well,
        state=Reading.State.STATIC,
        dry=False,
        standing__in=COUNTS,
        level_m__isnull=False,
    ).order_by("read_at")
    return Past(
        sorted(
            (at.astimezone(zone).date(), level)
            for at, level in rows.values_list("read_at", "level_m")
        )
    )


def wells_of_site(site: Site) -> list[Well]:
    """A site's own wells and the control wells of its watershed, those of the effect first."""
    found = Well.objects.filter(watershed=site.watershed_id).filter(
        Q(site=site) | Q(role=Well.Role.CONTROL)
    )
    return sorted(found, key=lambda one: (ROLE_ORDER.index(one.role), one.code))


def pipes_of(user: User, site: Site) -> list[Well]:
    """Observation pipes of a site, each with the level of the mark in use as `mark_level_m`."""
    now = MeasuringPoint.objects.filter(well=OuterRef("pk"), valid_to__isnull=True)
    found = visible_wells(user).filter(site=site, kind=Well.Kind.PIPE)
    found = found.annotate(mark_level_m=Subquery(now.values("level_m")[:1]))
    return sorted(found, key=lambda one: (ROLE_ORDER.index(one.role), one.code))
