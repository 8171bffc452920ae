"""The stages of a structure. Source: the office's practice, section 3; the demo's settings.json."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from structures.life.people import ROLES, in_order, title, whom
from structures.life.stages import BESIDE_IT, ON_THE_LINE, STAGES, before, next_on_line


def test_eighteen_stages_on_the_line_and_two_beside_it_in_their_order():
    told = json.loads(Path("fixtures/demo/settings.json").read_text())
    assert list(ON_THE_LINE) == told["states"]
    assert list(BESIDE_IT) == told["states_beside"]
    assert len(STAGES) == 20


def test_each_stage_of_the_line_is_followed_by_the_next_and_nothing_beside_it():
    order = list(ON_THE_LINE)
    assert [next_on_line(stage) for stage in order] == [*order[1:], None]
    assert [next_on_line(stage) for stage in BESIDE_IT] == [None, None]
    with pytest.raises(ValueError, match="there is no stage 'begun'"):
        next_on_line("begun")


def test_before_is_asked_of_the_line_alone():
    assert before("noted", "judged")
    assert not before("drawn", "drawn")
    with pytest.raises(ValueError, match="'halted' is no stage of the line"):
        before("halted", "drawn")


def test_roles_are_named_once_and_from_the_stream_bed_upwards():
    """Oracle: the table of people, in its order."""
    assert list(ROLES) == ["field", "engineer", "district", "programme", "auditor", "admin"]
    assert whom(["district", "engineer", "district"]) == "an engineer or a district officer"
    assert whom(list(ROLES)[:3]) == "field staff, an engineer or a district officer"
    with pytest.raises(ValueError, match="not enough values"):
        whom([])
    assert title({"programme", "field"}) == "Field staff and the programme manager"
    assert title([]) == "Somebody without a posting here"
    with pytest.raises(KeyError, match="unknown role 'mayor'"):
        in_order(["mayor"])
