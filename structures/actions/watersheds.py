"""Entering watersheds and courses of streams from GeoJSON, and long profiles from a list."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, NamedTuple

from django.db import transaction
from simple_history.utils import bulk_create_with_history

from structures import access
from structures.access import Act, may
from structures.actions.courses import (
    Basin,
    Course,
    course_of,
    keep_courses,
    known_basins,
    place_courses,
)
from structures.actions.inbox import mark_kept, receive_file, refuse_same_file, told_of
from structures.actions.refusals import as_documents, blocking, field_findings, refusal
from structures.actions.site_rows import read_profile_point, read_rows
from structures.errors import Finding, Refused
from structures.ground.course import KINDS
from structures.ground.place import read_outline
from structures.intake.json_form import read_json
from structures.intake.tree import Ledger
from structures.models import (
    District,
    GaugeWeight,
    LongProfilePoint,
    Site,
    Stream,
    Upload,
    Watershed,
)

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.models import User

REACH_LEAST_M: Final = 100.0  # LP-01, each way
WEIGHT_SLACK: Final = 1e-6  # weights typed with some decimals still add up to one
FEATURES: Final = (
    "Send a FeatureCollection of polygons with code and name, or of lines with stream."
)


class Draft(NamedTuple):
    """A watershed with its streams and gauges, not yet kept."""

    watershed: Watershed
    streams: list[str]
    gauges: dict[str, float]
    findings: list[Finding]


class Shapes(NamedTuple):
    """What a file of shapes added: watersheds, and streams that it gave a course."""

    watersheds: list[Watershed]
    streams: list[Stream]

    @property
    def names(self) -> tuple[str, ...]:
        """One line each, as a page lists them."""
        courses = (f"{one.watershed.code} {one.name}, course" for one in self.streams)
        return (*(str(one) for one in self.watersheds), *courses)


def bulk_enter_watersheds(*, district_id: int, name: str, data: bytes, by: User) -> Shapes:
    """Enter watersheds and courses from a GeoJSON file; all, or nothing with every finding.

    A polygon's properties are `code`, `name`, `stream` (one name or a list), and `rain_gauge` (one
    code) or `rain_gauges` (code to weight). What was mended in an outline is said as a note. A line
    is the course of the `stream` that it names; `watershed` (a code) says which where two have it.

    Raises
    ------
    Refused
        If an outline or a line cannot be used, or this very file is there already.
    """
    district = District.objects.get(pk=district_id)
    upload = receive_file(kind=Upload.Kind.WATERSHEDS, name=name, data=data, owner=district, by=by)
    with told_of(upload), transaction.atomic():
        # The district row locks its lists.
        District.objects.select_for_update().get(pk=district_id)
        refuse_same_file(kind=upload.kind, name=upload.name, data=data, district=district, by=by)
        drafts, lines = _drafts(district, upload.name, data)
        basins = known_basins(district, by)
        known = {code: basin.watershed for code, basin in basins.items()}
        for draft in drafts:
            basins[draft.watershed.code] = Basin(draft.watershed, frozenset(draft.streams))
        courses, told = place_courses(lines, basins)
        if blocking(told):
            raise refusal(told, "file of shapes")
        findings = [*(one for draft in drafts for one in draft.findings), *told]
        mark_kept(upload, rows=len(drafts) + len(courses), findings=findings)
        kept = _keep(drafts, by)
        return Shapes(kept, keep_courses(courses, known | {one.code: one for one in kept}))


def bulk_enter_profiles(*, district_id: int, name: str, data: bytes, by: User) -> int:
    """Enter bed points of long profiles from a CSV or XLSX file; a site's earlier points make room.

    Returns
    -------
    int
        How many points were kept.

    Raises
    ------
    Refused
        If a row cannot be kept or this very file is there already.
    """
    district = District.objects.get(pk=district_id)
    upload = receive_file(kind=Upload.Kind.PROFILES, name=name, data=data, owner=district, by=by)
    with told_of(upload), transaction.atomic():
        District.objects.select_for_update().get(pk=district_id)
        refuse_same_file(kind=upload.kind, name=upload.name, data=data, district=district, by=by)
        ledger = Ledger()
        profiles = _profiles(upload.name, data, district, by, ledger)
        if blocking(ledger.findings):
            raise refusal(ledger.findings, "list of bed points")
        points = [
            LongProfilePoint(site=site, distance_upstream_m=distance_m, bed_level_m=level_m)
            for site, profile in profiles.items()
            for distance_m, level_m in sorted(profile.items())
        ]
        findings = [*ledger.findings, *_doubts(profiles, upload.name)]
        mark_kept(upload, rows=len(points), findings=findings)
        LongProfilePoint.objects.filter(site__in=profiles).delete()
        LongProfilePoint.objects.bulk_create(points)
        return len(points)


def _drafts(district: District, name: str, data: bytes) -> tuple[list[Draft], list[Course]]:
    """Read the features: polygons are watersheds, lines are courses."""
    document = read_json(name, data).value
    features = [document]
    if isinstance(document, dict) and document.get("type") == "FeatureCollection":
        features = document.get("features")
    if not isinstance(features, list) or not features:
        raise Refused("No outline and no line is here.", where=name, remedy=FEATURES)
    found: list[Finding] = []
    drafts: list[Draft] = []
    courses: list[Course] = []
    taken = set(Watershed.objects.values_list("code", flat=True))
    for place, feature in enumerate(features):
        where = f"{name} feature {place + 1}"
        try:
            properties = _properties(feature, where)
            if _is_line(feature):
                courses.append(course_of(feature, properties, where))
                continue
            draft = _draft(district, feature, properties, where)
        except Refused as refused:
            found += refused.findings or [
                Finding(refused.where or where, "", refused.what, refused.remedy)
            ]
            continue
        if draft.watershed.code in taken:
            what = f"{draft.watershed.code} is taken."
            found.append(Finding(where, "code", what, "Codes are not used twice; take another."))
        taken.add(draft.watershed.code)
        drafts.append(draft)
    if found:
        raise refusal(found, "file of shapes")
    return drafts, courses


def _properties(feature: Any, where: str) -> dict[str, Any]:
    properties = feature.get("properties") if isinstance(feature, dict) else None
    if not isinstance(properties, dict):
        raise Refused("This is no feature with properties.", where=where, remedy=FEATURES)
    return properties


def _is_line(feature: dict[str, Any]) -> bool:
    geometry = feature.get("geometry")
    return isinstance(geometry, dict) and geometry.get("type") in KINDS


def _draft(
    district: District, feature: dict[str, Any], properties: dict[str, Any], where: str
) -> Draft:
    outline = read_outline(feature.get("geometry"), where)
    notes = [Finding(where, "geometry", words, "", "note", "PL-02") for words in outline.mended]
    code = properties.get("code", feature.get("id"))
    watershed = Watershed(
        district=district,
        code=code if isinstance(code, str) else "",
        name=properties["name"] if isinstance(properties.get("name"), str) else "",
        outline=outline.geometry,
        area_km2=outline.area_km2,
        findings=as_documents(notes),
    )
    wrong = field_findings(watershed, where)
    if wrong:
        raise refusal(wrong, "outline")
    return Draft(watershed, _streams(properties), _gauges(properties, where), notes)


def _streams(properties: dict[str, Any]) -> list[str]:
    named = properties.get("stream")
    names = named if isinstance(named, list) else [named]
    return [name.strip() for name in names if isinstance(name, str) and name.strip()]


def _gauges(properties: dict[str, Any], where: str) -> dict[str, float]:
    """Read one gauge, or several with weights that add up to one."""
    one, several = properties.get("rain_gauge"), properties.get("rain_gauges")
    if isinstance(one, str) and one.strip():
        return {one.strip(): 1.0}
    if not isinstance(several, dict) or not several:
        return {}
    weights = several.values()
    numbers = all(
        isinstance(weight, int | float) and not isinstance(weight, bool) for weight in weights
    )
    if not numbers or min(weights) <= 0 or abs(sum(weights) - 1.0) > WEIGHT_SLACK:
        raise Refused(
            "The weights of the rain gauges do not add up to one.",
            where=f"{where}, rain_gauges",
            remedy="Give each gauge its share, above 0, together 1.",
        )
    return {code: float(weight) for code, weight in several.items()}


def _keep(drafts: list[Draft], by: User) -> list[Watershed]:
    kept = bulk_create_with_history(
        [draft.watershed for draft in drafts], Watershed, default_user=by
    )
    Stream.objects.bulk_create(
        Stream(watershed=watershed, name=name)
        for watershed, draft in zip(kept, drafts, strict=True)
        for name in dict.fromkeys(draft.streams)
    )
    GaugeWeight.objects.bulk_create(
        GaugeWeight(watershed=watershed, gauge=gauge, weight=weight)
        for watershed, draft in zip(kept, drafts, strict=True)
        for gauge, weight in draft.gauges.items()
    )
    return kept


def _profiles(
    name: str, data: bytes, district: District, by: User, ledger: Ledger
) -> dict[Site, dict[float, float]]:
    """Read the points of each site; every point once."""
    seen = access.sites(by).filter(watershed__district=district).select_related("watershed")
    allowed = {one.pk for one in access.watersheds(by) if may(by, Act.ENTER_PROFILE, one)}
    sites = {site.code: site for site in seen if site.watershed_id in allowed}
    profiles: dict[Site, dict[float, float]] = {}
    for row in read_rows(name, data, "profiles", ledger):
        values = read_profile_point(row, ledger)
        if values is None:
            continue
        site = sites.get(values["code"])
        if site is None:
            what = f"There is no site {values['code']} where you may enter profiles."
            ledger.add(row.named("code"), what, "Enter the site first, or mend the code.")
            continue
        points = profiles.setdefault(site, {})
        distance_m = values["distance_upstream_m"]
        if distance_m in points:
            what = f"{site.code} has a point at {distance_m:g} m already."
            ledger.add(row.named("distance_upstream_m"), what, "Keep one of them.")
        points[distance_m] = values["bed_level_m"]
    return profiles


def _doubts(profiles: dict[Site, dict[float, float]], name: str) -> Iterable[Finding]:
    """Doubt a profile that is short (LP-01) or falls the wrong way (LP-02)."""
    for site, profile in profiles.items():
        first, last = min(profile), max(profile)
        where = f"{name} {site.code}"
        short_m = max(REACH_LEAST_M - last, REACH_LEAST_M + first)
        if short_m > 0.0:
            what = f"The long line is {last - first:g} m."
            remedy = f"Too short for a gradient: go {short_m:g} m further."
            yield Finding(where, "distance_upstream_m", what, remedy, "warn", "LP-01")
        if len(profile) > 1 and profile[last] <= profile[first]:
            what = f"The bed rises downstream on {site.code}."
            yield Finding(
                where, "bed_level_m", what, "Distance sign turned round?", "hold", "LP-02"
            )
