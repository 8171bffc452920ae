"""The measurement book: who measures and who checks, what is entered once, how a mistake is mended."""

from __future__ import annotations

from datetime import date, timedelta
from decimal import Decimal

import pytest

from structures.actions.day_book import keep_day_sheet
from structures.actions.found import Found, keep_found_levels
from structures.actions.measurements import (
    Work,
    check_measurement,
    correct_measurement,
    enter_measurement,
    send_back_measurement,
)
from structures.actions.strips import cover_strip
from structures.errors import Refused
from structures.models import Entry, MeasurementEntry, Role
from structures.queries.drawn_wall import drawn_wall
from structures.queries.measurements import book_of, offered
from tests.factories import a_district, a_user
from tests.trench import DAY, TODAY, a_trench, dig

pytestmark = pytest.mark.django_db


@pytest.fixture
def trench():
    return a_trench()


@pytest.fixture
def strip(trench):
    return dig(trench)


def enter(trench, strip, item="clay", quantity="4.86", **changes):
    by = changes.pop("by", trench.engineer)
    said = {"measured_on": DAY, "working": "0.9 m x 5.4 m2", **changes}
    work = Work(strip and strip.pk, item, Decimal(quantity), **said)
    return enter_measurement(structure_id=trench.structure.pk, work=work, by=by)


def check(trench, entry, by=None):
    return check_measurement(entry_id=entry.pk, by=by or trench.other)


def test_an_entry_is_measured_by_one_and_checked_by_another(trench, strip):
    entry = enter(trench, strip)
    assert (entry.code, entry.unit, entry.relies_on) == ("OD-01-M01-clay", "m3", ["H5", "H7"])
    assert not entry.accepted
    with pytest.raises(Refused, match="Another person must check"):
        check(trench, entry, trench.engineer)
    check(trench, entry)
    entry.refresh_from_db()
    assert entry.accepted
    assert Entry.objects.get(act="measurement checked").content["quantity"] == "4.86"
    with pytest.raises(Refused, match="was checked before"):
        check(trench, entry)


@pytest.mark.parametrize("role", [Role.FIELD, Role.DISTRICT, Role.PROGRAMME, Role.AUDITOR])
def test_only_engineers_measure(trench, strip, role):
    """Oracle: the office's practice, "people": engineers measure up; a district officer never edits."""
    somebody = a_user(role, trench.structure.site.watershed.district)
    with pytest.raises(Refused, match="You may not measure up"):
        enter(trench, strip, by=somebody)


def test_nobody_of_another_district_measures_here(trench, strip):
    stranger = a_user(Role.ENGINEER, a_district("XX"))
    with pytest.raises(Refused):
        enter(trench, strip, by=stranger)
    assert book_of(stranger, "OD-01") is None


def test_what_was_sent_back_stays_and_is_measured_anew(trench, strip):
    first = enter(trench, strip, quantity="48.60")
    with pytest.raises(Refused, match="reason is missing"):
        send_back_measurement(entry_id=first.pk, why=" ", by=trench.other)
    send_back_measurement(entry_id=first.pk, why="Decimal point slipped.", by=trench.other)
    again = enter(trench, strip, quantity="4.86")
    assert again.code == "OD-01-M01-clay-2"
    book = book_of(trench.engineer, "OD-01")
    assert [(line.entry.code, line.state) for line in book.lines] == [
        ("OD-01-M01-clay", "sent back"),
        ("OD-01-M01-clay-2", "waiting"),
    ]


def test_a_piece_of_work_is_entered_once(trench, strip):
    enter(trench, strip)
    with pytest.raises(Refused, match=r"stands in entry OD-01-M01-clay already: 4\.86 m3"):
        enter(trench, strip, quantity="1.00")
    lift = {"item": "excavation", "from_m": 0.0, "to_m": 1.5}
    enter(trench, strip, **lift)
    enter(trench, strip, **lift | {"from_m": 1.5, "to_m": 3.0})
    with pytest.raises(Refused, match="already"):
        enter(trench, strip, **lift)


