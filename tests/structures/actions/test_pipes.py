"""Pipes set with a wall are wells from that day on: both or none, with mark, bottom and role."""

from __future__ import annotations

import pytest

from structures.actions.pipes import ENTERED, Pipe, enter_pipes
from structures.errors import Refused
from structures.models import Role, Strip, Well
from tests.factories import a_user
from tests.trench import DAY, a_trench

pytestmark = pytest.mark.django_db
UP = Pipe("upstream", "OD-01-PU", "4", "6.2", "423.4", "0.35", "0.063")
DOWN = Pipe("downstream", "OD-01-PD", "5", "5.9", "423.1", "0.4")


@pytest.fixture
def trench():
    found = a_trench(without=("soundings", "refraction"))
    Strip.objects.filter(structure=found.structure, number=1).update(opened_on=DAY)
    return found


def enter(trench, *pipes, by=None, on=DAY):
    return enter_pipes(
        structure_id=trench.structure.pk, set_on=on, pipes=pipes, by=by or trench.engineer
    )


def test_a_pair_of_pipes_becomes_two_wells_with_their_marks(trench):
    """Oracle: level of the mark = ground + height, by hand 423.4 + 0.35 = 423.75."""
    up, down = enter(trench, UP, DOWN)
    assert (up.kind, up.role, up.upstream_of_wall_m) == ("pipe", "upstream", 4.0)
    assert (down.role, down.upstream_of_wall_m, down.bottom_below_ground_m) == (
        "downstream",
        -5.0,
        5.9,
    )
    mark = up.marks.get()
    assert (mark.level_m, mark.height_above_ground_m, mark.valid_from) == (423.75, 0.35, DAY)
    assert {one.site for one in (up, down)} == {trench.structure.site}
    entry = trench.structure.entries.get(act=ENTERED)
    assert [one["well"] for one in entry.content["pipes"]] == ["OD-01-PU", "OD-01-PD"]


def test_one_wrong_pipe_keeps_both_out(trench):
    wrong = Pipe("downstream", "OD-01-PU", "5", "5.9", "423.1", "0.4")
    with pytest.raises(Refused, match="taken") as refused:
        enter(trench, UP, wrong)
    assert [one.field for one in refused.value.findings] == ["downstream.code"]
    assert not Well.objects.exists()


@pytest.mark.parametrize("field", ["distance_m", "depth_m", "ground_level_m", "mark_height_m"])
def test_a_pipe_without_a_measure_is_refused_by_name(trench, field):
    given = {
        key: getattr(UP, key)
        for key in ("side", "code", "distance_m", "depth_m", "ground_level_m", "mark_height_m")
    }
    with pytest.raises(Refused) as refused:
        enter(trench, Pipe(**{**given, field: " "}))
    assert [one.field for one in refused.value.findings] == [f"upstream.{field}"]


def test_a_signed_distance_is_asked_about(trench):
    with pytest.raises(Refused, match="has a sign"):
        enter(trench, Pipe("downstream", "OD-01-PD", "-5", "5.9", "423.1", "0.4"))


def test_no_trench_no_pipe(trench):
    Strip.objects.filter(structure=trench.structure).update(opened_on=None)
    with pytest.raises(Refused, match="No trench was opened"):
        enter(trench, UP)


def test_a_day_to_come_and_a_manager_are_refused(trench):
    with pytest.raises(Refused, match="still to come"):
        enter(trench, UP, on=DAY.replace(year=2027))
    manager = a_user(Role.PROGRAMME, trench.structure.site.watershed.district)
    with pytest.raises(Refused, match="may not"):
        enter(trench, UP, by=manager)
