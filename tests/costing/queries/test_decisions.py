"""What waits for whom, how long, and in the order of the dry season."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from costing.models import Bill, OptionPaper
from costing.queries.decision_sheet import decision_sheet
from costing.queries.decisions import waiting, waiting_papers
from costing.queries.standing import standing_of, within
from costing.queries.ways import ways_of
from structures.actions.settings import change_setting
from structures.models import FirstRun, Role, Stream, Structure
from structures.queries.structures import visible_structures
from tests.factories import a_district, a_schedule, a_site, a_user, a_watershed
from tests.papers import DAY, People, heard

pytestmark = pytest.mark.django_db


@pytest.fixture
def district():
    return a_district(invented=True, as_of=DAY)


@pytest.fixture
def people(district):
    return People(district)


@pytest.fixture
def schedule(district, people):
    return a_schedule(district, people.engineer)


def a_stream(watershed, name, first):
    stream = Stream.objects.create(watershed=watershed, name=name)
    FirstRun.objects.create(stream=stream, year=2025, first_run_on=first)
    return stream


def place(watershed, code, lat, stream):
    said = {"benchmark": "BM", "village_downstream": "Pirrumad", "stream": stream}
    return a_site(watershed, code, lat=lat, **said)


def limited(district, by, amount):
    for key in ("technical_sanction_limit", "administrative_approval_limit"):
        change_setting(key=key, value=amount, district=district, reason="Order 4.", by=by)


def test_what_waits_stands_in_the_order_of_the_season(district, people, schedule):
    """Oracle: the stream that comes first leaves the fewest days."""
    watershed = a_watershed(district)
    late = place(watershed, "EX-A", 15.75, a_stream(watershed, "Late", date(2025, 7, 1)))
    early = place(watershed, "EX-B", 15.76, a_stream(watershed, "Early", date(2025, 5, 20)))
    never = place(watershed, "EX-C", 15.77, None)
    for site in (late, early, never):
        heard(site, people, schedule)
    Structure.objects.filter(site=late).update(since=date(2026, 3, 20))
    limited(district, people.programme, 1e6)
    lines = waiting(people.district)
    known = [one for one in lines if one.clock.days_left is not None]
    assert [one.structure.site.code for one in known] == ["EX-B", "EX-A"]
    gap = known[1].clock.last_opening_day - known[0].clock.last_opening_day
    assert gap.days == (date(2026, 7, 1) - date(2026, 5, 20)).days
    unknown = next(one for one in lines if one.structure.site == never)
    assert "cannot be computed" in unknown.clock.words
    assert [(one.days, one.long) for one in known] == [(0, False), (21, True)]
    assert {(one.whose, one.mine) for one in lines} == {("district", True)}


def test_over_the_limit_it_waits_for_the_programme(district, people, schedule):
    site = place(a_watershed(district), "EX-A", 15.75, None)
    estimate = heard(site, people, schedule)
    assert [(one.whose, one.mine) for one in waiting(people.district)] == [("programme", False)]
    assert [one.mine for one in waiting(people.programme)] == [True]
    limited(district, people.programme, float(estimate.sanction))
    [line] = waiting(people.district)
    assert (line.amount, line.currency, line.mine) == (estimate.sanction, "INR", True)
    assert waiting(a_user(Role.DISTRICT, a_district("NX"))) == []
    assert waiting(people.field) == []


@pytest.mark.parametrize(
    ("amount", "limit", "inside"),
    [
        ("100.00", None, None),
        ("100.00", 100.0, True),
        ("100.01", 100.0, False),
        ("0.30", 0.3, True),
    ],
)
def test_a_limit_is_compared_exactly(amount, limit, inside):
    """Oracle: 0.30 is not above 0.3, whatever the binary number says."""
    assert within(Decimal(amount), limit) is inside


def test_the_sheet_offers_what_the_reader_may_do(district, people, schedule):
    site = place(a_watershed(district), "EX-A", 15.75, None)
    estimate = heard(site, people, schedule)
    structure = visible_structures(people.district).get(site=site)
    assert decision_sheet(people.district, structure).acts == ("send-back", "refuse")
    limited(district, people.programme, 1e6)
    sheet = decision_sheet(people.district, structure)
    assert sheet.acts == ("sanction", "send-back", "refuse")
    assert (sheet.estimate, sheet.before, sheet.days) == (estimate, None, 0)
    assert sheet.minutes[0]["settlements"][0]["settlement"] == "Pirrumad"
    assert decision_sheet(people.engineer, structure).acts == ()
    assert decision_sheet(people.engineer, structure).own_work


def test_a_structure_says_what_it_waits_for_and_from_whom(district, people, schedule):
    """Oracle: the table of stages in the office's practice, row "walked"."""
    site = place(a_watershed(district), "EX-A", 15.75, None)
    ways = ways_of(people.field, site.structure)
    assert ways.next_stage == "walked"
    assert [(one.name, one.who) for one in ways.missing] == [
        ("walk-over", "field staff or an engineer")
    ]
    assert ways.may_go_on
    assert not ways_of(people.engineer, site.structure).may_go_on
    heard(site, people, schedule)
    site.structure.refresh_from_db()
    ways = ways_of(people.district, site.structure)
    assert ways.decided
    assert [one.name for one in ways.missing] == ["technical-sanction"]
    assert ways.others[:2] == ("closed-off", "priced")


def test_the_list_asks_the_database_as_often_for_many_as_for_few(district, people):
    watershed = a_watershed(district)
    stream = a_stream(watershed, "Odre", date(2025, 6, 12))

    def asked(count):
        for at in range(count):
            site = place(watershed, f"M-{Structure.objects.count()}", 15.70 + at / 1000, stream)
            Structure.objects.filter(site=site).update(stage="heard")
        with CaptureQueriesContext(connection) as queries:
            waiting(people.programme)
        return len(queries)

    few = asked(3)
    assert asked(30) == few


def test_bills_and_option_papers_wait_for_those_who_decide_them(district, people):
    site = place(a_watershed(district), "EX-A", 15.75, None)
    said = {"structure": site.structure, "currency": "INR", "claimed": Decimal("10.00")}
    for number, state in (("RB-1", Bill.State.HANDED_IN), ("RB-2", Bill.State.DRAFT)):
        Bill.objects.create(
            number=number,
            state=state,
            kind="running",
            billed_on=DAY,
            made_by=people.engineer,
            **said,
        )
    OptionPaper.objects.create(
        structure=site.structure, version=1, cause="Rock 0.8 m deeper", ways=[], digest="d"
    )
    told = [(one.kind, one.name, one.days) for one in waiting_papers(people.district)]
    assert told == [("option", "Rock 0.8 m deeper", 0), ("bill", "RB-1", 0)]
    assert [one.kind for one in waiting_papers(people.programme)] == ["option"]
    assert waiting_papers(people.engineer) == []
    assert waiting_papers(a_user(Role.DISTRICT, a_district("NX"))) == []


def test_the_clock_of_the_list_stands_among_the_facts_of_a_move(district, people, schedule):
    """Oracle: the last opening day of the list, which the estimate's work and the stream give."""
    watershed = a_watershed(district)
    site = place(watershed, "EX-A", 15.75, a_stream(watershed, "Odre", date(2025, 6, 12)))
    heard(site, people, schedule)
    [line] = waiting(people.programme)
    facts = standing_of(site.structure).facts
    assert line.clock.last_opening_day is not None
    assert facts["last_opening_day"] == line.clock.last_opening_day
