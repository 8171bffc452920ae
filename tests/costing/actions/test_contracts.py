"""Contracts: as signed, nothing assumed; varied by a new version with a reason."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest

from costing.actions.contracts import AgreedRate, enter_contract, vary_contract
from costing.models import Contract
from costing.queries.contracts import contract_in_force, terms_of, value_of, visible_contracts
from structures.errors import Refused
from structures.models import Entry, Role
from tests.costing.works_office import RATES, a_deal, a_works_office
from tests.factories import a_user
from tests.trench import a_trench

pytestmark = pytest.mark.django_db


@pytest.fixture
def trench():
    return a_trench()


@pytest.fixture
def officer(trench):
    return a_user(Role.DISTRICT, trench.structure.site.watershed.district)


def test_what_a_contract_does_not_state_is_not_known(trench, officer):
    contract = enter_contract(structure_id=trench.structure.pk, deal=a_deal(), by=officer)
    terms = terms_of(contract)
    assert (terms.retention_percent, terms.advance, terms.price_index, terms.deductions) == (
        *(None,) * 3,
        (),
    )
    assert terms.rate_of("excavation", 1.5) == Decimal("145.00")
    assert terms.rate_of("film") is None
    assert value_of(contract) is None
    content = Entry.objects.get(act="contract signed").content
    assert (content["retention_percent"], content["advance"]) == (None, None)
    assert content["currency"] == "INR"


def test_its_value_is_the_sum_of_agreed_quantities(trench, officer):
    """Oracle: 12.50 x 763.00 + 7 x 650.00 = 9537.50 + 4550.00."""
    rates = (
        AgreedRate("clay", "m3", Decimal("763.00"), quantity=Decimal("12.50")),
        AgreedRate("marker", "each", Decimal("650.00"), quantity=Decimal("7.00")),
    )
    contract = enter_contract(
        structure_id=trench.structure.pk, deal=a_deal(rates=rates), by=officer
    )
    assert value_of(contract) == Decimal("14087.50")


def test_a_variation_is_another_version_with_a_reason():
    office = a_works_office()
    first, officer = office.contract, office.officer
    dearer = a_deal(rates=(*RATES[:2], AgreedRate("clay", "m3", Decimal("800.00"))))
    with pytest.raises(Refused, match="reason is missing"):
        vary_contract(contract_id=first.pk, deal=dearer, why=" ", by=officer)
    second = vary_contract(contract_id=first.pk, deal=dearer, why="Clay from farther.", by=officer)
    assert (second.version, second.replaces, contract_in_force(office.structure)) == (
        2,
        first,
        second,
    )
    assert terms_of(first).rate_of("clay") == Decimal("763.00")
    with pytest.raises(Refused, match="Version 2 is in force"):
        vary_contract(contract_id=first.pk, deal=dearer, why="Again.", by=officer)
    with pytest.raises(Refused, match="Contract C-7 is in force"):
        enter_contract(structure_id=office.structure.pk, deal=a_deal(), by=officer)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"number": " "}, "missing"),
        ({"signed_on": date(2026, 4, 11)}, "still to come"),
        ({"ends_on": date(2026, 3, 4)}, "before it begins"),
        ({"currency": "rupees"}, "currency"),
        ({"rates": ()}, "No rate is agreed"),
        ({"rates": (*RATES, RATES[0])}, "has two rates"),
        ({"rates": (AgreedRate("clay", "m2", Decimal(1)),)}, "measured in m3"),
        ({"rates": (AgreedRate("clay", "m3", Decimal("1.005")),)}, "two decimals"),
        ({"retention_percent": Decimal(101)}, "not between 0 and 100"),
        ({"advance": Decimal(1000)}, "stated together"),
        ({"deductions": ({"what": "tax", "percent": "2", "amount": "5"},)}, "one of the two"),
        (
            {
                "price_index": {
                    "fixed": "0.15",
                    "parts": [{"what": "labour", "share": "0.45", "base": "280"}],
                }
            },
            "1",
        ),
    ],
)
def test_what_cannot_be_is_refused_in_a_sentence(trench, officer, changes, words):
    with pytest.raises(Refused) as refused:
        enter_contract(structure_id=trench.structure.pk, deal=a_deal(**changes), by=officer)
    assert words in refused.value.sentence()
    assert not Contract.objects.exists()


def test_before_the_approval_nothing_can_be_agreed(officer, trench):
    trench.structure.stage = "sanctioned"
    trench.structure.save()
    with pytest.raises(Refused, match="nothing is approved"):
        enter_contract(structure_id=trench.structure.pk, deal=a_deal(), by=officer)


def test_the_office_signs_and_field_staff_never_see(trench, officer):
    with pytest.raises(Refused, match="You may not enter a signed contract"):
        enter_contract(structure_id=trench.structure.pk, deal=a_deal(), by=trench.engineer)
    enter_contract(structure_id=trench.structure.pk, deal=a_deal(), by=officer)
    assert visible_contracts(trench.engineer).count() == 1
    assert visible_contracts(trench.field).count() == 0
