"""Parcels of phones: every record once, in any order; what differs is kept side by side."""

from __future__ import annotations

import itertools
from datetime import time
from uuid import uuid4

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from structures.actions.clashes import decide_clash
from structures.actions.parcels import take_parcel
from structures.errors import Refused
from structures.models import Clash, Entry, FoundLevel, HoldPoint, PhoneRecord, Role, TrenchLook
from structures.queries.districts import today_of
from tests.factories import a_district, a_user
from tests.trench import DAY, SEEN, a_trench, ask, dig, look, see

pytestmark = pytest.mark.django_db


@pytest.fixture
def trench():
    return a_trench()


def a_look(**changes):
    seen = {key: "no" if value is False else value for key, value in SEEN.items()}
    return {
        "id": str(uuid4()),
        "type": "look",
        "site": "OD-01",
        "strip": 1,
        "device_time": "2026-04-09T07:41:00+05:30",
        "day": "2026-04-09",
        "looked_at": "07:40",
        "result": "no stop found",
        **seen,
        **changes,
    }


def a_hold(hold="H5", strip=1, **changes):
    return {
        "id": str(uuid4()),
        "type": "hold-asked",
        "site": "OD-01",
        "strip": strip,
        "device_time": "2026-04-09T11:00:00+05:30",
        "hold": hold,
        "pump_hours": 12,
        **changes,
    }


def a_day_sheet(**changes):
    return {
        "id": str(uuid4()),
        "type": "day-sheet",
        "site": "OD-01",
        "device_time": "2026-04-09T17:00:00+05:30",
        "day": "2026-04-09",
        "done": "Strip 1 dug to rock.",
        **changes,
    }


def rock(level_m=423.0, offset_m=9.5, **changes):
    return {
        "id": str(uuid4()),
        "type": "found-level",
        "site": "OD-01",
        "strip": 1,
        "device_time": "2026-04-09T12:00:00+05:30",
        "day": "2026-04-09",
        "offset_m": offset_m,
        "level_m": level_m,
        **changes,
    }


def send(records, by, **changes):
    document = {"parcel": "p", "device": "phone-a", "by": by.username, "records": records}
    document |= {"sent": "2026-04-09T18:30:00+05:30", **changes}
    return take_parcel(document=document, by=by)[1]


def results(records, by, **changes):
    return [one.result for one in send(records, by, **changes)]


def test_a_record_is_kept_once_however_often_it_is_sent(trench):
    records = [a_look(), a_day_sheet()]
    assert results(records, trench.field) == ["kept", "kept"]
    again = send(records, trench.field)
    assert [one.result for one in again] == ["already here", "already here"]
    assert {one.rule for answer in again for one in answer.findings} == {"PC-01"}
    assert TrenchLook.objects.count() == trench.structure.day_sheets.count() == 1


def test_a_look_from_a_phone_is_judged_like_one_from_a_page(trench):
    (answer,) = send([a_look(spoil_back_m="1,2")], trench.field)
    assert (answer.result, [one.rule for one in answer.findings]) == ("kept", ["TR-03"])
    row = TrenchLook.objects.get(pk=answer.id)
    assert (row.spoil_back_m, row.result, row.by) == (1.2, "stop", trench.field)


