"""What a round, a desk and a drawing of the works are made of."""

from __future__ import annotations

from datetime import time

import numpy as np
import pytest

from structures.actions.alarms import lift_alarm, set_alarm
from structures.actions.found import Found, keep_found_levels
from structures.actions.strips import cover_strip
from structures.models import HoldPoint, Role, Structure
from structures.queries.drawn_wall import DrawnWall, drawn_wall
from structures.queries.trench_facts import trench_facts
from structures.queries.works import (
    hold_requests,
    looks_missing_today,
    open_clashes,
    open_trenches,
    round_of,
    strips_view,
    works_of,
)
from tests.factories import a_district, a_user
from tests.trench import DAY, TODAY, a_trench, as_drawn, ask, dig, look, see

pytestmark = pytest.mark.django_db


@pytest.fixture
def trench():
    return a_trench()


def line_of(trench, number=1):
    return works_of(trench.engineer, "OD-01").line(number)


def test_a_strip_says_where_each_point_stands(trench):
    strip = dig(trench)
    see(trench, ask(trench, strip, "H2", **as_drawn(strip)))
    ask(trench, strip, "H3")
    line = line_of(trench)
    assert [cell.word for cell in line.cells] == ["go", "go", "waiting", *[""] * 6]
    assert (line.next, line.asks, line.later) == ("H3", ("H4",), ("H5", "H6", "H7", "H8", "H9"))
    assert [one.hold for one in line.waiting] == ["H3"]


def test_after_a_layer_another_one_or_the_film_may_follow(trench):
    strip = dig(trench)
    for hold in ("H2", "H3", "H4", "H5", "H6"):
        see(trench, ask(trench, strip, hold, **(as_drawn(strip) if hold == "H2" else {})))
    assert line_of(trench).asks == ("H7.1",)
    ask(trench, strip, "H7.1")
    ask(trench, strip, "H7.2")
    assert line_of(trench).asks == ("H7.3", "H8")
    see(trench, HoldPoint.objects.get(hold="H7.1"), result="no", note="A dry joint.")
    assert line_of(trench).cells[6].word == "waiting"
    see(trench, HoldPoint.objects.get(hold="H7.2"), result="no", note="A dry joint.")
    assert line_of(trench).asks == ("H7.1",)


def test_a_covered_strip_tells_what_nobody_saw(trench):
    strip = dig(trench)
    cover_strip(strip_id=strip.pk, on=DAY, by=trench.field, knows_unseen=True)
    line = line_of(trench)
    assert [cell.word for cell in line.cells] == ["go", *["not seen"] * 8]
    assert (line.asks, line.next, line.against) == ((), None, ())
    assert works_of(trench.engineer, "OD-01").unseen == (line.strip,)


def test_the_round_goes_down_the_stream(trench):
    """Oracle: water runs from the higher bed to the lower."""
    district = trench.structure.site.watershed.district
    people = {"field": trench.field, "engineer": trench.engineer, "other": trench.other}
    lower = a_trench("OD-02", district, **people)
    shed = trench.structure.site.watershed
    for one, bed_m in ((trench, 423.0), (lower, 424.0)):
        type(one.structure.site).objects.filter(pk=one.structure.site_id).update(
            bed_level_m=bed_m, watershed=shed
        )
    assert [one.structure.site.code for one in round_of(trench.field)] == ["OD-02", "OD-01"]
    Structure.objects.filter(pk=lower.structure.pk).update(stage="noted")
    assert [one.structure.site.code for one in round_of(trench.field)] == ["OD-01"]
    assert round_of(a_user(Role.AUDITOR, district)) == []


def test_an_open_trench_without_a_look_is_missed(trench):
    strip = dig(trench)
    dig(trench, 2)
    look(trench, day=TODAY, strip=strip)
    assert [one.structure.site.code for one in open_trenches(trench.engineer)] == ["OD-01"]
    assert len(looks_missing_today(trench.engineer)) == 1
    look(trench, day=TODAY, at=time(8, 0))
    assert looks_missing_today(trench.engineer) == []


def test_what_waits_to_be_seen_waits_for_another_than_the_asker(trench):
    ask(trench, trench.strips[0], "H1", by=trench.engineer)
    assert not hold_requests(trench.engineer).exists()
    assert not hold_requests(trench.field).exists()
    assert hold_requests(trench.other).get().hold == "H1"
    far = a_user(Role.ENGINEER, a_district("ZZ", name="Zyx"))
    assert not hold_requests(far).exists()
    assert works_of(far, "OD-01") is None
    assert not open_clashes(far).exists()


def test_a_move_is_judged_by_the_worst_strip_and_by_rain_since_the_look(trench):
    """Rules TR-01 and TR-02 where a structure is moved."""
    first = dig(trench)
    assert trench_facts(trench.structure, "digging", DAY)["trench_look_today"]
    look(trench, strip=first, at=time(8, 0), crack=True)
    look(trench, strip=trench.strips[1], at=time(8, 5))
    assert not trench_facts(trench.structure, "digging", DAY)["trench_look_today"]
    look(trench, at=time(9, 0))
    assert trench_facts(trench.structure, "digging", DAY)["trench_look_today"]
    set_alarm(structure_id=trench.structure.pk, why="rain", by=trench.field)
    lift_alarm(structure_id=trench.structure.pk, why="over", by=trench.engineer)
    known = trench_facts(trench.structure, "digging", DAY)
    assert (known["alarm_set"], known["trench_look_today"]) == (False, False)


def test_rock_that_was_mended_is_drawn_once(trench):
    strip = dig(trench)
    keep = {"strip_id": strip.pk, "on": DAY, "by": trench.field}
    (wrong,), _ = keep_found_levels(levels=[Found(10.0, 424.1)], **keep)
    keep_found_levels(levels=[Found(10.0, 423.1)], corrects=wrong, **keep)
    assert strips_view(works_of(trench.engineer, "OD-01")).found == ((10.0, 423.1),)


def test_the_range_of_the_drawn_rock():
    """Oracle: hand; the line falls from 10 to 8 m, the tests' range from 9.5 and 11 to 6 and 8.5."""
    ends = np.array([0.0, 10.0])
    drawn = DrawnWall(
        None,
        None,
        None,
        ends,
        np.array([10.0, 8.0]),
        ends,
        np.array([9.5, 6.0]),
        np.array([11.0, 8.5]),
    )
    assert drawn.range_at(5.0) == pytest.approx((7.75, 9.75))
    assert drawn.lowest_m(2.0, 8.0) == pytest.approx((8.4, 6.7))
    alone = DrawnWall(None, None, None, ends, np.array([10.0, 8.0]), None, None, None)
    assert alone.range_at(5.0) == pytest.approx((8.5, 9.5))  # half a metre where no test gives one


def test_without_a_frozen_drawing_there_is_no_wall(trench):
    assert drawn_wall(trench.structure).wall.left_end_m == pytest.approx(8.88, abs=0.006)
    trench.structure.designs.update(frozen=False)
    assert drawn_wall(trench.structure) is None
