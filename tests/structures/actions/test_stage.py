"""A structure moved from stage to stage: on which papers, by whom, and never on one's own work."""

from __future__ import annotations

import pytest

from costing.actions.moves import move
from structures.actions.stage import draw_wall, move_stage
from structures.errors import Refused
from structures.models import Design, Entry, Move
from tests.factories import a_district, a_schedule, a_site, a_watershed
from tests.papers import DAY, People, a_paper, a_photo, heard, on, surveyed

pytestmark = pytest.mark.django_db


@pytest.fixture
def district():
    return a_district(invented=True, as_of=DAY)


@pytest.fixture
def site(district):
    return a_site(a_watershed(district), benchmark="BM 1", village_downstream="Pirrumad")


@pytest.fixture
def people(district):
    return People(district)


@pytest.fixture
def schedule(district, people):
    return a_schedule(district, people.engineer)


def test_a_structure_walks_to_the_door_of_the_sanction(site, people, schedule):
    estimate = heard(site, people, schedule)
    structure = site.structure
    structure.refresh_from_db()
    assert (structure.stage, structure.since) == ("heard", DAY)
    moves = list(structure.moves.order_by("number"))
    assert [one.to_stage for one in moves] == [
        *("walked", "surveying", "flow-judged", "drawn", "checked", "priced", "heard")
    ]
    priced = moves[5]
    assert priced.evidence == [
        {"kind": "estimate", "digest": estimate.input_digest, "by": people.engineer.username}
    ]
    assert {one.kind for one in moves[3].papers.all()} == {"underflow", "drawing-sheet"}
    assert priced.entry.content["evidence"] == priced.evidence
    assert Design.objects.get().frozen


def test_nothing_moves_without_its_papers_and_the_office_is_told_who_brings_them(site, people):
    """Oracle: SL-01 and PL-05 of the office's practice."""
    with pytest.raises(Refused) as refused:
        move(structure_id=site.structure.pk, to="walked", by=people.field)
    [finding] = refused.value.findings
    assert finding.rule == "SL-01"
    assert "walk-over sheet" in finding.what
    assert "field staff" in finding.remedy
    assert not Move.objects.exists()
    assert not Entry.objects.filter(act="moved").exists()


def test_a_role_that_may_not_is_told_whom_to_ask(site, people):
    """Oracle: SL-02."""
    a_paper(site.structure, "walk-over", people.field, photos=[a_photo(site, people.field).pk])
    with pytest.raises(Refused, match=r"An engineer cannot move to walked\. Ask field staff"):
        move(structure_id=site.structure.pk, to="walked", by=people.engineer)


def test_nobody_checks_their_own_drawing(site, people):
    structure = surveyed(site, people)
    draw_wall(site_id=site.pk, by=people.engineer)
    a_paper(structure, "drawing-sheet", people.engineer)
    on(structure, "drawn", people.engineer)
    with pytest.raises(Refused, match="You drew design 1 yourself"):
        a_paper(structure, "check", people.engineer)
    a_paper(structure, "check", people.checker)
    with pytest.raises(Refused, match="Your own work"):
        on(structure, "checked", people.engineer)
    on(structure, "checked", people.checker)
    structure.refresh_from_db()
    assert structure.stage == "checked"


def test_the_check_of_an_older_drawing_counts_no_more(site, people):
    structure = surveyed(site, people)
    draw_wall(site_id=site.pk, by=people.engineer)
    a_paper(structure, "drawing-sheet", people.engineer)
    on(structure, "drawn", people.engineer)
    a_paper(structure, "check", people.checker)
    Design.objects.create(
        structure=structure,
        version=2,
        survey=Design.objects.get().survey,
        digest="another",
        by=people.engineer,
    )
    with pytest.raises(Refused) as refused:
        on(structure, "checked", people.checker)
    assert {"check-of-other-design", "papers"} <= {one.field for one in refused.value.findings}


def test_a_sanction_is_not_walked_past(site, people, schedule):
    heard(site, people, schedule)
    with pytest.raises(Refused) as refused:
        move_stage(structure_id=site.structure.pk, to="sanctioned", by=people.programme)
    assert "technical sanction" in refused.value.sentence() + str(refused.value.findings)


def test_sending_back_needs_a_reason_and_keeps_what_was_sent(site, people, schedule):
    estimate = heard(site, people, schedule)
    structure = site.structure
    with pytest.raises(Refused, match="a reason is needed"):
        on(structure, "drawn", people.district)
    moved = on(structure, "drawn", people.district, reason="The right end is not seen in the pit.")
    assert structure.stage == "drawn"
    assert moved.reason == "The right end is not seen in the pit."
    assert estimate.input_digest in {one["digest"] for one in moved.evidence}
    assert {"hearing", "check"} <= {one.kind for one in moved.papers.all()}
    assert moved.entry.act == "sent back"


def test_a_wall_is_drawn_on_a_settled_line_only(site, people):
    with pytest.raises(Refused, match="has no survey"):
        draw_wall(site_id=site.pk, by=people.engineer)
    with pytest.raises(Refused, match="You may not draw a wall"):
        draw_wall(site_id=site.pk, by=people.district)
