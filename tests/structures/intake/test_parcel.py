"""Parcels of phones: what is read of them, and which clocks are believed."""

from __future__ import annotations

import json
from datetime import UTC, datetime, timedelta
from pathlib import Path
from uuid import UUID
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.field_records import KINDS, read_record
from structures.intake.parcel import clock_doubts, judge_clock, read_parcel

HERE = Path(__file__).with_name("parcels")
ZONE = ZoneInfo("Asia/Kolkata")
NOW = datetime(2026, 4, 7, 12, 40, tzinfo=UTC)  # when 39 was sent: 18:10 at +05:30


def parcel(name):
    return read_parcel(json.loads((HERE / f"{name}.json").read_text()), ZONE)


def test_a_parcel_is_read_record_by_record():
    """Oracle: the file as a person reads it."""
    read = parcel("first")
    assert (read.device, read.by) == ("phone-b", "field-4")
    assert read.sent_at == datetime(2026, 4, 5, 13, 11, tzinfo=UTC)
    first = read.records[0]
    assert first.id == UUID("dce27fa0-8891-41a6-be12-600763fb47a5")
    assert (first.kind, first.findings) == ("level", ())
    assert first.values == {"well": "BI-W07", "mark": "M1", "depth_m": 9.21, "state": "static"}
    assert first.made_at == datetime(2026, 4, 2, 0, 50, tzinfo=UTC)


def test_the_same_record_has_the_same_content_whenever_it_is_sent():
    first, again, changed = (parcel(name).records for name in ("first", "again", "changed"))
    assert [one.content for one in first] == [one.content for one in again]
    assert first[0].content != changed[0].content
    assert first[1].content == changed[1].content


def test_a_clock_of_1970_or_of_years_ahead_is_not_believed():
    """Oracle: when it was sent; both clocks are years off."""
    read = parcel("clock_1970")
    doubts = clock_doubts(read.records, sent_at=read.sent_at, received_at=read.sent_at)
    assert {place: one.suggested for place, one in doubts.items()} == {1: NOW, 2: NOW}
    assert doubts[1].what.startswith("Made on 1970-01-01 05:41")


def test_a_record_with_a_wrong_time_was_made_before_the_one_that_follows():
    document = json.loads((HERE / "clock_1970.json").read_text())
    document["records"][1]["device_time"] = "2026-04-07T06:30:00+05:30"
    read = read_parcel(document, ZONE)
    doubts = clock_doubts(read.records, sent_at=read.sent_at, received_at=read.sent_at)
    assert {place: one.suggested for place, one in doubts.items()} == {
        1: datetime(2026, 4, 7, 1, 0, tzinfo=UTC)
    }


def test_a_clock_that_was_off_when_it_sent_is_moved_by_as_much():
    """Oracle: hand sum; made three hours before sending, whatever the clock says."""
    stopped = datetime(1970, 1, 1, 5, 0, tzinfo=UTC)
    doubt = judge_clock(stopped, sent_at=stopped + timedelta(hours=3), received_at=NOW)
    assert doubt is not None
    assert doubt.suggested == NOW - timedelta(hours=3)


@given(hours=st.floats(0, 59 * 24))
def test_what_waited_on_a_phone_is_believed(hours):
    made = NOW - timedelta(hours=hours)
    assert judge_clock(made, sent_at=NOW, received_at=NOW + timedelta(minutes=5)) is None


@pytest.mark.parametrize("wrong", [None, [], {}, {"records": {}}, {"records": [{}] * 501}])
def test_what_is_no_parcel_is_refused_as_a_whole(wrong):
    with pytest.raises(Refused):
        read_parcel(wrong, ZONE)


def test_a_record_that_cannot_be_read_keeps_no_other_one_out():
    good = {"id": "dce27fa0-8891-41a6-be12-600763fb47a5", "type": "look", "site": "OD-03"}
    read = read_parcel({"records": [3, {"type": "look"}, {**good, "id": 7}, good]}, ZONE)
    told = [[one.sentence() for one in record.findings] for record in read.records]
    assert told == [
        ["record 1: A record is an object, not 3. Send it anew."],
        ["record 2, id: This record has no identifier. The phone gives each record one."],
        ["record 3, id: 7 is no UUID. The phone gives each record one."],
        [],
    ]


json_values = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=20),
    lambda inner: (
        st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=12), inner, max_size=5)
    ),
    max_leaves=12,
)


@given(
    records=st.lists(
        json_values
        | st.fixed_dictionaries(
            {},
            optional=dict.fromkeys(
                ("id", "type", "site", "strip", "photos", "device_time", "depth_m"), json_values
            ),
        ),
        max_size=4,
    )
)
def test_nothing_that_is_sent_breaks_the_reader(records):
    read = read_parcel({"records": records}, ZONE)
    assert len(read.records) == len(records)
    for one in read.records:
        if one.kind in KINDS:
            read_record(KINDS[one.kind], one.values, "record")


def test_numbers_are_read_as_they_are_typed_in_the_stream_bed():
    """Oracle: the table of what arrives: 4,35 is 4.35, digits of other scripts by their value."""
    values, findings = read_record(
        KINDS["found-level"],
        {"day": "2026-04-09", "offset_m": "4,35", "level_m": "४०५.२९"},
        "rock",
    )
    assert (values["offset_m"], values["level_m"]) == (4.35, 405.29)
    assert [one.level for one in findings] == ["note"]


@pytest.mark.parametrize(
    ("kind", "given_values", "said"),
    [
        ("look", {"day": "2026-04-31", "looked_at": "07:40", "result": "stop"}, "does not exist"),
        ("look", {"day": "2026-04-09", "looked_at": "25:40", "result": "stop"}, "is no time"),
        ("look", {"day": "2026-04-09", "looked_at": "07:40"}, "This is blank."),
        ("look", {"day": "2026-04-09", "looked_at": "07:40", "result": "safe"}, "is not known"),
        ("hold-asked", {"hold": "H10"}, "is no hold point"),
        ("hold-asked", {"hold": "H7.0"}, "is no hold point"),
        ("found-level", {"day": "2026-04-09", "offset_m": 3, "level": 9}, "no such setting"),
        ("clay-test", {"day": "2026-04-09", "crumb_reaction": "perhaps"}, "neither yes nor no"),
    ],
)
def test_what_cannot_be_is_told_with_its_field(kind, given_values, said):
    _, findings = read_record(KINDS[kind], given_values, "record")
    told = [one.sentence() for one in findings if one.level == "block"]
    assert any(said in one for one in told), told
