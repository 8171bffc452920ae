"""Strips, looks, hold points, rock found, day sheets, incidents, alarms and clay."""

from __future__ import annotations

import csv
from datetime import date, time, timedelta
from pathlib import Path
from uuid import uuid4

import pytest
from django.db import DatabaseError, transaction

from structures.actions import alarms, clay, day_book, strips
from structures.actions.found import Found, keep_found_levels
from structures.actions.holds import AskedBefore
from structures.actions.trench import locked_strip, why_nobody_goes_in
from structures.errors import Refused
from structures.life.stages import CLEARED
from structures.models import Entry, FoundLevel, Incident, Role, Strip
from structures.queries.trench_day import look_that_counts
from structures.queries.works import levels_that_count
from tests.factories import a_user
from tests.trench import DAY, TODAY, a_trench, as_drawn, ask, dig, look, photo, see

pytestmark = pytest.mark.django_db


@pytest.fixture
def trench():
    return a_trench()


def acts(trench):
    return list(Entry.objects.filter(structure=trench.structure).values_list("act", flat=True))


def cover(trench, strip, *, on=DAY, knows=False):
    return strips.cover_strip(strip_id=strip.pk, on=on, by=trench.field, knows_unseen=knows)


def see_all(trench, strip, *holds):
    for hold in holds:
        see(trench, ask(trench, strip, hold, **(as_drawn(strip) if hold == "H2" else {})))


ALL = ("H2", "H3", "H4", "H5", "H6", "H7.1", "H7.2", "H8", "H9")


def test_the_wall_is_cut_from_its_left_end(trench):
    """Oracle: the demo's own table of strips of OD-01, six metres each, the last one shorter."""
    lines = Path("fixtures/demo/strips.csv").read_text().splitlines()
    rows = [row for row in csv.DictReader(lines) if row["structure_id"] == "OD-01"]
    cut = trench.strips
    assert len(cut) == len(rows) == 10
    for strip, row in zip(cut, rows, strict=True):
        assert strip.from_m == pytest.approx(float(row["from_m"]), abs=0.006)
        assert strip.to_m == pytest.approx(float(row["to_m"]), abs=0.006)
        assert strip.drawn_rock_m == pytest.approx(float(row["lowest_drawn_rock_m"]), abs=0.02)
    assert acts(trench)[-1] == strips.CUT


def test_a_wall_is_not_cut_anew_under_work_that_has_begun(trench):
    strips.cut_wall(structure_id=trench.structure.pk, by=trench.engineer)
    ask(trench, trench.strips[0], "H1")
    with pytest.raises(Refused, match="has begun"):
        strips.cut_wall(structure_id=trench.structure.pk, by=trench.engineer)
    with pytest.raises(Refused, match="You may not"):
        strips.cut_wall(structure_id=trench.structure.pk, by=trench.field)


def test_a_strip_is_opened_after_pegs_and_look(trench):
    strip = trench.strips[0]
    with pytest.raises(Refused) as told:
        strips.open_strip(strip_id=strip.pk, on=DAY, by=trench.field)
    assert [one.rule for one in told.value.findings] == ["HP-01", "TR-01"]
    assert dig(trench).opened_on == DAY
    with pytest.raises(Refused, match="was opened"):
        strips.open_strip(strip_id=strip.pk, on=DAY, by=trench.field)


def test_a_strip_is_opened_only_while_digging():
    trench = a_trench(stage=CLEARED)
    with pytest.raises(Refused, match="stands at cleared"):
        dig(trench)


def test_nothing_is_written_for_a_day_to_come(trench):
    with pytest.raises(Refused, match="still to come"):
        look(trench, day=TODAY + timedelta(days=1))


