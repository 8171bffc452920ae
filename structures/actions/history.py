"""What happened before a district was kept here, taken over as it stands."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db import transaction

from structures.access import Act, insist
from structures.errors import Refused
from structures.life.stages import STAGES
from structures.models import District, Structure

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import date

    from structures.models import User

Stood = tuple[str, "date"]  # stage, and since when


@transaction.atomic
def take_over_stages(*, district_id: int, stages: Mapping[str, Stood], by: User) -> int:
    """Put structures at the stage where they stand; history is stored, not judged by today's rules.

    Raises
    ------
    Refused
        If a site or a stage is unknown; nothing is changed.
    """
    district = District.objects.select_for_update().get(pk=district_id)
    insist(by, Act.MANAGE_DISTRICT, district)
    found = Structure.objects.select_for_update().filter(site__watershed__district=district)
    structures = {one.site.code: one for one in found.select_related("site")}
    for code, (stage, since) in stages.items():
        if code not in structures or stage not in STAGES:
            what = f"{code} at stage {stage}: one of the two is not known here."
            raise Refused(what, where=code, remedy="Enter the site first, or correct the stage.")
        structures[code].stage, structures[code].since = stage, since
    Structure.objects.bulk_update(structures.values(), ["stage", "since"])
    return len(stages)
