"""Clay: the pits it comes from, and what was tested of it."""

from __future__ import annotations

from dataclasses import fields
from typing import TYPE_CHECKING, Any
from uuid import UUID, uuid4

from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import as_documents, field_findings, refusal
from structures.actions.trench import days_not_to_come, locked
from structures.errors import Finding, Refused
from structures.life.clay import ClayLimits, ClayResult, judge_clay
from structures.models import ClaySource, ClayTest, Site
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from datetime import date

    from structures.models import District, Strip, User

JUDGED = tuple(field.name for field in fields(ClayResult))


@transaction.atomic
def enter_clay_source(*, site_id: int, name: str, by: User, **known: Any) -> ClaySource:
    """Enter a borrow pit; too near to a tank's bund it is kept out until the consent is there.

    Raises
    ------
    Refused
        If the user may not, the name is taken, a value cannot be, or the pit lies nearer to the
        bund than the setting and no signed consent is attached (DW-07).
    """
    site = Site.objects.select_for_update().select_related("watershed__district").get(pk=site_id)
    insist(by, Act.RECORD_WORKS, site)
    source = ClaySource(site=site, name=name.strip(), by=by, **known)
    given = {key for key, value in known.items() if value is not None} | {"name"}
    wrong = [one for one in field_findings(source, "clay source") if one.field in given]
    wrong += [
        Finding("clay source", key, f"{known[key]:g} is less than nothing.", "Look at the sign.")
        for key in ("proven_m3", "distance_km", "from_bund_m")
        if known.get(key) is not None and known[key] < 0
    ]
    if wrong:
        raise refusal(wrong, "clay source")
    if ClaySource.objects.filter(site=site, name=source.name).exists():
        raise Refused(f"{source.name} is there already.", where="name", remedy="Add a test to it.")
    least = settings_in_force(site.watershed.district)["clay_pit_from_bund_m"].value
    away = source.from_bund_m
    if away is not None and away < least and source.consent is None:
        what = (
            f"Borrow pit is {away:g} m from the tank bund. {least:g} m is this program's least, "
            "not a permission."
        )
        remedy = (
            "Move it, or attach the written consent of the bund's owner and a licensed engineer."
        )
        raise refusal([Finding("clay source", "from_bund_m", what, remedy, rule="DW-07")], "pit")
    source.save()
    return source


@transaction.atomic
def keep_clay_test(
    *,
    structure_id: int,
    day: date,
    by: User,
    strip: Strip | None = None,
    source_id: int | None = None,
    row_id: UUID | None = None,
    **said: Any,
) -> ClayTest:
    """Keep a set of tests with what the limits in force say of it; what fails is kept as well.

    Raises
    ------
    Refused
        If the user may not write here, nothing was tested, or the day is still to come.
    """
    structure = locked(structure_id)
    insist(by, Act.RECORD_WORKS, structure)
    days_not_to_come(structure, day)
    values = {key: value for key, value in said.items() if value is not None}
    if not set(values) - {"layer", "note"}:
        raise Refused("Nothing was tested.", where="clay test", remedy="Write one result or more.")
    source = None
    if source_id is not None:
        source = ClaySource.objects.filter(pk=source_id, site=structure.site).first()
        if source is None:
            raise Refused("There is no such pit here.", where="source", remedy="Choose another.")
    result = ClayResult(**{key: values.get(key) for key in JUDGED})
    found = judge_clay(result, clay_limits(structure.site.watershed.district))
    return ClayTest.objects.create(
        id=row_id or uuid4(),
        structure=structure,
        source=source,
        strip=strip,
        day=day,
        findings=as_documents(found),
        by=by,
        **values,
    )


def clay_limits(district: District) -> ClayLimits:
    """Give what a district asks of clay."""
    lines = settings_in_force(district)
    return ClayLimits(
        liquid_limit_percent=lines["clay_liquid_limit_percent"].value,
        permeability_m_per_s=lines["clay_k_m_per_s"].value,
    )