@pytest.mark.parametrize(
    ("changes", "rule", "result"),
    [
        ({}, None, "no stop found"),
        ({"spoil_back_m": 1.4}, "TR-03", "stop"),
        ({"depth_m": 4.0, "spoil_back_m": 1.9}, "TR-03", "stop"),  # half the depth is 2.0 m
        ({"ladder_within_m": 7.7}, "TR-04", "stop"),
        ({"crack": True}, "", "stop"),
        ({"slope_as_cut": 1.4}, "", "stop"),
        ({"result": "stop"}, "", "stop"),
        ({"crack": None}, "", "not looked"),
        ({"result": "not looked"}, "TR-01", "not looked"),
    ],
)
def test_a_look_is_kept_and_counts_by_the_rules(trench, changes, rule, result):
    """Oracle: rules TR-01, TR-03, TR-04 of the office's practice, as written there."""
    row = look(trench, **changes)
    assert row.result == result
    assert [one["rule"] for one in row.findings] == ([] if rule is None else [rule])


def test_a_stop_at_one_strip_stands_until_somebody_looks_there_again(trench):
    first, second = trench.strips[:2]
    look(trench, strip=first, crack=True)
    fine = look(trench, strip=second, at=time(7, 45))
    assert look_that_counts(trench.structure, DAY).strip == first
    assert look_that_counts(trench.structure, DAY, second) == fine
    again = look(trench, strip=first, at=time(9, 0))
    assert look_that_counts(trench.structure, DAY, first) == again
    assert look_that_counts(trench.structure, DAY).result == "no stop found"
    whole = look(trench, at=time(10, 0), crack=True)
    assert look_that_counts(trench.structure, DAY, second) == whole


def test_rain_after_the_look_stops_the_work_until_the_next_look(trench):
    """Rule TR-02."""
    strip = dig(trench)
    alarms.set_alarm(structure_id=trench.structure.pk, why="It rains upstream", by=trench.field)
    told = why_nobody_goes_in(locked_strip(strip.pk), DAY)
    assert [one.field for one in told] == ["alarm"]
    with pytest.raises(Refused, match="You may not lift"):
        alarms.lift_alarm(structure_id=trench.structure.pk, why="over", by=trench.field)
    alarms.lift_alarm(structure_id=trench.structure.pk, why="The watch is back", by=trench.engineer)
    told = why_nobody_goes_in(locked_strip(strip.pk), DAY)
    assert [one.rule for one in told] == ["TR-02"]
    look(trench, strip=strip, at=time(11, 0))
    assert why_nobody_goes_in(locked_strip(strip.pk), DAY) == ()
    assert acts(trench)[-2:] == [alarms.SET, alarms.LIFTED]


def test_hold_points_go_in_their_order(trench):
    strip = dig(trench)
    early = ask(trench, strip, "H3")
    with pytest.raises(Refused) as told:
        see(trench, early)
    assert [one.rule for one in told.value.findings] == ["HP-01"]
    see_all(trench, strip, "H2")
    assert see(trench, early).result == "go"
    assert acts(trench)[-1] == "hold point seen"


def test_whoever_asks_does_not_see(trench):
    """Rule HP-02: maker is never checker."""
    row = ask(trench, trench.strips[0], "H1", by=trench.engineer)
    with pytest.raises(Refused) as told:
        see(trench, row)
    assert told.value.findings[0].rule == "HP-02"
    with pytest.raises(Refused, match="You may not see"):
        see(trench, row, by=trench.field)
    assert see(trench, row, by=trench.other).seen_by == trench.other


def test_rock_and_film_need_a_photo_with_place_and_day(trench):
    """Rule HP-03, and what really arrives, row 44."""
    strip = dig(trench)
    see_all(trench, strip, "H2")
    row = ask(trench, strip, "H3", photos=[photo(trench, place=None).pk])
    with pytest.raises(Refused, match="No photo of rock cleaned and seen"):
        see(trench, row)
    old = photo(trench, day=DAY - timedelta(days=365))
    with pytest.raises(Refused, match="No photo"):
        see(trench, row, photos=[old.pk])
    assert see(trench, row, photos=[photo(trench).pk]).result == "go"