def test_a_mistake_is_mended_by_the_difference(trench, strip):
    """Oracle: 4.86 - 0.36 = 4.50; no more than that can be taken back again."""
    entry = enter(trench, strip)
    mend = {"why": "Face read twice.", "measured_on": DAY, "by": trench.engineer}
    with pytest.raises(Refused, match="not accepted"):
        correct_measurement(entry_id=entry.pk, difference=Decimal("-0.36"), **mend)
    check(trench, entry)
    row = correct_measurement(entry_id=entry.pk, difference=Decimal("-0.36"), **mend)
    assert (row.quantity, row.corrects, row.accepted) == (Decimal("-0.36"), entry, False)
    with pytest.raises(Refused, match=r"4\.50 m3 stand; a difference of -4\.51"):
        correct_measurement(entry_id=entry.pk, difference=Decimal("-4.51"), **mend)
    correct_measurement(entry_id=entry.pk, difference=Decimal("-4.50"), **mend)
    entry.refresh_from_db()
    assert entry.quantity == Decimal("4.86")


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"item": "gold"}, "There is no item gold"),
        ({"quantity": "0"}, "cannot be"),
        ({"quantity": "-1.00"}, "cannot be"),
        ({"quantity": "1.005"}, "cannot be"),
        ({"item": "excavation"}, "measured by lifts"),
        ({"from_m": 0.0, "to_m": 1.5}, "clay has no lifts"),
        ({"measured_on": TODAY + timedelta(days=1)}, "is still to come"),
        ({"measured_on": date(2026, 4, 8)}, "was opened on 2026-04-09"),
        ({"item": "marker"}, "measured for the whole wall"),
    ],
)
def test_an_entry_that_cannot_be_says_why(trench, strip, changes, words):
    with pytest.raises(Refused, match=words):
        enter(trench, strip, **changes)
    assert not MeasurementEntry.objects.exists()


def test_where_nobody_dug_nothing_is_measured(trench):
    with pytest.raises(Refused, match="Strip 4 was not opened"):
        enter(trench, trench.structure.strips.get(number=4))
    with pytest.raises(Refused, match="measured strip by strip"):
        enter(trench, None)


def test_measured_after_it_was_covered_is_held(trench, strip):
    """Oracle: rules BL-03 and BL-06; clay relies on H5 and H7, and nobody saw either."""
    cover_strip(strip_id=strip.pk, on=DAY, by=trench.field, knows_unseen=True)
    line = check(trench, enter(trench, strip, measured_on=TODAY))
    assert line.late
    assert [(one.rule, one.level) for one in line.findings] == [
        ("BL-03", "hold"),
        ("BL-06", "hold"),
    ]
    assert "measured 2026-04-10, covered 2026-04-09" in line.findings[0].what
    assert "relies on H5, H7 of strip 1, not seen" in line.findings[1].what
    assert (
        book_of(trench.engineer, "OD-01").late == (line,)
        or book_of(trench.engineer, "OD-01").late[0].entry == line.entry
    )


def test_an_entry_made_before_covering_learns_when_it_was_covered(trench, strip):
    entry = enter(trench, strip, measured_on=DAY)
    assert entry.covered_on is None
    cover_strip(strip_id=strip.pk, on=TODAY, by=trench.field, knows_unseen=True)
    [line] = book_of(trench.engineer, "OD-01").lines
    assert (line.covered_on, line.late) == (TODAY, False)


def test_work_is_offered_along_the_rock_as_found(trench):
    """Oracle: rock found 0.20 m under the line all along the strip makes its face 0.20 m higher:
    clay grows by 0.9 x 0.20 x length.
    """
    strip = dig(trench, 4)
    before = {(one.item, one.from_m): one for one in offered(trench.structure)}
    assert not before["clay", None].seen
    drawn = drawn_wall(trench.structure)
    inside = [x for x in drawn.offset_m.tolist() if strip.from_m < x < strip.to_m]
    levels = [Found(x, drawn.line_at(x) - 0.20) for x in (strip.from_m, *inside, strip.to_m)]
    keep_found_levels(strip_id=strip.pk, on=DAY, levels=levels, by=trench.field)
    after = {(one.item, one.from_m): one for one in offered(trench.structure)}
    assert after["clay", None].seen
    grown = after["clay", None].quantity - before["clay", None].quantity
    assert float(grown) == pytest.approx(0.9 * 0.20 * (strip.to_m - strip.from_m), abs=0.011)


def test_what_was_measured_is_not_offered_again(trench, strip):
    places = [(one.strip and one.strip.number, one.item) for one in offered(trench.structure)]
    assert (1, "clay") in places
    assert {number for number, _ in places} == {1, None}
    entry = enter(trench, strip)
    assert (1, "clay") not in [
        (one.strip and one.strip.number, one.item) for one in offered(trench.structure)
    ]
    send_back_measurement(entry_id=entry.pk, why="Wrong strip.", by=trench.other)
    assert (1, "clay") in [
        (one.strip and one.strip.number, one.item) for one in offered(trench.structure)
    ]


def test_pump_hours_are_offered_from_the_day_sheets(trench, strip):
    """Oracle: 6 + 7.5 hours; of two sheets of one day the later one counts."""
    for day, hours in ((date(2026, 4, 8), 6.0), (DAY, 5.0), (DAY, 7.5)):
        keep_day_sheet(structure_id=trench.structure.pk, day=day, by=trench.field, pump_hours=hours)
    [pumped] = [one for one in offered(trench.structure) if one.item == "dewatering"]
    assert (pumped.strip, pumped.quantity) == (None, Decimal("13.50"))
