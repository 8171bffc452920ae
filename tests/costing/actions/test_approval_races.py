"""Two signatures at the same moment: one number of the register each, and no money promised twice."""

from __future__ import annotations

from datetime import UTC, date, datetime
from decimal import Decimal

import pytest

from costing.actions.approval import Funding, Terms, approve, sanction
from costing.actions.money_lines import LineTerms, enter_money_line
from costing.models import Sanction
from costing.queries.money_lines import money_line_sheets
from structures.actions.register import append
from structures.models import Chain, Entry
from structures.queries.register import check_registers
from tests.at_once import at_once, refusals
from tests.factories import a_district, a_schedule, a_site, a_watershed
from tests.papers import DAY, People, a_photo, heard

pytestmark = [pytest.mark.postgres, pytest.mark.django_db(transaction=True)]
SIGNED_IN = datetime(2026, 4, 10, 3, 12, tzinfo=UTC)
TERMS = {"valid_to": date(2027, 3, 31)}
HANDS = 6


@pytest.fixture
def district():
    return a_district(invented=True, as_of=DAY)


@pytest.fixture
def people(district):
    return People(district)


def test_entries_at_once_take_one_number_each(district, people):
    answers = at_once(
        *(
            lambda number=number: append(
                district=district,
                by=people.programme,
                act="moved",
                subject=f"step {number}",
                content={"step": number},
            )
            for number in range(HANDS)
        )
    )
    assert refusals(answers) == []
    assert sorted(one.number for one in answers) == list(range(1, HANDS + 1))
    assert Chain.objects.get().length == Entry.objects.count() == HANDS
    assert [one.whole for one in check_registers()] == [True]


def test_one_estimate_is_sanctioned_once(district, people):
    site = a_site(a_watershed(district), benchmark="BM", village_downstream="Pirrumad")
    estimate = heard(site, people, a_schedule(district, people.engineer))
    answers = at_once(
        *(
            lambda number=number: sanction(
                structure_id=site.structure.pk,
                estimate_id=estimate.pk,
                terms=Terms(f"TS-{number}", **TERMS),
                by=people.programme,
                signed_in_at=SIGNED_IN,
            )
            for number in range(HANDS)
        )
    )
    # The first one moves the structure on; the others would be revisions without a reason.
    assert refusals(answers) == ["The reason is missing."] * (HANDS - 1)
    assert Sanction.objects.count() == 1
    assert all(one.whole for one in check_registers())


def test_the_same_money_is_promised_once(district, people):
    watershed, schedule = a_watershed(district), a_schedule(district, people.engineer)
    given = []
    for at, code in enumerate(("EX-A", "EX-B", "EX-C")):
        said = {"lat": 15.75 + at / 100, "benchmark": "BM", "village_downstream": "Pirrumad"}
        site = a_site(watershed, code, **said)
        estimate = heard(site, people, schedule)
        given.append(
            sanction(
                structure_id=site.structure.pk,
                estimate_id=estimate.pk,
                terms=Terms("TS-1", **TERMS),
                by=people.programme,
                signed_in_at=SIGNED_IN,
            )
        )
    enough_for_two = sum((one.amount for one in given[:2]), start=Decimal(0))
    line = enter_money_line(
        district_id=district.pk,
        terms=LineTerms("ML-1", "F-7", "INR", enough_for_two, date(2026, 1, 1)),
        by=people.programme,
    )
    sheets = [a_photo(one.structure.site, people.programme).pk for one in given]
    answers = at_once(
        *(
            lambda one=one, sheet=sheet: approve(
                structure_id=one.structure_id,
                sanction_id=one.pk,
                funding=Funding(line.pk, one.amount, sheet),
                terms=Terms("AA-1", **TERMS),
                by=people.programme,
                signed_in_at=SIGNED_IN,
            )
            for one, sheet in zip(given, sheets, strict=True)
        )
    )
    [refused] = refusals(answers)
    assert refused.startswith("ML-1 has 0.00 left")
    [sheet] = money_line_sheets(people.programme)
    assert (sheet.promised, sheet.left) == (enough_for_two, Decimal(0))