def test_a_no_is_asked_for_again(trench):
    row = ask(trench, trench.strips[0], "H1")
    with pytest.raises(Refused, match="A note is missing"):
        see(trench, row, result="no")
    see(trench, row, result="no", note="Pegs stand 0.4 m upstream of the line.")
    again = ask(trench, trench.strips[0], "H1")
    assert (again.attempt, again.result) == (2, "")
    with pytest.raises(AskedBefore, match="waits to be seen"):
        ask(trench, trench.strips[0], "H1", by=trench.other)
    with pytest.raises(Refused, match="was seen by"):
        see(trench, row)


def test_nobody_asks_out_of_a_trench_that_nobody_looked_into(trench):
    strip = dig(trench)
    with pytest.raises(Refused) as told:
        ask(trench, strip, "H5", day=TODAY)
    assert [one.rule for one in told.value.findings] == ["TR-01"]
    assert ask(trench, strip, "H5", day=TODAY, from_edge=True).hold == "H5"


def test_readings_that_a_hold_point_asks_for_are_not_left_out(trench):
    strip = dig(trench)
    with pytest.raises(Refused) as told:
        ask(trench, strip, "H4", key_depth_m=None)
    assert [one.field for one in told.value.findings] == ["key_depth_m"]


def test_the_levels_of_h2_are_rock_found(trench):
    strip = dig(trench)
    ask(trench, strip, "H2", **as_drawn(strip))
    found = FoundLevel.objects.filter(strip=strip)
    assert [one.offset_m for one in found] == pytest.approx(
        [strip.from_m, (strip.from_m + strip.to_m) / 2, strip.to_m]
    )


def test_rock_below_the_drawn_range_halts_the_strip(trench, monkeypatch):
    """Rule HP-05; oracle for the range: 0.50 m below the line where no test gives one."""
    told = []
    monkeypatch.setattr(
        "structures.actions.found.happened", lambda name, pk, **_: told.append((name, pk))
    )
    strip = dig(trench, 5)
    offset = (strip.from_m + strip.to_m) / 2
    drawn = 418.89  # the demo's table, lowest drawn rock of strip 5
    keep = {"strip_id": strip.pk, "on": DAY, "by": trench.field}
    keep_found_levels(levels=[Found(offset, drawn - 0.2)], **keep)
    assert not Strip.objects.get(pk=strip.pk).halted
    _, findings = keep_found_levels(levels=[Found(offset, drawn - 3.67)], **keep)
    assert [(one.rule, one.level) for one in findings] == [("HP-05", "block")]
    assert Strip.objects.get(pk=strip.pk).halted
    assert told == [("rock-found", trench.structure.pk)]
    assert acts(trench)[-1] == "strip halted"
    row = ask(trench, strip, "H2", **as_drawn(strip))
    with pytest.raises(Refused, match="is halted"):
        see(trench, row)


def test_a_level_is_mended_by_another_one(trench):
    strip = dig(trench)
    keep = {"strip_id": strip.pk, "on": DAY, "by": trench.field}
    (wrong,), _ = keep_found_levels(levels=[Found(10.0, 432.1)], **keep)
    (right,), _ = keep_found_levels(levels=[Found(10.0, 423.1)], corrects=wrong, **keep)
    assert levels_that_count([wrong, right]) == [right]
    with pytest.raises(Refused, match="outside strip 1"):
        keep_found_levels(levels=[Found(40.0, 423.1)], **keep)
    with pytest.raises(Refused, match="was not open"):
        keep_found_levels(
            strip_id=trench.strips[1].pk, on=DAY, by=trench.field, levels=[Found(16.0, 421.0)]
        )


def test_a_strip_seen_in_every_point_is_covered_without_a_mark(trench):
    strip = dig(trench)
    see_all(trench, strip, *ALL)
    row = cover(trench, strip)
    assert (row.covered_on, row.covered_unseen, row.unseen_what) == (DAY, False, "")


