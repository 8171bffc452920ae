"""Entering many rows from one file: the same door for sites, watersheds and bed points."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction

from structures.access import insist
from structures.actions.inbox import ACT
from structures.actions.refusals import as_findings
from structures.actions.sites import bulk_enter_sites
from structures.actions.watersheds import Shapes, bulk_enter_profiles, bulk_enter_watersheds
from structures.models import District, Upload

if TYPE_CHECKING:
    from collections.abc import Callable

    from structures.errors import Finding
    from structures.models import User

ENTER: Final[dict[str, Callable[..., Any]]] = {
    Upload.Kind.SITES: bulk_enter_sites,
    Upload.Kind.WATERSHEDS: bulk_enter_watersheds,
    Upload.Kind.PROFILES: bulk_enter_profiles,
}
KINDS: Final = tuple((str(kind), Upload.Kind(kind).label) for kind in ENTER)


@dataclass(frozen=True, slots=True)
class Entry:
    """What a file adds: names of the rows where they have some, how many, what is doubted."""

    names: tuple[str, ...]
    rows: int
    findings: tuple[Finding, ...]


def enter_file(*, kind: str, district_id: int, name: str, data: bytes, by: User) -> Entry:
    """Enter a file; all of it, or nothing with every finding.

    Raises
    ------
    Refused
        If a row cannot be kept or this very file is there already.
    """
    insist(by, ACT[kind], District.objects.get(pk=district_id))
    kept = ENTER[kind](district_id=district_id, name=name, data=data, by=by)
    # Of the two that are there, the newest is the one just kept.
    upload = Upload.objects.filter(kind=kind, district=district_id, by=by).order_by("-pk").first()
    return Entry(_names(kept), upload.rows_in, as_findings(upload.findings))


def preview_entry(*, kind: str, district_id: int, name: str, data: bytes, by: User) -> Entry:
    """Enter a file and take it back: what is shown is what the entry itself would do.

    Raises
    ------
    Refused
        As `enter_file`; nothing is kept either way.
    """
    with transaction.atomic():
        found = enter_file(kind=kind, district_id=district_id, name=name, data=data, by=by)
        transaction.set_rollback(True)
    return found


def _names(kept: Any) -> tuple[str, ...]:
    if isinstance(kept, Shapes):
        return kept.names
    return tuple(str(one) for one in kept) if isinstance(kept, list) else ()
