"""Sanction and approval: two acts, their limits, whose work, which money, and two ways to say no."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta
from decimal import Decimal

import pytest
from django.utils import timezone

from costing.actions.approval import Funding, Terms, approve, refuse, sanction, send_back
from costing.actions.approval_checks import judge_estimate
from costing.actions.estimate import request_estimate
from costing.actions.money_lines import LineTerms, change_money_line, enter_money_line
from costing.models import Estimate, MoneyLine, Sanction
from costing.queries.decision_sheet import decision_sheet
from costing.queries.money_lines import money_line_sheets
from structures.actions.settings import change_setting
from structures.errors import Refused
from structures.models import Entry, Role
from structures.queries.register import check_registers, entries_of
from structures.queries.structures import visible_structures
from tests.factories import a_district, a_posting, a_schedule, a_site, a_user, a_watershed
from tests.papers import DAY, People, a_paper, a_photo, heard, on, read_all
from tests.structures.actions.test_second_factor import ask_for_it, set_up

pytestmark = pytest.mark.django_db
SIGNED_IN = datetime(2026, 4, 10, 3, 12, tzinfo=UTC)
YEAR_END = date(2027, 3, 31)


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


@pytest.fixture
def estimate(site, people, schedule):
    return heard(site, people, schedule)


@pytest.fixture
def line(district, people):
    return a_line(district, people.programme)


def a_line(district, by, **changes):
    said = {
        "code": "ML-1",
        "funder": "F-7",
        "currency": "INR",
        "amount": Decimal("900000.00"),
        "valid_from": date(2026, 1, 1),
    }
    return enter_money_line(district_id=district.pk, terms=LineTerms(**{**said, **changes}), by=by)


def limited(district, by, *, technical=1e6, administrative=1e6):
    for key, value in (
        ("technical_sanction_limit", technical),
        ("administrative_approval_limit", administrative),
    ):
        change_setting(key=key, value=value, district=district, reason="Order 4 of 2026.", by=by)


def sanctioned(estimate, by, number="TS-1", **changes):
    structure = estimate.site.structure
    said = {"terms": Terms(number, YEAR_END), "signed_in_at": SIGNED_IN, "by": by}
    return sanction(structure_id=structure.pk, estimate_id=estimate.pk, **{**said, **changes})


def approved(given, line, by, number="AA-1", amount=None, **changes):
    site = given.structure.site
    sheet = a_photo(site, by).pk
    funding = Funding(line.pk, given.amount if amount is None else amount, sheet)
    said = {"terms": Terms(number, YEAR_END), "signed_in_at": SIGNED_IN, "by": by}
    return approve(
        structure_id=given.structure_id,
        sanction_id=given.pk,
        funding=funding,
        **{**said, **changes},
    )


def stage(site):
    site.structure.refresh_from_db()
    return site.structure.stage


def test_two_acts_carry_a_structure_to_its_money(site, people, estimate, line):
    limited(site.watershed.district, people.programme)
    given = sanctioned(estimate, people.district)
    assert (given.revision, given.amount, given.estimate) == (0, estimate.sanction, estimate)
    assert stage(site) == "sanctioned"
    assert given.entry.content["amount"] == f"{estimate.sanction:f}"
    assert given.entry.content["estimate"] == estimate.input_digest
    assert given.entry.content["signed_in_at"] == "2026-04-10T03:12:00+00:00"
    paid = approved(given, line, people.district)
    assert stage(site) == "approved"
    assert (paid.money_line, paid.amount) == (line, given.amount)
    [sheet] = money_line_sheets(people.programme)
    assert (sheet.promised, sheet.left) == (given.amount, line.amount - given.amount)
    acts = [one.act for one in entries_of(people.programme, site.code)]
    assert acts[-4:] == ["technical sanction", "moved", "administrative approval", "moved"]
    assert all(one.whole for one in check_registers())


def test_a_devices_token_decides_nothing(site, people, estimate):
    with pytest.raises(Refused, match="A device's token decides nothing"):
        sanctioned(estimate, people.programme, signed_in_at=None)
    assert stage(site) == "heard"
    assert not Sanction.objects.exists()


def test_over_its_limit_the_office_hands_on_to_the_programme(site, people, estimate, line):
    district = site.watershed.district
    limited(district, people.programme, technical=float(estimate.sanction) - 0.01)
    with pytest.raises(Refused, match="over the limit of the district office"):
        sanctioned(estimate, people.district)
    given = sanctioned(estimate, people.programme)
    limited(district, people.programme, administrative=float(given.amount) - 0.01)
    with pytest.raises(Refused, match="Ask the programme manager"):
        approved(given, line, people.district)
    approved(given, line, people.programme)
    assert stage(site) == "approved"


def test_exactly_the_limit_is_within_it(site, people, estimate):
    limited(site.watershed.district, people.programme, technical=float(estimate.sanction))
    assert sanctioned(estimate, people.district).pk


def test_where_no_limit_is_entered_the_programme_decides(people, estimate):
    with pytest.raises(Refused, match="No limit of the district office"):
        sanctioned(estimate, people.district)
    assert sanctioned(estimate, people.programme).pk


def test_nobody_sanctions_their_own_estimate(site, people, estimate):
    district = site.watershed.district
    limited(district, people.programme)
    a_posting(people.engineer, Role.DISTRICT, district)
    with pytest.raises(Refused, match="Your own work"):
        sanctioned(estimate, people.engineer)


@pytest.mark.parametrize("who", ["field", "engineer"])
def test_other_roles_sanction_nothing(people, estimate, who):
    with pytest.raises(Refused, match="You may not give a technical sanction"):
        sanctioned(estimate, getattr(people, who))


def test_a_newer_estimate_makes_the_sheet_void(site, people, schedule, estimate):
    request_estimate(
        site_id=site.pk, by=people.engineer, schedule_id=schedule.pk, wall={"thickness_m": 1.2}
    )
    read_all()
    with pytest.raises(Refused, match="Estimate 2 came since"):
        sanctioned(estimate, people.programme)
    newer = Estimate.objects.get(version=2)
    with pytest.raises(Refused) as refused:  # it is of a drawing that nobody checked
        sanctioned(newer, people.programme)
    assert "check-of-other-design" in {one.field for one in refused.value.findings}
    assert not Sanction.objects.exists()


@pytest.mark.parametrize(
    ("terms", "words"),
    [
        (Terms(" ", YEAR_END), "The number is missing"),
        (Terms("TS-2", date(2026, 4, 9)), "over already, on 2026-04-09"),
    ],
)
def test_number_and_validity_are_asked_for(people, estimate, terms, words):
    with pytest.raises(Refused, match=words):
        sanctioned(estimate, people.programme, terms=terms)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"amount": Decimal("100.00")}, "has 100.00 left"),
        ({"currency": "NPR"}, "is in NPR, the sanction in INR"),
        ({"valid_to": date(2026, 4, 9)}, "does not hold on 2026-04-10"),
    ],
)
def test_a_line_that_does_not_bear_it_is_refused(site, people, estimate, changes, words):
    small = a_line(site.watershed.district, people.programme, **changes)
    given = sanctioned(estimate, people.programme)
    with pytest.raises(Refused, match=words):
        approved(given, small, people.programme)
    assert stage(site) == "sanctioned"


def test_less_than_the_technical_sanction_is_not_approved(people, estimate, line):
    given = sanctioned(estimate, people.programme)
    with pytest.raises(Refused, match="is below the technical sanction"):
        approved(given, line, people.programme, amount=given.amount - Decimal("0.01"))


def test_what_is_promised_elsewhere_is_not_promised_twice(site, people, schedule, estimate):
    other = a_site(
        site.watershed, "EX-B", lat=15.76, benchmark="BM 2", village_downstream="Pirrumad"
    )
    second = heard(other, people, schedule)
    amount = estimate.sanction + second.sanction - Decimal("0.01")
    line = a_line(site.watershed.district, people.programme, amount=amount)
    approved(sanctioned(estimate, people.programme), line, people.programme)
    given = sanctioned(second, people.programme)
    with pytest.raises(Refused, match="left"):
        approved(given, line, people.programme)
    change_money_line(
        line_id=line.pk,
        amount=amount + Decimal("0.01"),
        valid_to=None,
        reason="Raised by the funder, letter 12.",
        by=people.programme,
    )
    approved(given, line, people.programme)
    with pytest.raises(Refused, match="is promised from ML-1"):
        change_money_line(
            line_id=line.pk, amount=amount, valid_to=None, reason="less", by=people.programme
        )


def test_sent_back_with_a_reason(site, people, estimate):
    said = {"structure_id": site.structure.pk, "by": people.district, "signed_in_at": SIGNED_IN}
    with pytest.raises(Refused, match="a reason is needed"):
        send_back(**said, to="drawn", reason=" ")
    send_back(**said, to="drawn", reason="Show the key at the right end.")
    assert stage(site) == "drawn"
    assert Estimate.objects.get() == estimate


def test_a_refused_estimate_is_never_sanctioned(site, people, estimate):
    said = {"structure_id": site.structure.pk, "signed_in_at": SIGNED_IN, "by": people.district}
    entry = refuse(**said, estimate_id=estimate.pk, reason="The village below depends on it.")
    assert stage(site) == "flow-judged"
    assert entry.content["estimate"] == estimate.input_digest
    for to, who in (("drawn", "engineer"), ("checked", "checker"), ("priced", "engineer")):
        on(site.structure, to, getattr(people, who))
    on(site.structure, "heard", people.district)
    with pytest.raises(Refused, match="refused this estimate: The village below depends on it"):
        sanctioned(estimate, people.programme)


def test_a_sanction_is_revised_beside_the_first_and_says_why(site, people, estimate, line):
    first = sanctioned(estimate, people.programme)
    approved(first, line, people.programme)
    again = Terms("TS-1R", YEAR_END)
    with pytest.raises(Refused, match="The reason is missing"):
        sanctioned(estimate, people.programme, terms=again)
    revised = sanctioned(
        estimate, people.programme, terms=Terms("TS-1R", YEAR_END, why="Rock 0.8 m deeper.")
    )
    assert (revised.revision, stage(site)) == (1, "approved")
    assert Sanction.objects.get(pk=first.pk).number == "TS-1"
    assert revised.entry.subject.startswith("revised technical sanction TS-1R")


def test_the_one_who_acts_for_another_is_named_so(site, people, estimate):
    district = site.watershed.district
    limited(district, people.programme)
    deputy = a_user()
    a_posting(
        deputy,
        Role.DISTRICT,
        district,
        delegated_by=people.district,
        valid_to=date(2026, 4, 30),
    )
    given = sanctioned(estimate, deputy)
    assert given.entry.content["instead_of"] == people.district.username
    assert given.by == deputy


def test_blocking_cautions_stand_against_it(people, estimate):
    result = {
        **estimate.result,
        "cautions": [{"code": "x", "level": "block", "text": "OPEN flank"}],
    }
    estimate.result = result
    found = judge_estimate(estimate.site.structure, estimate, people.programme)
    assert [one.what for one in found] == ["OPEN flank"]


def test_a_line_of_another_district_is_not_there(people, estimate):
    far = a_district("NX")
    strange = a_line(far, a_user(Role.PROGRAMME, far), code="ML-9")
    given = sanctioned(estimate, people.programme)
    with pytest.raises(MoneyLine.DoesNotExist):
        approved(given, strange, people.programme)


def test_lines_are_kept_by_the_programme_and_entered(site, people):
    district = site.watershed.district
    with pytest.raises(Refused, match="You may not keep money lines"):
        a_line(district, people.district)
    a_line(district, people.programme)
    with pytest.raises(Refused, match="is taken"):
        a_line(district, people.programme)
    [entry] = Entry.objects.filter(act="money line entered")
    assert entry.content["amount"] == "900000.00"


def test_where_the_district_asks_a_fresh_one_time_code_comes_first(site, people, estimate):
    """Oracle: the office's practice, second factor for approvers; a working day of 12 hours."""
    district = site.watershed.district
    limited(district, people.programme)
    ask_for_it(district)
    with pytest.raises(Refused, match="none set up"):
        sanctioned(estimate, people.district)
    set_up(people.district)
    now = timezone.now()
    for late in (None, now - timedelta(hours=13)):
        with pytest.raises(Refused, match="within the last 12 hours"):
            sanctioned(estimate, people.district, factor_given_at=late)
    # A device's token decides nothing, whatever code it brings.
    with pytest.raises(Refused, match="token decides nothing"):
        sanctioned(estimate, people.district, signed_in_at=None, factor_given_at=now)
    assert stage(site) == "heard"
    assert sanctioned(estimate, people.district, factor_given_at=now).pk


