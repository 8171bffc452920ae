"""A tried wall: the figures of the settings, on the line that was read."""

from __future__ import annotations

import json
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from costing.appraisal import appraise
from costing.documents.reading import reading_json
from structures.documents.trial import try_wall
from structures.intake.survey_pack import read_pack

PACKS = Path("fixtures/packs")


@pytest.fixture(scope="module")
def reading():
    found = appraise(read_pack(PACKS / "example-a.json"), on=date(2027, 3, 14))
    return json.loads(json.dumps(reading_json(found, draws=2000, seed=1)))


def tried(reading, **settings):
    pack = read_pack(PACKS / "example-a.json")
    changed = replace(pack, wall=replace(pack.wall, **settings))
    return try_wall(changed, reading["appraisal"]["rock"], reading["tests"])


def quantity(trial, item):
    return sum(one["quantity"] for one in trial.quantities if one["item"] == item)


def test_the_same_settings_give_the_same_figures(reading):
    """Oracle: handbook example A; and the reading itself, to the last digit."""
    trial = tried(reading)
    assert trial.wall["face_area_m2"] == pytest.approx(155.333333, abs=5e-7)
    kept = reading["appraisal"]
    assert {key: trial.wall[key] for key in ("length_m", "crest_level_m")} == {
        key: kept["wall"][key] for key in ("length_m", "crest_level_m")
    }
    assert [one["quantity"] for one in trial.quantities] == [
        one["quantity"] for one in kept["quantities"]
    ]


def test_a_thinner_wall_takes_its_share_of_clay(reading):
    """Oracle: handbook example A, 139.80 m3 at 0.90 m; volume goes with thickness."""
    assert quantity(tried(reading, thickness_m=0.6), "clay") == pytest.approx(93.2, abs=5e-7)


def test_a_tried_drawing_has_its_own_name_on_the_page(reading):
    assert 'id="tried-' in tried(reading).drawing
    assert 'id="section-t"' not in tried(reading).drawing
