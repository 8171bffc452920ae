"""Observation pipes set with the wall are born as wells: pipe, measuring point and entry in one act."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from django.db import transaction

from structures.access import Act, insist
from structures.actions.marks import change_mark
from structures.actions.register import append
from structures.actions.stage import locked
from structures.actions.trench import days_not_to_come
from structures.actions.wells import enter_well
from structures.errors import Finding, Refused
from structures.models import Well

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from datetime import date

    from structures.models import Structure, User

ENTERED: Final = "observation pipes entered"
SIDES: Final = {"upstream": 1.0, "downstream": -1.0}  # how a distance from the wall is signed
MARK: Final = "M1"  # the first measuring point of a pipe


@dataclass(frozen=True, slots=True)
class Pipe:
    """One pipe as it was typed: texts, so that a page, the interface and a list are read alike.

    `distance_m` is from the wall, to the side that `side` names; `depth_m` is below ground and
    `mark_height_m` above it.
    """

    side: str
    code: str
    distance_m: str
    depth_m: str
    ground_level_m: str
    mark_height_m: str
    diameter_m: str = ""
    mark_what: str = ""
    lat: str = ""
    lon: str = ""


@transaction.atomic
def enter_pipes(
    *, structure_id: int, set_on: date, pipes: Sequence[Pipe], by: User
) -> tuple[Well, ...]:
    """Keep pipes set at a wall as wells with their first measuring point, all of them or none.

    Raises
    ------
    Refused
        If no strip was opened yet, or a pipe cannot be; `findings` names `side.field`.
    """
    structure = locked(structure_id)
    insist(by, Act.ENTER_WELL, structure)
    if not pipes:
        raise Refused("No pipe is given.", where="pipes", remedy="Fill in one side or both.")
    days_not_to_come(structure, set_on)
    _insist_dug(structure)
    wells = tuple(_born(structure, one, set_on, by) for one in pipes)
    append(
        district=structure.site.watershed.district,
        by=by,
        act=ENTERED,
        subject=f"{structure.site.code}: {', '.join(one.code for one in wells)}",
        structure=structure,
        content={
            "set_on": set_on.isoformat(),
            "pipes": [
                {
                    "well": one.code,
                    "role": one.role,
                    "upstream_of_wall_m": one.upstream_of_wall_m,
                    "bottom_below_ground_m": one.bottom_below_ground_m,
                    "ground_level_m": one.ground_level_m,
                }
                for one in wells
            ],
        },
    )
    return wells


def _insist_dug(structure: Structure) -> None:
    from_before = structure.moves.filter(to_stage="covered").exists()
    if from_before or structure.strips.filter(opened_on__isnull=False).exists():
        return
    raise Refused(
        "No trench was opened here: pipes are set with the wall.",
        where=structure.site.code,
        remedy="Enter a pipe that stands for another reason as a well.",
    )


def _born(structure: Structure, pipe: Pipe, set_on: date, by: User) -> Well:
    if pipe.side not in SIDES:
        raise Refused(
            f"{pipe.side!r} is no side of a wall.", where="side", remedy="Upstream or downstream."
        )
    site = structure.site
    needed = ("code", "distance_m", "depth_m", "ground_level_m", "mark_height_m")
    missing = [
        Finding("pipe", f"{pipe.side}.{key}", "This is missing.", "Measure it while it is open.")
        for key in needed
        if not getattr(pipe, key).strip()
    ]
    if missing:
        raise Refused("A pipe is not complete.", where=pipe.side, findings=tuple(missing))
    distance = pipe.distance_m.strip().lstrip("+")
    if distance.startswith(("-", "\N{MINUS SIGN}")):
        finding = Finding(
            "pipe",
            f"{pipe.side}.distance_m",
            "The distance has a sign; the side says it already.",
            "Write the distance alone.",
        )
        raise Refused(finding.what, where=pipe.side, remedy=finding.remedy, findings=(finding,))
    values = {
        "code": pipe.code.strip(),
        "role": pipe.side,
        "kind": "pipe",
        "site": site.code,
        "upstream_of_wall_m": distance if SIDES[pipe.side] > 0 else f"-{distance}",
        "bottom_below_ground_m": pipe.depth_m,
        "bottom_sounded_on": set_on.isoformat(),
        "ground_level_m": pipe.ground_level_m,
        "diameter_m": pipe.diameter_m,
        "lat": pipe.lat,
        "lon": pipe.lon,
        "existed_from": set_on.isoformat(),
        "used_for": "readings of the wall",
    }
    mark = {
        "mark": MARK,
        "what": pipe.mark_what.strip() or "upper edge of the pipe, north side",
        "height_above_ground_m": pipe.mark_height_m,
        "valid_from": set_on.isoformat(),
    }
    try:
        well = enter_well(watershed_id=site.watershed_id, values=values, by=by)
        change_mark(well_id=well.pk, values=mark, by=by)
    except Refused as refused:
        raise _named(refused, pipe.side) from refused
    return well


FIELDS: Final[Mapping[str, str]] = {
    "upstream_of_wall_m": "distance_m",
    "bottom_below_ground_m": "depth_m",
    "height_above_ground_m": "mark_height_m",
    "level_m": "mark_height_m",
    "what": "mark_what",
}


def _named(refused: Refused, side: str) -> Refused:
    """Give a refusal whose findings name the fields of that side."""
    findings = tuple(
        Finding(one.where, f"{side}.{FIELDS.get(one.field, one.field)}", one.what, one.remedy)
        for one in refused.findings or ()
    )
    if not findings:
        field = f"{side}.{FIELDS.get(refused.where, refused.where)}"
        findings = (Finding("pipe", field, refused.what, refused.remedy),)
    return Refused(refused.what, where=side, remedy=refused.remedy, findings=findings)
