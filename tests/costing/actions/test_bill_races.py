"""Many people at the same moment on one bill: PostgreSQL with real transactions in threads."""

from __future__ import annotations

from decimal import Decimal

import pytest

from costing.actions.bill_decisions import decide_bill, decide_held_line, mark_paid
from costing.actions.bills import BillGiven, hand_in_bill, write_bill
from costing.models import Bill, BillLine, LineDecision
from structures.actions.measurements import Work, enter_measurement
from structures.errors import Refused
from structures.models import MeasurementEntry
from structures.queries.register import check_registers
from tests.at_once import at_once
from tests.costing.works_office import (
    SIGNED_IN,
    a_bill,
    a_works_office,
    clay_unseen,
    pipes_and_markers,
)
from tests.trench import DAY, TODAY

pytestmark = [pytest.mark.postgres, pytest.mark.django_db(transaction=True)]
HANDS = 8


@pytest.fixture
def office():
    return a_works_office()


def done(answers):
    return [one for one in answers if not isinstance(one, Refused)]


def test_eight_hands_write_a_bill_of_the_same_entries_and_one_bill_stands(office):
    entries = pipes_and_markers(office)

    def write(number):
        given = BillGiven(f"RB{number}", "running", TODAY)
        return lambda: write_bill(structure_id=office.structure.pk, given=given, by=office.engineer)

    assert len(done(at_once(*map(write, range(HANDS))))) == 1
    assert BillLine.objects.count() == len(entries)


def test_eight_hands_hand_in_decide_and_pay_and_it_is_paid_once(office):
    """Oracle: 2 x 3900.00 + 7 x 650.00 = 12350.00, once."""
    pipes_and_markers(office)
    bill = a_bill(office, handed_in=False)
    decided = {"by": office.officer, "signed_in_at": SIGNED_IN}
    acts = (
        lambda: hand_in_bill(bill_id=bill.pk, by=office.engineer),
        lambda: decide_bill(bill_id=bill.pk, said={}, **decided),
        lambda: mark_paid(bill_id=bill.pk, paid_on=TODAY, reference="T-1", **decided),
    )
    for act in acts:
        assert len(done(at_once(*[act] * HANDS))) == 1
    bill.refresh_from_db()
    assert (bill.payable, bill.paid_on) == (Decimal("12350.00"), TODAY)
    assert Bill.objects.count() == 1
    assert all(one.whole for one in check_registers())


def test_a_released_line_is_paid_once_by_whoever_presses_first(office):
    """Oracle: 4.86 x 763.00 = 3708.18, once."""
    clay_unseen(office)
    first = a_bill(office)
    given = {"by": office.officer, "signed_in_at": SIGNED_IN}
    decide_bill(bill_id=first.pk, said={}, **given)
    line = first.lines.get()
    free = lambda: decide_held_line(line_id=line.pk, state="paid", why="Seen.", **given)  # noqa: E731 -- one act for every hand
    assert len(done(at_once(*[free] * HANDS))) == 1
    second = a_bill(office, "RB2")
    decide = lambda: decide_bill(bill_id=second.pk, said={}, **given)  # noqa: E731 -- as above
    assert len(done(at_once(*[decide] * HANDS))) == 1
    assert LineDecision.objects.filter(line=line, paid_with=second).count() == 1
    paid = Bill.objects.values_list("payable", flat=True)
    assert sum(paid) == Decimal("3708.18")


def test_one_piece_of_work_is_entered_once_by_eight_hands(office):
    work = Work(None, "marker", Decimal("7.00"), DAY, working="counted")
    where = office.structure.pk
    enter = lambda: enter_measurement(structure_id=where, work=work, by=office.engineer)  # noqa: E731 -- as above
    assert len(done(at_once(*[enter] * HANDS))) == 1
    assert MeasurementEntry.objects.count() == 1
