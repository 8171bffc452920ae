"""Entering sites, one or a whole list, and editing one that others may edit as well."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

from django.db import IntegrityError, transaction
from django.utils import timezone
from simple_history.utils import bulk_create_with_history

from structures import access
from structures.access import Act, insist, may
from structures.actions.inbox import mark_kept, receive_file, refuse_same_file, told_of
from structures.actions.refusals import as_documents, blocking, field_findings, refusal
from structures.actions.site_checks import Neighbour, Neighbourhood, site_findings
from structures.actions.site_rows import Values, read_rows, read_site, row_of
from structures.errors import Refused
from structures.intake.tree import Ledger
from structures.life.stages import CLOSED_OFF
from structures.models import District, Site, Stream, Structure, Upload, Watershed
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from structures.errors import Finding
    from structures.intake.tree import Node
    from structures.models import User

EDITABLE: Final = (
    "name",
    "lat",
    "lon",
    "accuracy_m",
    "benchmark",
    "benchmark_level_m",
    "bed_level_m",
    "bed_slope",
    "catchment_km2",
    "water_level_m",
    "village_upstream",
    "village_downstream",
    "downstream_users",
)
TRAILING: Final = re.compile(r"(.*?)(\d+)$", re.ASCII)


@dataclass(frozen=True, slots=True)
class Draft:
    """A site as its row gives it, not yet kept."""

    site: Site
    stream: str | None
    findings: tuple[Finding, ...] = ()


@transaction.atomic
def enter_site(*, district_id: int, values: Values, by: User) -> Site:
    """Enter one site from the values of a form or of a program.

    Raises
    ------
    Refused
        If it cannot be kept; `findings` names each field.
    """
    district = District.objects.select_for_update().get(pk=district_id)
    where = str(values.get("code") or "site")
    drafts = _read(district, [row_of(values, where)], Ledger(), by, thing="site")
    return _keep(district, drafts, by)[0]


def bulk_enter_sites(*, district_id: int, name: str, data: bytes, by: User) -> list[Site]:
    """Enter a list of sites from a CSV or XLSX file; all of it, or nothing with every finding.

    Raises
    ------
    Refused
        If a row cannot be kept or this very file is there already.
    """
    district = District.objects.get(pk=district_id)
    upload = receive_file(kind=Upload.Kind.SITES, name=name, data=data, owner=district, by=by)
    with told_of(upload), transaction.atomic():
        # The district row locks its lists: the same codes do not come in twice at once.
        District.objects.select_for_update().get(pk=district_id)
        refuse_same_file(kind=upload.kind, name=upload.name, data=data, district=district, by=by)
        ledger = Ledger()
        rows = read_rows(upload.name, data, "sites", ledger)
        drafts = _read(district, rows, ledger, by, thing="list of sites")
        found = [one for draft in drafts for one in draft.findings]
        mark_kept(upload, rows=len(rows), findings=(*ledger.findings, *found))
        return _keep(district, drafts, by)


@transaction.atomic
def edit_site(*, site_id: int, seen_revision: int, changes: Mapping[str, Any], by: User) -> Site:
    """Change fields of a site that was seen in a certain revision.

    Raises
    ------
    Refused
        If somebody changed the site since, or a value cannot be; nothing is changed.
    """
    # The site row is locked before its revision is looked at: of two editors one comes second.
    site = Site.objects.select_for_update().get(pk=site_id)
    insist(by, Act.EDIT_SITE, site)
    if site.revision != seen_revision:
        at = timezone.localtime(site.changed_at).strftime("%Y-%m-%d %H:%M")
        raise Refused(
            f"{site.code} was changed by {site.changed_by.username} at {at} since you opened it.",
            where=site.code,
            remedy="Open it again, look at what changed, and enter your change anew.",
        )
    unknown = sorted(set(changes) - set(EDITABLE))
    if unknown:
        raise ValueError(f"a site's {', '.join(unknown)} cannot be edited")
    for key, value in changes.items():
        setattr(site, key, value)
    site.revision += 1
    site.changed_by = by
    wrong = field_findings(site, site.code)
    if wrong:
        raise refusal(wrong, "site")
    site.findings = as_documents(site_findings(site, _neighbours(by), site.code))
    site._history_user = by
    site.save()
    return site


def next_code(code: str, taken: Iterable[str]) -> str:
    """Give the next free code after one that is taken: KE-04 to KE-05, or KE to KE-2."""
    used = set(taken)
    matched = TRAILING.fullmatch(code)
    stem, digits = (matched[1], matched[2]) if matched else (f"{code}-", "1")
    number = int(digits)
    while True:
        number += 1
        candidate = f"{stem}{number:0{len(digits)}d}"
        if candidate not in used:
            return candidate


def _read(
    district: District, rows: list[Node], ledger: Ledger, by: User, *, thing: str
) -> list[Draft]:
    """Give the rows as sites, or refuse them all with every finding."""
    visible = access.watersheds(by).filter(district=district)
    watersheds = {one.code: one for one in visible if may(by, Act.ENTER_SITE, one)}
    neighbours = _neighbours(by)
    taken = set(Site.objects.values_list("code", flat=True))
    drafts: list[Draft] = []
    for row in rows:
        draft = _draft(row, watersheds, ledger, by)
        if draft is None or not _free(draft.site, row, taken, ledger, by):
            continue
        site = draft.site
        found = site_findings(site, neighbours, row.where)
        site.findings = as_documents(found)
        drafts.append(Draft(site, draft.stream, found))
        taken.add(site.code)
        neighbours.add(Neighbour(site.lat, site.lon, site.code))
    if blocking(ledger.findings):
        raise refusal(ledger.findings, thing)
    return drafts


def _draft(row: Node, watersheds: dict[str, Watershed], ledger: Ledger, by: User) -> Draft | None:
    """Give the row's site; None, with a finding, where it cannot be."""
    values = read_site(row, ledger)
    if values is None:
        return None
    watershed = watersheds.get(values.pop("watershed"))
    if watershed is None:
        known = ", ".join(watersheds)
        what = "There is no such watershed where you may enter sites."
        remedy = f"Choose one of: {known}." if known else "Ask for a posting there."
        ledger.add(row.named("watershed"), what, remedy)
        return None
    stream = values.pop("stream", None)
    known = {key: value for key, value in values.items() if value is not None}
    site = Site(watershed=watershed, changed_by=by, **known)
    wrong = field_findings(site, row.where)
    for one in wrong:
        ledger.add(row.named(one.field), one.what, one.remedy)
    return None if wrong else Draft(site, stream)


