"""Drawing a wall: the same inputs are the same design, other ones its next version."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from django.db import transaction
from django.db.models import Max

from structures.errors import Refused
from structures.models import Design, Structure
from structures.queries.settings import counted_in
from structures.queries.sites import newest_rock_line
from structures.queries.surveys import pack_of
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.models import RockLine, Survey, User


@transaction.atomic
def draw_design(
    *, survey: Survey, rock_line: RockLine | None, wall: Mapping[str, Any], by: User
) -> Design:
    """Give the design of these inputs, drawn now if there is none yet.

    What counts for the wall: `wall`, before the survey's own settings, before the district's.

    Raises
    ------
    Refused
        If a setting is unknown or out of its range, or the rock line is of another survey.
    """
    if rock_line is not None and rock_line.survey_id != survey.pk:
        raise Refused("The rock line is of another survey.", remedy="Choose one of this survey.")
    # The structure row locks its versions.
    structure = Structure.objects.select_for_update().get(site=survey.site)
    own = survey.pack.get("wall", {})
    chosen = {**counted_in(survey.site.watershed.district).wall, **own, **wall}
    pack_of(survey, points=None if rock_line is None else rock_line.points, wall=chosen)
    digest = input_digest(
        {
            "survey": [survey.version, survey.digest],
            "rock_line": None if rock_line is None else rock_line.digest,
            "wall": chosen,
        }
    )
    found = structure.designs.filter(digest=digest).first()
    if found is not None:
        return found
    newest = structure.designs.aggregate(newest=Max("version"))["newest"] or 0
    return Design.objects.create(
        structure=structure,
        version=newest + 1,
        survey=survey,
        rock_line=rock_line,
        wall=chosen,
        digest=digest,
        by=by,
    )


def freeze_design(design_id: int) -> None:
    """Mark a design as one that something was decided or priced on."""
    Design.objects.filter(pk=design_id, frozen=False).update(frozen=True)


def settled_line(survey: Survey, rock_line_id: int | None) -> RockLine | None:
    """Give the line named, or the newest settled on the survey; None where none was settled."""
    if rock_line_id is None:
        return newest_rock_line(survey)
    return survey.rock_lines.get(pk=rock_line_id)
