"""Entering and changing wells, and keeping two neighbours apart."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.utils import timezone

from structures import access
from structures.access import Act, insist
from structures.actions.refusals import field_findings, refusal
from structures.actions.well_rows import read_well, typed_row
from structures.errors import Finding, Refused
from structures.intake.tree import Ledger
from structures.models import Site, Watershed, Well

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.models import User

TEXTS: Final = ("name", "used_for", "pump", "owner_initials")
PLAIN: Final = (
    "role",
    "kind",
    "lat",
    "lon",
    "diameter_m",
    "ground_level_m",
    "bottom_below_ground_m",
    "bottom_sounded_on",
    "upstream_of_wall_m",
    "owner_consents",
    "existed_from",
    "ended_on",
    "other_names",
    *TEXTS,
)
KEPT_APART: Final = "kept apart"  # the rule of a finding that says why a neighbour is another well


@transaction.atomic
def enter_well(*, watershed_id: int, values: Mapping[str, Any], by: User) -> Well:
    """Enter a well from the values of a form or of a program.

    Raises
    ------
    Refused
        If it cannot be kept; `findings` names each field.
    """
    watershed = Watershed.objects.select_for_update().get(pk=watershed_id)
    insist(by, Act.ENTER_WELL, watershed)
    said = _read(values, str(values.get("code") or "well"))
    if Well.objects.filter(code=said["code"]).exists():
        raise Refused(
            f"{said['code']} is taken by another well.",
            where="code",
            remedy="Codes are not used twice; take another.",
        )
    well = Well(watershed=watershed, code=said["code"], site=_site(values, watershed, by))
    return _kept(well, {"kind": Well.Kind.DUG, **said}, by)


@transaction.atomic
def edit_well(*, well_id: int, seen_at: str, values: Mapping[str, Any], by: User) -> Well:
    """Change a well that was seen as it stood at `seen_at` (its time of change, ISO 8601).

    Raises
    ------
    Refused
        If somebody changed it since, or a value cannot be; nothing is changed.
    """
    well = Well.objects.select_for_update(of=("self",)).select_related("watershed").get(pk=well_id)
    insist(by, Act.ENTER_WELL, well)
    if well.changed_at.isoformat() != seen_at:
        at = timezone.localtime(well.changed_at).strftime("%Y-%m-%d %H:%M")
        raise Refused(
            f"{well.code} was changed by {well.changed_by.username} at {at} since you opened it.",
            where=well.code,
            remedy="Open it again, look at what changed, and enter your change anew.",
        )
    said = _read({**values, "code": well.code}, well.code)
    well.site = _site(values, well.watershed, by)
    blank: dict[str, Any] = {key: "" if key in TEXTS else None for key in PLAIN}
    blank |= {"other_names": [], "kind": well.kind}
    return _kept(well, {**blank, **said}, by)


@transaction.atomic
def keep_apart(*, well_id: int, other: str, why: str, by: User) -> Well:
    """Say that a neighbour is another well, and why (WL-03).

    Raises
    ------
    Refused
        If the reason is missing or there is no such neighbour.
    """
    well = Well.objects.select_for_update(of=("self",)).select_related("watershed").get(pk=well_id)
    insist(by, Act.ENTER_WELL, well)
    if not why.strip():
        raise Refused("This is missing.", where="why", remedy="Write why both stay.")
    if not Well.objects.filter(watershed=well.watershed, code=other).exclude(pk=well.pk).exists():
        raise Refused(f"There is no well {other} here.", where="other", remedy="Look at its code.")
    said = f"{why.strip()} ({by.username})"
    well.findings = [
        *(one for one in well.findings if (one["rule"], one["where"]) != (KEPT_APART, other)),
        {
            "where": other,
            "field": "",
            "what": said,
            "remedy": "",
            "level": "note",
            "rule": KEPT_APART,
        },
    ]
    return _saved(well, by)


def _read(values: Mapping[str, Any], where: str) -> dict[str, Any]:
    ledger = Ledger()
    said = read_well(typed_row(values, where), ledger)
    if said is None:
        raise refusal(ledger.findings, "well")
    return said


def _site(values: Mapping[str, Any], watershed: Watershed, by: User) -> Site | None:
    code = str(values.get("site") or "").strip()
    if not code:
        return None
    site = access.sites(by).filter(watershed=watershed, code=code).first()
    if site is None:
        raise Refused(
            f"{watershed.code} has no site {code}.", where="site", remedy="Choose one, or none."
        )
    return site


def _kept(well: Well, said: Mapping[str, Any], by: User) -> Well:
    for key in PLAIN:
        if key in said:
            setattr(well, key, said[key])
    well.changed_by = by
    # Whether the owner agrees may be not known; the form's gate calls that a blank.
    wrong = tuple(one for one in field_findings(well, well.code) if one.field != "owner_consents")
    if None not in (well.existed_from, well.ended_on) and well.ended_on < well.existed_from:
        what = "The well would end before it was there."
        wrong = (*wrong, Finding(well.code, "ended_on", what, "Look at the two days."))
    if wrong:
        raise refusal(wrong, "well")
    return _saved(well, by)


def _saved(well: Well, by: User) -> Well:
    well.changed_by = by
    well._history_user = by
    well.save()
    return well
