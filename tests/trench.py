"""A trench for tests: OD-01 of the demo, its drawing frozen, its wall cut, its people at hand."""

from __future__ import annotations

import json
from dataclasses import dataclass
from datetime import UTC, date, datetime, time
from pathlib import Path
from uuid import uuid4

from structures.actions.design import draw_design, freeze_design
from structures.actions.holds import ask_hold, see_hold
from structures.actions.looks import keep_look
from structures.actions.photos import Position, keep_photo
from structures.actions.strips import cut_wall, open_strip
from structures.actions.surveys import accept_survey
from structures.intake.field_records import HOLD_READINGS, point_of
from structures.life.stages import DIGGING
from structures.models import Role, Strip, Structure, User
from structures.queries.drawn_wall import drawn_wall
from tests.factories import a_district, a_site, a_user, a_watershed
from tests.pictures import jpeg

HERE = Position(15.72, 77.44, 5.0)
DAY = date(2026, 4, 9)  # the invented district stands still on the day after
TODAY = date(2026, 4, 10)
SEEN = {
    "depth_m": 3.0,
    "slope_as_cut": 2.0,
    "crack": False,
    "sides": "dry, no change",
    "water": "none",
    "spoil_back_m": 2.5,
    "ladder_within_m": 5.0,
    "rain_since_last": False,
    "weather": "clear",
}


@dataclass(frozen=True)
class Trench:
    structure: Structure
    field: User
    engineer: User
    other: User

    @property
    def strips(self) -> list[Strip]:
        return list(self.structure.strips.all())


def a_trench(code="OD-01", district=None, *, stage=DIGGING, without=(), **people) -> Trench:
    """`without` names parts of the survey that are left out, as soundings that take their time."""
    district = district or a_district(as_of=TODAY, invented=True)
    site = a_site(a_watershed(district, f"{code}-W"), code)
    field = people.get("field") or a_user(Role.FIELD, district)
    engineer = people.get("engineer") or a_user(Role.ENGINEER, district)
    other = people.get("other") or a_user(Role.ENGINEER, district)
    pack = Path("fixtures/packs/OD-01.json").read_text().replace('"OD-01"', f'"{code}"')
    if without:
        told = {key: part for key, part in json.loads(pack).items() if key not in without}
        pack = json.dumps(told)
    survey = accept_survey(site_id=site.pk, name="survey.json", data=pack.encode(), by=engineer)
    design = draw_design(survey=survey, rock_line=None, wall={}, by=engineer)
    freeze_design(design.pk)
    Structure.objects.filter(site=site).update(stage=stage)
    structure = Structure.objects.get(site=site)
    cut_wall(structure_id=structure.pk, by=engineer)
    return Trench(structure, field, engineer, other)


def look(trench, *, day=DAY, at=time(7, 40), strip=None, result="no stop found", **changes):
    return keep_look(
        structure_id=trench.structure.pk,
        day=day,
        looked_at=at,
        by=trench.field,
        strip=strip,
        result=result,
        **{**SEEN, **changes},
    )


def photo(trench, *, day=DAY, place=HERE):
    return keep_photo(
        site_id=trench.structure.site_id,
        photo_id=uuid4(),
        data=jpeg(),
        by=trench.field,
        what="strip board",
        taken_at=datetime.combine(day, time(5, 0), UTC),
        position=place,
    )


def readings(hold, **changes):
    """The least that a hold point asks to be read; H2 as the drawing has it."""
    asked = {field.key: 1 for field in HOLD_READINGS[point_of(hold)] if field.kind != "text"}
    return {**asked, **changes}


def ask(trench, strip, hold, *, by=None, day=DAY, at=time(5, 0), photos=None, **changes):
    shown = [photo(trench, day=day).pk] if photos is None else photos
    row, _ = ask_hold(
        strip_id=strip.pk,
        hold=hold,
        by=by or trench.field,
        asked_at=datetime.combine(day, at, UTC),
        readings=readings(hold, **changes),
        photos=shown,
    )
    return row


def see(trench, row, *, by=None, result="go", day=DAY, **more):
    seen_at = datetime.combine(day, time(6, 0), UTC)
    return see_hold(
        hold_id=row.pk, result=result, by=by or trench.engineer, seen_at=seen_at, **more
    )


def dig(trench, number=1, *, day=DAY):
    """Open a strip: pegs seen, looked at, dug."""
    strip = trench.structure.strips.get(number=number)
    see(trench, ask(trench, strip, "H1", day=day), day=day)
    look(trench, day=day, strip=strip)
    return open_strip(strip_id=strip.pk, on=day, by=trench.field)


def as_drawn(strip):
    """Levels of rock at start, middle and end of a strip that fit its drawing."""
    drawn = drawn_wall(strip.structure)
    places = (strip.from_m, (strip.from_m + strip.to_m) / 2, strip.to_m)
    keys = ("rock_start_m", "rock_middle_m", "rock_end_m")
    return {key: drawn.line_at(place) for key, place in zip(keys, places, strict=True)}