def _free(site: Site, row: Node, taken: set[str], ledger: Ledger, by: User) -> bool:
    """Refuse a code that was used before, in this file or ever (PL-06)."""
    if site.code not in taken:
        return True
    there = access.sites(by).select_related("structure").filter(code=site.code).first()
    what = f"{site.code} is taken."
    if there is not None and there.structure.stage == CLOSED_OFF:
        year = there.structure.since.year
        what = f"{site.code} belongs to a place closed off in {year}."
    elif there is not None:
        what = f"{site.code} is {there.name or 'a site'} already."
    remedy = f"Codes are not used twice; take {next_code(site.code, taken)}."
    ledger.add(row.named("code"), what, remedy, rule="PL-06")
    return False


def _keep(district: District, drafts: list[Draft], by: User) -> list[Site]:
    _name_streams(drafts)
    try:
        with transaction.atomic():
            kept = bulk_create_with_history([draft.site for draft in drafts], Site, default_user=by)
    except IntegrityError as error:
        # Another district took the code at this very moment.
        raise Refused(
            "A code of this list was taken while it was being entered.",
            remedy="Send it again to see which one.",
        ) from error
    since = today_of(district)
    Structure.objects.bulk_create(Structure(site=site, since=since) for site in kept)
    return kept


def _name_streams(drafts: list[Draft]) -> None:
    streams: dict[tuple[int, str], Stream] = {}
    for draft in drafts:
        if draft.stream is None:
            continue
        key = (draft.site.watershed_id, draft.stream)
        if key not in streams:
            watershed_id, name = key
            streams[key], _ = Stream.objects.get_or_create(watershed_id=watershed_id, name=name)
        draft.site.stream = streams[key]


def _neighbours(by: User) -> Neighbourhood:
    """Sites that the user may see: a site elsewhere is never named."""
    rows = access.sites(by).values_list("lat", "lon", "code")
    return Neighbourhood(Neighbour(*row) for row in rows)