def test_a_dearer_wall_asks_for_both_again_and_for_its_check(
    site, people, schedule, estimate, line
):
    """Oracle: ES-03 and ES-04, more than 5 and more than 10 percent over what was given."""
    first = sanctioned(estimate, people.programme)
    approved(first, line, people.programme)
    request_estimate(
        site_id=site.pk, by=people.engineer, schedule_id=schedule.pk, wall={"thickness_m": 1.5}
    )
    read_all()
    newer = Estimate.objects.get(version=2)
    structure = visible_structures(people.programme).get(site=site)
    sheet = decision_sheet(people.programme, structure)
    percent = float((newer.sanction - first.amount) / first.amount * 100)
    assert percent > 10
    assert [(one.percent, one.over) for one in sheet.excesses] == [(percent, True)] * 2
    assert (sheet.acts, sheet.before) == (("sanction", "approve"), estimate)
    again = Terms("TS-1R", YEAR_END, why="A thicker wall on the weathered side.")
    with pytest.raises(Refused, match="check is of another drawing"):
        sanctioned(newer, people.programme, terms=again)
    a_paper(site.structure, "check", people.checker)
    revised = sanctioned(newer, people.programme, terms=again)
    paid = approved(
        revised, line, people.programme, terms=Terms("AA-1R", YEAR_END, why="As sanctioned.")
    )
    assert (revised.revision, paid.revision, stage(site)) == (1, 1, "approved")
    after = decision_sheet(people.programme, structure)
    assert not any(one.over for one in after.excesses)
    [sheet] = money_line_sheets(people.programme)
    assert sheet.promised == paid.amount
