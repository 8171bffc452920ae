"""Several phones on one trench at the same moment: PostgreSQL with real transactions in threads."""

from __future__ import annotations

from functools import partial
from uuid import uuid4

import pytest

from structures.actions.alarms import set_alarm
from structures.actions.clashes import decide_clash
from structures.actions.holds import see_hold
from structures.actions.strips import cover_strip, cut_wall
from structures.errors import Refused
from structures.models import Clash, Entry, FoundLevel, HoldPoint, PhoneRecord, Role, TrenchLook
from tests.at_once import at_once, refusals
from tests.factories import a_user
from tests.structures.actions.test_parcels import a_day_sheet, a_hold, a_look, results, rock, send
from tests.trench import DAY, a_trench, ask, dig

pytestmark = [pytest.mark.postgres, pytest.mark.django_db(transaction=True)]
PHONES = 6


@pytest.fixture
def trench():
    found = a_trench()
    dig(found)
    return found


def told(answers):
    return sorted(one for many in answers for one in many)


def test_one_parcel_sent_by_many_at_once_is_kept_once(trench):
    records = [a_look(), rock(), a_day_sheet(), a_hold("H5")]
    before = TrenchLook.objects.count()
    answers = at_once(*[partial(results, records, trench.field)] * PHONES)
    assert told(answers) == ["already here"] * 4 * (PHONES - 1) + ["kept"] * 4
    assert PhoneRecord.objects.count() == 4
    assert TrenchLook.objects.count() == before + 1
    assert (FoundLevel.objects.count(), HoldPoint.objects.filter(hold="H5").count()) == (1, 1)


def test_two_phones_ask_for_one_hold_point_at_once_and_one_waits(trench):
    district = trench.structure.site.watershed.district
    people = [a_user(Role.FIELD, district) for _ in range(PHONES)]
    answers = at_once(
        *(partial(results, [a_hold(pump_hours=place)], one) for place, one in enumerate(people))
    )
    assert told(answers) == ["held"] * (PHONES - 1) + ["kept"]
    assert HoldPoint.objects.filter(hold="H5").count() == 1
    assert Clash.objects.count() == PHONES - 1


def test_other_values_under_one_identifier_at_once_are_all_kept(trench):
    name = str(uuid4())
    sent = [rock(422.0 + place / 10, id=name) for place in range(PHONES)]
    answers = at_once(*(partial(results, [one], trench.field) for one in sent))
    assert told(answers) == ["held"] * (PHONES - 1) + ["kept"]
    levels = {PhoneRecord.objects.get().content["level_m"]}
    levels |= {clash.content["level_m"] for clash in Clash.objects.all()}
    assert levels == {one["level_m"] for one in sent}


def test_one_identifier_at_two_sites_at_once_is_taken_by_one(trench):
    other = a_trench("OD-02", trench.structure.site.watershed.district, field=trench.field)
    name = str(uuid4())
    sent = [a_day_sheet(id=name, site=site) for site in ("OD-01", "OD-02")]
    answers = at_once(*(partial(results, [one], trench.field) for one in sent))
    assert told(answers) == ["kept", "refused"]
    sheets = trench.structure.day_sheets.count() + other.structure.day_sheets.count()
    assert sheets == 1


def test_a_hold_point_is_seen_by_one_of_two_at_once(trench):
    row = ask(trench, trench.strips[1], "H1")
    seers = (trench.engineer, trench.other)
    answers = at_once(*(partial(see_hold, hold_id=row.pk, result="go", by=one) for one in seers))
    assert len(refusals(answers)) == 1
    assert Entry.objects.filter(act="hold point seen", content__hold_point=str(row.pk)).count() == 1


def test_a_strip_is_covered_or_seen_never_half_of_both(trench):
    strip = trench.strips[0]
    row = ask(trench, strip, "H2", rock_start_m=423.3, rock_middle_m=422.7, rock_end_m=422.0)
    covered, seen = at_once(
        partial(cover_strip, strip_id=strip.pk, on=DAY, by=trench.field, knows_unseen=True),
        partial(see_hold, hold_id=row.pk, result="go", by=trench.engineer),
    )
    assert covered.covered_unseen
    assert isinstance(seen, Refused) == (HoldPoint.objects.get(pk=row.pk).seen_at is None)


def test_a_clash_is_decided_once(trench):
    first = rock(423.0)
    send([first], trench.field)
    send([{**first, "level_m": 422.0}], trench.field)
    decide = partial(
        decide_clash, clash_id=Clash.objects.get().pk, why="read anew", by=trench.engineer
    )
    answers = at_once(partial(decide, counts="first"), partial(decide, counts="second"))
    assert len(refusals(answers)) == 1


def test_an_alarm_is_set_once_and_a_wall_cut_once():
    trench = a_trench()
    district = trench.structure.site.watershed.district
    people = [a_user(Role.FIELD, district) for _ in range(PHONES)]
    at_once(
        *(
            partial(set_alarm, structure_id=trench.structure.pk, why="rain", by=one)
            for one in people
        )
    )
    assert trench.structure.alarms.count() == 1
    at_once(*[partial(cut_wall, structure_id=trench.structure.pk, by=trench.engineer)] * 3)
    assert trench.structure.strips.count() == 10