@settings(max_examples=6, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(order=st.permutations(range(4)))
def test_the_order_in_a_parcel_does_not_matter(trench, order):
    """What opens the way comes first, wherever it stands: look before hold point."""
    strip = trench.structure.strips.get(number=1)
    if strip.opened_on is None:
        dig(trench)
    hold = a_hold("H4", key_width_m=0.9, key_depth_m=0.2)
    del hold["pump_hours"]
    records = [hold, a_look(), rock(), a_day_sheet()]
    answers = send([records[place] for place in order], trench.field)
    assert [one.result for one in answers] == ["kept"] * 4 or HoldPoint.objects.filter(
        hold="H4"
    ).exists()
    assert [str(one.id) for one in answers] == [records[place]["id"] for place in order]


def test_half_a_parcel_is_fine_and_the_rest_comes_later(trench):
    dig(trench)
    first, second = a_look(), rock()
    assert results([first], trench.field) == ["kept"]
    assert results([second, first], trench.field) == ["kept", "already here"]


def test_the_same_identifier_with_other_values_never_overwrites(trench):
    """Rule PC-02; what really arrives, row 41."""
    dig(trench)
    first = rock(423.0)
    assert results([first], trench.field) == ["kept"]
    (answer,) = send([{**first, "level_m": 421.0}], trench.field)
    assert (answer.result, answer.findings[0].rule) == ("held", "PC-02")
    assert results([{**first, "level_m": 421.0}], trench.field) == ["held"]
    clash = Clash.objects.get()
    assert (clash.record.content["level_m"], clash.content["level_m"]) == (423.0, 421.0)
    assert FoundLevel.objects.get().level_m == 423.0


@pytest.mark.parametrize(("counts", "levels"), [("first", [423.0]), ("second", [423.0, 422.0])])
def test_an_engineer_decides_which_counts_and_both_stay(trench, counts, levels):
    dig(trench)
    first = rock(423.0)
    send([first], trench.field)
    send([{**first, "level_m": 422.0}], trench.field)
    clash = Clash.objects.get()
    decide = {"clash_id": clash.pk, "counts": counts}
    with pytest.raises(Refused, match="You may not"):
        decide_clash(why="slip", by=trench.field, **decide)
    with pytest.raises(Refused, match="Which counts, and why"):
        decide_clash(why=" ", by=trench.engineer, **decide)
    decide_clash(why="The staff was read from the edge.", by=trench.engineer, **decide)
    found = list(FoundLevel.objects.order_by("at"))
    assert [one.level_m for one in found] == levels
    if counts == "second":
        assert found[1].corrects == found[0]
    assert Entry.objects.filter(act="correction").exists()
    with pytest.raises(Refused, match="decided before"):
        decide_clash(why="again", by=trench.engineer, **decide)


def test_two_phones_ask_for_one_hold_point_and_both_are_kept(trench):
    """What really arrives, row 41: two phones on one strip."""
    dig(trench)
    second = a_user(Role.FIELD, trench.structure.site.watershed.district)
    mine, theirs = a_hold(pump_hours=12), a_hold(pump_hours=15)
    assert results([mine], trench.field) == ["kept"]
    (answer,) = send([theirs], second)
    assert (answer.result, answer.findings[0].rule) == ("held", "PC-02")
    assert results([theirs], second) == ["already here"]
    clash = Clash.objects.get()
    decide_clash(clash_id=clash.pk, counts="second", why="Read later.", by=trench.engineer)
    hold = HoldPoint.objects.get(hold="H5")
    assert (hold.readings["pump_hours"], hold.asked_by) == (15, second)
    assert PhoneRecord.objects.get(pk=theirs["id"]).outcome == "kept"


def test_what_was_seen_as_it_was_asked_is_not_changed_under_the_seer(trench):
    row = trench.strips[0]
    first = {**a_hold("H1"), "peg_level_m": 423.9}
    del first["pump_hours"]
    send([first], trench.field)
    see(trench, HoldPoint.objects.get(pk=first["id"]))
    send([{**first, "peg_level_m": 424.9}], trench.field)
    with pytest.raises(Refused, match="was seen as it was first asked"):
        decide_clash(
            clash_id=Clash.objects.get().pk, counts="second", why="slip", by=trench.engineer
        )
    assert row.holds.get().readings == {"peg_level_m": 423.9}


def test_a_day_by_a_wrong_clock_waits_for_an_engineer(trench):
    """Rule LV-11; what really arrives, row 42: a phone in 1970."""
    wrong = a_day_sheet(device_time="1970-01-01T05:41:00+05:30", day="1970-01-01")
    (answer,) = send([wrong], trench.field)
    assert (answer.result, answer.findings[0].rule) == ("held", "LV-11")
    assert trench.structure.day_sheets.count() == 0
    clash = Clash.objects.get()
    assert clash.content["day"] == "2026-04-09"
    decide_clash(clash_id=clash.pk, counts="second", why="Sent that day.", by=trench.engineer)
    sheet = trench.structure.day_sheets.get()
    assert (sheet.day, sheet.by) == (DAY, trench.field)
    assert results([wrong], trench.field) == ["already here"]


def test_a_day_that_was_typed_is_believed_though_the_clock_is_not(trench):
    typed = a_day_sheet(device_time="1970-01-01T05:41:00+05:30")
    assert results([typed], trench.field) == ["kept"]
    assert results([a_day_sheet(day="2026-01-09")], trench.field) == ["held"]


def test_what_was_refused_may_come_again_once_its_cause_is_mended(trench):
    dig(trench)
    hold = a_hold(device_time="2026-04-10T11:00:00+05:30")
    answers = send([hold], trench.field, sent="2026-04-10T18:00:00+05:30")
    assert (answers[0].result, answers[0].findings[0].rule) == ("refused", "TR-01")
    assert not HoldPoint.objects.filter(hold="H5").exists()
    look(trench, day=DAY.replace(day=10), at=time(7, 0))
    assert results([hold], trench.field, sent="2026-04-10T18:05:00+05:30") == ["kept"]


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"type": "bill"}, "No such record is taken"),
        ({"site": "NO-1"}, "no such site where you serve"),
        ({"strip": 99}, "has no strip 99"),
        ({"strip": "two"}, "is no strip"),
        ({"result": "safe"}, "is not known here"),
        ({"looked_at": None}, "This is blank"),
        ({"sides": "a\x00b"}, "cannot be kept"),
        ({"sides": "\ud800"}, "cannot be kept"),
        ({"photos": ["x"]}, "is no UUID"),
    ],
)
def test_what_cannot_be_taken_is_told_and_keeps_nothing_else_out(trench, changes, said):
    answers = send([{**a_look(), **changes}, a_day_sheet()], trench.field)
    assert [one.result for one in answers] == ["refused", "kept"]
    assert said in " ".join(one.what for one in answers[0].findings)


