"""Readings as they are taken, doubted, decided on and worked out anew."""

from __future__ import annotations

from datetime import date
from uuid import UUID

import pytest

from structures.actions.marks import change_mark
from structures.actions.readings import take_readings
from structures.actions.repairs import decide_repairs, reverse_repair
from structures.actions.wells import edit_well, enter_well, keep_apart
from structures.errors import Refused
from structures.models import Entry, Reading, Repair, Role, Well
from structures.queries.wells import findings_of, well_sheet
from tests import factories as make
from tests.structures.wells import a_record, a_well, readings_of

pytestmark = pytest.mark.django_db
ID = UUID("5f0f1a0e-7c0f-4d53-9a53-aaaaaaaaaaaa")


@pytest.fixture
def watershed():
    return make.a_watershed()


@pytest.fixture
def reader(watershed):
    return make.a_user(Role.FIELD, watershed.district)


@pytest.fixture
def engineer(watershed):
    return make.an_engineer(watershed.district)


@pytest.fixture
def well(watershed, reader):
    return a_well(watershed, reader)


def take(by, *records):
    return [one.result for one in take_readings(records=records, by=by)]


def test_a_reading_is_kept_with_the_level_of_the_days_mark(well, reader):
    """Oracle: 426.80 - 8.02 = 418.78 by hand."""
    readings_of(well, reader)
    assert take(reader, a_record(mark="M1", id=ID)) == ["kept"]
    row = Reading.objects.get(pk=ID)
    assert (row.level_m, row.standing, row.read_by) == (418.78, "taken", reader.username)


def test_sent_again_it_changes_nothing_and_with_other_values_both_are_kept(well, reader):
    """Oracle: PC-01, PC-02 and LV-13 of field practice."""
    readings_of(well, reader)
    first = a_record(id=ID)
    assert take(reader, first) == ["kept"]
    assert take(reader, first, first, a_record()) == ["already here"] * 3
    other = a_record(id=ID, depth_m=8.12)
    assert take(reader, other) == ["held"]
    assert take(reader, other) == ["already here"]
    rows = Reading.objects.filter(read_at=first.read_at)
    assert sorted(rows.values_list("depth_m", "standing")) == [(8.02, "held"), (8.12, "held")]
    assert set(Repair.objects.values_list("rule", flat=True)) == {"PC-02"}
    assert take(reader, a_record(depth_m=8.22)) == ["held"]
    assert Repair.objects.filter(rule="LV-13").count() == 3


def test_one_sending_is_answered_record_by_record(well, reader):
    readings_of(well, reader)
    told = take_readings(
        records=[
            a_record(depth_m=26.3, at="2025-04-02T06:30+05:30"),
            a_record(depth_m=-8.0, at="2025-04-03T06:30+05:30"),
            a_record(well="NO-W01"),
            a_record(dry=True, depth_m=None, at="2025-04-04T06:30+05:30"),
            a_record(state="obstructed", depth_m=None, at="2025-04-05T06:30+05:30"),
            a_record(state="pumping", at="2025-04-06T06:30+05:30"),
        ],
        by=reader,
    )
    assert [one.result for one in told] == ["held", "refused", "refused", "kept", "kept", "kept"]
    assert [{find.rule for find in one.findings} for one in told] == [
        {"LV-10"},
        {"LV-01"},
        {""},
        {"LV-05"},
        set(),
        {"LV-04"},
    ]
    # Bottom 11.50 m below ground, the mark 0.80 m above it: 12.30 m by hand.
    dry = Reading.objects.get(dry=True)
    assert (dry.depth_m, dry.level_m) == (12.3, 414.5)


def test_a_doubt_is_decided_by_another_and_can_be_reversed(well, reader, engineer):
    """Oracle: 26.3 ft is 8.02 m by hand; 426.80 - 8.02 = 418.78."""
    readings_of(well, reader)
    take(reader, a_record(depth_m=26.3, id=ID))
    repair = Repair.objects.get()
    assert (repair.raw, repair.suggested, repair.rule) == ("26.3", "8.02", "LV-10")
    with pytest.raises(Refused, match="You may not"):
        decide_repairs(repair_ids=[repair.pk], decision="suggested", why="tape in feet", by=reader)
    with pytest.raises(Refused, match="Write why"):
        decide_repairs(repair_ids=[repair.pk], decision="suggested", why=" ", by=engineer)
    decide_repairs(repair_ids=[repair.pk], decision="suggested", why="tape in feet", by=engineer)
    row = Reading.objects.get(pk=ID)
    assert (row.depth_m, row.level_m, row.standing) == (26.3, 418.78, "repaired")
    with pytest.raises(Refused, match="already"):
        decide_repairs(repair_ids=[repair.pk], decision="raw", why="no", by=engineer)
    reverse_repair(repair_id=repair.pk, decision="leave out", why="wrong well", by=engineer)
    row.refresh_from_db()
    assert (row.depth_m, row.level_m, row.standing) == (26.3, 400.5, "left out")
    with pytest.raises(Refused, match="no decision"):
        reverse_repair(repair_id=repair.pk, decision="raw", why="again", by=engineer)
    assert Repair.objects.filter(decision="suggested").exists()
    assert Entry.objects.filter(act="reading decided").count() == 2


def test_nobody_decides_on_a_reading_of_their_own(well, reader, engineer):
    readings_of(well, reader)
    take(engineer, a_record(depth_m=26.3))
    with pytest.raises(Refused, match="another engineer decides"):
        decide_repairs(
            repair_ids=[Repair.objects.get().pk], decision="raw", why="sure", by=engineer
        )


