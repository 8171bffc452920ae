"""The smallest papers that the rules let through, and a structure walked to the door of a decision."""

from __future__ import annotations

import uuid
from datetime import date

from costing.actions.estimate import request_estimate
from costing.actions.moves import move
from costing.models import Estimate
from structures.actions.papers import file_paper
from structures.actions.photos import keep_photo
from structures.actions.rock import settle_rock_line
from structures.actions.stage import draw_wall
from structures.models import Role, Run
from structures.runs.queue import execute
from tests import factories as make
from tests.pictures import jpeg

GIVEN = {
    "walk-over": {
        "walked_on": "2026-01-12",
        "outcrop_left": "yes",
        "outcrop_right": "no",
        "bed_material": "coarse sand",
        "bed_width_m": 42,
        "dry_season_flow": "no",
        "no_wells": "yes",
        "downstream": [{"settlement": "Pirrumad", "use": "drinking", "distance_km": 1.5}],
    },
    "survey-permission": {
        "plan": "One line, three soundings, probes every 6 m.",
        "benchmark": "BM 1 on the culvert",
        "land": [{"land": "bed", "leave": "given", "asked_on": "2026-01-14", "given_by": "office"}],
        "services": "none",
        "services_asked": "Water board, 13 January",
    },
    "underflow": {
        "k_low_m_per_day": 20,
        "k_likely_m_per_day": 40,
        "k_high_m_per_day": 80,
        "k_source": "pumping test",
        "k_source_words": "Test of the well at the ford, 3 days",
        "wetted_area_m2": 120,
        "only_wetted": "yes",
        "area_source": "section under the line",
        "gradient": 0.004,
        "gradient_source": "long profile",
        "use_below_m3_per_day": 5,
        "shares": [{"settlement": "Pirrumad", "keeps": "its two wells, at 9 m"}],
    },
    "drawing-sheet": {
        "side_slope": 1.5,
        "wet_sand": "yes",
        "trench_depth_m": 5.2,
        "dewatering": "Two pumps, sump outside the wall line",
        "water_goes_to": "back to the stream, 60 m below",
        "spill_level_m": 99.2,
        "clay_source": "Tank bed, east end",
        "clay_proven_m3": 900,
        "clay_needed_m3": 400,
        "clay_distance_km": 2,
        "bund_distance_m": 80,
        "bund_consent": "No. 14 of 3 January and LE-114",
    },
    "check": {
        "checked_on": "2026-02-02",
        "looked_at": "Levels, ends, key; face area computed again by hand.",
        "findings": [{"what": "Right end", "answer": "moved to rock", "state": "closed"}],
    },
    "hearing": {
        "settlements": [
            {
                "settlement": name,
                "side": side,
                "heard_on": "2026-02-10",
                "present": 31,
                "asked": "Will the lower well run dry?",
            }
            for name, side in (("Pirrumad", "downstream"),)
        ],
        "objections": [
            {"settlement": "Pirrumad", "objection": "the lower well", "answer": "gauge read weekly"}
        ],
    },
}


def a_photo(site, by, **more):
    return keep_photo(
        site_id=site.pk, photo_id=uuid.uuid4(), data=jpeg(), by=by, **{"what": "signed", **more}
    )


def a_paper(structure, kind, by, *, photos=(), **changes):
    given = {**GIVEN[kind], **changes}
    return file_paper(structure_id=structure.pk, kind=kind, given=given, by=by, photos=photos)


class People:
    """One of each role that a structure passes through; two engineers, for nobody checks himself."""

    def __init__(self, district):
        self.field = make.a_user(Role.FIELD, district)
        self.engineer = make.an_engineer(district)
        self.checker = make.an_engineer(district)
        self.district = make.a_user(Role.DISTRICT, district)
        self.programme = make.a_user(Role.PROGRAMME, district)


def read_all():
    """Do what waits in the queue, as a worker would."""
    for run in Run.objects.filter(state="queued").order_by("created_at"):
        execute(str(run.pk))


def surveyed(site, people):
    """Walk a site to the stage at which its wall can be drawn."""
    structure = site.structure
    photo = a_photo(site, people.field).pk
    a_paper(structure, "walk-over", people.field, photos=[photo])
    on(structure, "walked", people.field)
    a_paper(structure, "survey-permission", people.engineer)
    on(structure, "surveying", people.engineer)
    survey = make.a_survey(site, people.engineer)
    settle(survey, people.engineer)
    a_paper(structure, "underflow", people.engineer)
    read_all()
    on(structure, "flow-judged", people.engineer)
    return structure


def settle(survey, by):
    return settle_rock_line(
        survey_id=survey.pk,
        points=survey.pack["rock_line"],
        reason="Seen in the bore and on both banks.",
        rests_on=[],
        by=by,
    )


def heard(site, people, schedule):
    """Walk a site to the door of the technical sanction; give its estimate."""
    structure = surveyed(site, people)
    draw_wall(site_id=site.pk, by=people.engineer)
    a_paper(structure, "drawing-sheet", people.engineer)
    on(structure, "drawn", people.engineer)
    a_paper(structure, "check", people.checker)
    on(structure, "checked", people.checker)
    request_estimate(site_id=site.pk, by=people.engineer, schedule_id=schedule.pk)
    read_all()
    on(structure, "priced", people.engineer)
    a_paper(structure, "hearing", people.district, photos=[a_photo(site, people.district).pk])
    on(structure, "heard", people.district)
    return Estimate.objects.get(site=site)


def on(structure, to, by, **more):
    moved = move(structure_id=structure.pk, to=to, by=by, **more)
    structure.refresh_from_db()
    return moved


DAY = date(2026, 4, 10)
