"""A trench with a contract, a district office and entries of the measurement book, for tests of bills."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, date, datetime
from decimal import Decimal

from costing.actions.bills import BillGiven, hand_in_bill, write_bill
from costing.actions.contracts import AgreedRate, Deal, enter_contract
from costing.models import Contract
from structures.actions.measurements import Work, check_measurement, enter_measurement
from structures.models import Role, User
from tests.factories import a_user
from tests.trench import DAY, TODAY, Trench, a_trench, dig

SIGNED_IN = datetime(2026, 4, 10, 3, 12, tzinfo=UTC)
# Of the demo's rates, as far as these tests go.
RATES = (
    AgreedRate("excavation", "m3", Decimal("145.00")),
    AgreedRate("rock_key", "m3", Decimal("2850.00")),
    AgreedRate("clay", "m3", Decimal("763.00")),
    AgreedRate("marker", "each", Decimal("650.00")),
    AgreedRate("observation_pipe", "each", Decimal("3900.00")),
)


@dataclass(frozen=True)
class WorksOffice:
    trench: Trench
    officer: User
    contract: Contract

    @property
    def structure(self):
        return self.trench.structure

    @property
    def engineer(self):
        return self.trench.engineer

    @property
    def other(self):
        return self.trench.other


def a_deal(**changes):
    said = {
        "number": "C-7",
        "contractor": "CON-3",
        "signed_on": date(2026, 3, 1),
        "starts_on": date(2026, 3, 5),
        "currency": "INR",
        "rates": RATES,
        "safety_terms": "Slopes as drawn; nobody goes in without the look of the day.",
    }
    return Deal(**{**said, **changes})


def a_works_office(code="OD-01", district=None, **terms):
    """No sounding is read anew each time; the rock line of the survey was settled."""
    trench = a_trench(code, district, without=("soundings", "refraction"))
    officer = a_user(Role.DISTRICT, trench.structure.site.watershed.district)
    contract = enter_contract(structure_id=trench.structure.pk, deal=a_deal(**terms), by=officer)
    return WorksOffice(trench, officer, contract)


def measured(office, strip, item, quantity, *, checked=True, on=DAY, **lift):
    work = Work(strip and strip.pk, item, Decimal(quantity), on, working="by tape", **lift)
    entry = enter_measurement(structure_id=office.structure.pk, work=work, by=office.engineer)
    if checked:
        check_measurement(entry_id=entry.pk, by=office.other)
    return entry


def pipes_and_markers(office):
    """Two entries that rely on no hold point: 2 x 3900.00 and 7 x 650.00, in all 12350.00."""
    return (
        measured(office, None, "observation_pipe", "2.00"),
        measured(office, None, "marker", "7.00"),
    )


def clay_unseen(office):
    """An entry whose hold points nobody saw: 4.86 m3 at 763.00, 3708.18, its line held."""
    strip = dig(office.trench)
    return measured(office, strip, "clay", "4.86")


def a_bill(office, number="RB1", kind="running", *, handed_in=True, **changes):
    said = {"billed_on": TODAY, **changes}
    bill = write_bill(
        structure_id=office.structure.pk, given=BillGiven(number, kind, **said), by=office.engineer
    )
    return hand_in_bill(bill_id=bill.pk, by=office.engineer) if handed_in else bill