def test_a_strip_covered_before_it_was_seen_keeps_its_mark_for_good(trench):
    """Rule HP-04; the database holds the mark against everybody."""
    strip = dig(trench)
    see_all(trench, strip, "H2", "H3")
    with pytest.raises(Refused, match="marked covered unseen for ever"):
        cover(trench, strip)
    row = cover(trench, strip, knows=True)
    assert row.covered_unseen
    assert row.unseen_what == "H4 key cut, H6 film, lower face, H8 film, upper face and top"
    assert acts(trench)[-1] == "covered unseen"
    with pytest.raises(DatabaseError), transaction.atomic():
        Strip.objects.filter(pk=strip.pk).update(covered_unseen=False)


def test_what_is_under_the_ground_is_not_asked_for_any_more(trench):
    strip = dig(trench)
    see_all(trench, strip, "H2")
    waiting = ask(trench, strip, "H3")
    cover(trench, strip, knows=True)
    with pytest.raises(Refused, match="H3 is past"):
        see(trench, waiting)
    look(trench, day=TODAY, strip=strip)
    with pytest.raises(Refused, match="was covered"):
        ask(trench, strip, "H4", day=TODAY)


def test_an_accident_is_told_once_and_added_to(trench):
    tell = {"structure_id": trench.structure.pk, "by": trench.field, "day": DAY}
    row = day_book.tell_incident(kind="near", what="A slab slid into the trench.", hurt=0, **tell)
    day_book.tell_incident(
        kind="hurt", what="A foot was bruised.", hurt=1, adds_to_id=row.pk, **tell
    )
    assert acts(trench)[-2:] == ["incident", "incident"]
    assert Incident.objects.get(adds_to=row).hurt == 1
    with pytest.raises(TypeError, match="written once"):
        row.save()
    with pytest.raises(Refused, match="not told what happened"):
        day_book.tell_incident(kind="near", what="  ", **tell)
    with pytest.raises(Refused, match="no such incident"):
        day_book.tell_incident(kind="near", what="x", adds_to_id=uuid4(), **tell)


def test_day_sheets_stand_beside_each_other(trench):
    keep = {"structure_id": trench.structure.pk, "by": trench.field, "day": DAY}
    day_book.keep_day_sheet(done="Strip 1 dug to rock.", people=9, pump_hours=6.5, **keep)
    day_book.keep_day_sheet(done="And the key cut.", people=None, **keep)
    assert trench.structure.day_sheets.count() == 2


def test_clay_is_kept_with_what_is_against_it(trench):
    """Oracle: handbook 7.c, LL 55 and PL 33 lie below the A-line."""
    keep = {"structure_id": trench.structure.pk, "by": trench.field, "day": DAY}
    row = clay.keep_clay_test(liquid_limit_percent=55.0, plastic_limit_percent=33.0, **keep)
    assert [one["field"] for one in row.findings if one["level"] == "hold"] == [
        "plastic_limit_percent"
    ]
    with pytest.raises(Refused, match="Nothing was tested"):
        clay.keep_clay_test(note="wet", layer=2, **keep)


def test_a_clay_pit_keeps_away_from_a_tank_bund(trench):
    """Rule DW-07: 50 m, unless consent is attached."""
    enter = {"site_id": trench.structure.site_id, "by": trench.engineer}
    with pytest.raises(Refused) as told:
        clay.enter_clay_source(name="Tank bed", from_bund_m=49.0, **enter)
    assert told.value.findings[0].rule == "DW-07"
    clay.enter_clay_source(name="Tank bed", from_bund_m=50.0, proven_m3=900.0, **enter)
    clay.enter_clay_source(name="East", from_bund_m=49.0, consent=photo(trench), **enter)
    with pytest.raises(Refused, match="is there already"):
        clay.enter_clay_source(name="East", **enter)


@pytest.mark.parametrize("role", [Role.AUDITOR, Role.ADMIN, Role.PROGRAMME])
def test_who_only_looks_on_writes_nothing(trench, role):
    somebody = a_user(role, trench.structure.site.watershed.district)
    with pytest.raises(Refused, match="You may not"):
        day_book.keep_day_sheet(
            structure_id=trench.structure.pk, by=somebody, day=date(2026, 4, 9), done="dug"
        )