def test_whoever_wrote_it_down_sends_it(trench):
    """Maker is never checker: no phone sends one person's records as another's."""
    with pytest.raises(Refused, match="written down by field"):
        take_parcel(
            document={"by": trench.field.username, "records": [a_look()]}, by=trench.engineer
        )


def test_an_identifier_of_another_district_tells_nothing_and_changes_nothing(trench):
    far = a_trench("ZZ-01", a_district("ZZ", name="Zyx"))
    first = a_day_sheet(
        site="ZZ-01", day=str(today_of(far.structure.site.watershed.district)), device_time=None
    )
    assert results([first], far.field, sent=None) == ["kept"]
    (answer,) = send([a_day_sheet(id=first["id"])], trench.field)
    assert (answer.result, "ZZ" in answer.findings[0].sentence()) == ("refused", False)
    (answer,) = send([a_day_sheet(site="ZZ-01")], trench.field)
    assert answer.result == "refused"
    assert trench.structure.day_sheets.count() == 0


def test_who_only_looks_on_sends_nothing(trench):
    auditor = a_user(Role.AUDITOR, trench.structure.site.watershed.district)
    assert results([a_day_sheet()], auditor) == ["refused"]
    assert trench.structure.day_sheets.count() == 0


def test_every_kind_is_taken(trench):
    strip = dig(trench)
    records = [
        a_look(strip=None),
        a_day_sheet(),
        rock(),
        {**a_day_sheet(), "type": "incident", "kind": "near", "what": "A slab slid.", "done": None},
        {
            **{key: value for key, value in a_day_sheet().items() if key != "done"},
            "type": "clay-test",
            "strip": 1,
            "layer": 1,
            "hand_roll_holds": "yes",
        },
        a_hold("H5"),
    ]
    assert results(records, trench.field) == ["kept"] * 6
    assert strip.clay_tests.get().hand_roll_holds is True
    assert trench.structure.incidents.get().what == "A slab slid."


def test_a_photo_comes_before_its_record(trench):
    dig(trench)
    (answer,) = send([a_hold(photos=[str(uuid4())])], trench.field)
    assert (answer.result, answer.findings[0].what) == (
        "refused",
        "A photo named here has not come.",
    )


def test_asked_on_a_page_and_by_phone(trench):
    """A hold point asked for on a page, without a phone's record behind it."""
    strip = dig(trench)
    ask(trench, strip, "H5", pump_hours=3)
    theirs = a_hold(pump_hours=15)
    assert results([theirs], trench.field) == ["held"]
    clash = Clash.objects.get()
    decide_clash(clash_id=clash.pk, counts="first", why="The page was first.", by=trench.engineer)
    assert HoldPoint.objects.get(hold="H5").readings["pump_hours"] == 3
    assert PhoneRecord.objects.get(pk=theirs["id"]).outcome == "refused"


def test_parcels_name_their_records_in_their_own_order(trench):
    records = list(itertools.chain([a_day_sheet() for _ in range(3)], [a_look()]))
    assert [str(one.id) for one in send(records, trench.field)] == [one["id"] for one in records]