@pytest.mark.parametrize(
    ("value", "kept"), [("8.10", 418.7), ("8,10", None), ("", None), ("-1", None)]
)
def test_another_value_is_a_depth(well, reader, engineer, value, kept):
    readings_of(well, reader)
    take(reader, a_record(depth_m=26.3, id=ID))
    decide = {"repair_ids": [Repair.objects.get().pk], "decision": "other", "why": "read off"}
    if kept is None:
        with pytest.raises(Refused, match="value cannot be"):
            decide_repairs(**decide, value=value, by=engineer)
    else:
        decide_repairs(**decide, value=value, by=engineer)
        assert Reading.objects.get(pk=ID).level_m == kept


def test_a_late_change_of_the_mark_recomputes_and_says_which(well, reader, engineer):
    """Oracle: the mark rises by 0.60 m, so levels since that day rise by 0.60 m (definition)."""
    rows = readings_of(well, reader, count=10)
    changed = change_mark(
        well_id=well.pk,
        values={
            "mark": "M2",
            "what": "new stone ring",
            "level_m": "427.40",
            "valid_from": "2024-04-01",
            "why_changed": "parapet raised",
        },
        by=engineer,
    )
    since = [row for row in rows if row.read_at.date() >= date(2024, 4, 1)]
    assert {one.reading_id for one in changed.moved} == {row.pk for row in since}
    assert all(round(one.after_m - one.before_m, 3) == 0.6 for one in changed.moved)
    assert [one.rule for one in changed.findings] == ["MM-03"]
    assert changed.mark.height_above_ground_m == 1.4
    old = well.marks.get(mark="M1")
    assert old.valid_to == date(2024, 3, 31)
    # They name the old mark: held until somebody says from which mark they were read.
    held = Reading.objects.filter(standing="held")
    assert {one.pk for one in held} == {row.pk for row in since}
    assert changed.held == len(since)
    open_ones = list(Repair.objects.filter(decision=""))
    assert {(one.rule, one.raw, one.suggested) for one in open_ones} == {("LV-03", "M1", "M2")}
    first, *rest = open_ones
    decide_repairs(repair_ids=[first.pk], decision="raw", why="old ring read", by=engineer)
    decide_repairs(
        repair_ids=[one.pk for one in rest], decision="suggested", why="new ring", by=engineer
    )
    before = {one.reading_id: one for one in changed.moved}
    for one in Reading.objects.filter(pk__in=[row.pk for row in since]):
        kept = before[one.pk].before_m if one.pk == first.reading_id else before[one.pk].after_m
        assert one.level_m == kept


def test_a_mark_cannot_begin_before_the_one_in_use(well, engineer):
    values = {"mark": "M2", "what": "ring", "level_m": "427", "valid_from": "2022-05-01"}
    with pytest.raises(Refused, match="overlap"):
        change_mark(well_id=well.pk, values=values, by=engineer)
    assert well.marks.count() == 1


def test_a_well_is_entered_doubted_and_changed(watershed, well, engineer):
    values = {
        "code": "OD-W09",
        "role": "control",
        "name": "upper well",
        "lat": "15.72491",
        "lon": "77.4433",
        "upstream_of_wall_m": "120",
        "owner_consents": "yes",
        "owner_initials": "R.K.",
    }
    entered = enter_well(watershed_id=watershed.pk, values=values, by=engineer)
    assert {one.rule for one in findings_of(entered)} == {"WL-02", "WL-03", "WL-05"}
    keep_apart(well_id=entered.pk, other="OD-W01", why="two rings, seen", by=engineer)
    entered.refresh_from_db()
    assert {one.rule for one in findings_of(entered)} == {"WL-02", "WL-05"}
    with pytest.raises(Refused, match="was changed by"):
        edit_well(
            well_id=entered.pk, seen_at="2020-01-01T00:00:00+00:00", values=values, by=engineer
        )
    changed = edit_well(
        well_id=entered.pk,
        seen_at=entered.changed_at.isoformat(),
        values={"role": "upstream", "bottom_below_ground_m": "9.5"},
        by=engineer,
    )
    assert (changed.role, changed.bottom_below_ground_m, changed.name) == ("upstream", 9.5, "")


@pytest.mark.parametrize(
    ("values", "where"),
    [
        ({"code": "OD-W09"}, "role"),
        ({"code": "OD-W01", "role": "other"}, "code"),
        ({"code": "OD-W09", "role": "other", "site": "NO-1"}, "site"),
        ({"code": "OD-W09", "role": "other", "lat": "15.7"}, "lon"),
        ({"code": "OD-W09", "role": "other", "owner_initials": "Ramesh Kumar"}, "owner_initials"),
        ({"code": "OD-W09", "role": "other", "diameter_m": "40"}, "diameter_m"),
    ],
)
def test_a_well_that_cannot_be_is_refused_at_its_field(watershed, well, engineer, values, where):
    with pytest.raises(Refused) as refused:
        enter_well(watershed_id=watershed.pk, values=values, by=engineer)
    assert where in refused.value.sentence()
    assert Well.objects.count() == 1


def test_a_well_of_another_district_is_not_there(well):
    stranger = make.an_engineer(make.a_district("ZZ"))
    assert well_sheet(stranger, well.code) is None
    assert take(stranger, a_record()) == ["refused"]


def test_the_sheet_of_a_well_says_when_reading_stopped(well, reader, engineer):
    well.watershed.district.invented = True
    well.watershed.district.as_of = date(2024, 8, 1)
    well.watershed.district.save()
    readings_of(well, reader, count=5)
    sheet = well_sheet(engineer, well.code)
    # The fifth reading is of 3 January 2024 and 60 days: 3 March; 151 days to 1 August.
    assert (sheet.days_silent, sheet.mark_now.mark) == (151, "M1")
