"""Bills: from accepted entries, decided line by line, held lines released, everything paid once."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest

from costing.actions.bill_decisions import decide_bill, decide_held_line, mark_paid
from costing.actions.bills import BillGiven, drop_draft, hand_in_bill, send_bill_back, write_bill
from costing.models import Bill, BillLine, LineDecision
from costing.price.billing import BillLineAsked
from costing.queries.bills import Said, draft_of, visible_bills
from costing.queries.standing import standing_of
from structures.actions.measurements import check_measurement, correct_measurement
from structures.errors import Refused
from structures.models import Entry
from tests.costing.works_office import (
    SIGNED_IN,
    a_bill,
    a_works_office,
    clay_unseen,
    measured,
    pipes_and_markers,
)
from tests.trench import DAY, TODAY

pytestmark = pytest.mark.django_db


@pytest.fixture
def office():
    return a_works_office()


def decide(office, bill, said=None, **more):
    by = more.pop("by", office.officer)
    return decide_bill(
        bill_id=bill.pk, said=said or {}, by=by, **{"signed_in_at": SIGNED_IN, **more}
    )


def release(office, line, state="paid", **more):
    said = {"by": office.officer, "signed_in_at": SIGNED_IN, "why": "Seen by two others.", **more}
    return decide_held_line(line_id=line.pk, state=state, **said)


def pay(office, bill, **more):
    said = {"paid_on": TODAY, "reference": "T-41", "by": office.officer, "signed_in_at": SIGNED_IN}
    return mark_paid(bill_id=bill.pk, **{**said, **more})


def states(bill):
    return list(bill.lines.order_by("order").values_list("state", flat=True))


def test_a_bill_takes_what_was_accepted_and_not_billed(office):
    """Oracle: 2 x 3900.00 + 7 x 650.00 = 12350.00."""
    pipes_and_markers(office)
    measured(office, None, "dewatering", "12.00", checked=False)
    bill = a_bill(office)
    assert bill.claimed == Decimal("12350.00")
    assert {one.entry.item for one in bill.lines.all()} == {"observation_pipe", "marker"}
    decided = decide(office, bill)
    assert (decided.state, decided.payable, states(bill)) == (
        "decided",
        Decimal("12350.00"),
        ["paid"] * 2,
    )
    assert [step["words"] for step in decided.account["steps"]] == ["Lines paid"]
    assert decided.entry.content["payable"] == "12350.00"
    with pytest.raises(Refused, match="Nothing is accepted that was not billed"):
        a_bill(office, "RB2")
    paid = pay(office, bill)
    assert paid.paid_on == TODAY
    with pytest.raises(Refused, match="paid on 2026-04-10"):
        pay(office, bill)
    acts = list(Entry.objects.filter(act__startswith="bill").values_list("act", flat=True))
    assert acts == ["bill handed in", "bill decided", "bill paid out"]


def test_a_hold_sits_on_its_line_and_the_rest_is_paid(office):
    """Oracle: BL-06; 4.86 x 763.00 = 3708.18 stays apart from 12350.00."""
    clay_unseen(office)
    pipes_and_markers(office)
    bill = decide(office, a_bill(office))
    held = bill.lines.get(state="held")
    assert held.amount == Decimal("3708.18")
    assert "relies on H5, H7 of strip 1, not seen" in held.why
    assert (bill.claimed, bill.payable) == (Decimal("16058.18"), Decimal("12350.00"))
    steps = [(one["code"], one["amount"], one["apart"]) for one in bill.account["steps"]]
    assert steps == [("gross", "12350.00", False), ("held", "3708.18", True)]
    assert standing_of(office.structure).facts["unpaid_lines"]


def test_a_released_line_is_paid_with_a_later_bill_once(office):
    """Oracle: 3708.18 alone is payable by the second bill, which has no line of its own."""
    clay_unseen(office)
    pipes_and_markers(office)
    first = decide(office, a_bill(office))
    held = first.lines.get(state="held")
    with pytest.raises(Refused, match="reason is missing"):
        release(office, held, why=" ")
    release(office, held)
    with pytest.raises(Refused, match="It is released, not held"):
        release(office, held)
    second = decide(office, a_bill(office, "RB2"))
    assert (second.claimed, second.payable) == (Decimal("0.00"), Decimal("3708.18"))
    held.refresh_from_db()
    assert held.state == "paid"
    assert [one.paid_with for one in held.decisions.order_by("pk")] == [None, second]
    with pytest.raises(Refused, match="Nothing is accepted"):
        a_bill(office, "RB3")
    with pytest.raises(Refused, match="It is paid, not held"):
        release(office, held)


def test_a_held_line_that_is_refused_frees_its_entry(office):
    clay_unseen(office)
    pipes_and_markers(office)
    first = decide(office, a_bill(office))
    release(office, first.lines.get(state="held"), "refused", why="Rock was never seen.")
    again = a_bill(office, "RB2")
    assert [line.entry.item for line in again.lines.all()] == ["clay"]


def test_the_office_pays_a_held_line_only_with_a_reason_and_not_its_own_work(office):
    clay_unseen(office)
    bill = a_bill(office)
    with pytest.raises(Refused, match="Leave it held, or write the reason"):
        decide(office, bill, {1: Said("paid")})
    decided = decide(office, bill, {1: Said("paid", "Both engineers stood at the edge.")})
    assert decided.payable == Decimal("3708.18")
    line = bill.lines.get()
    assert (line.state, line.why) == ("paid", "Both engineers stood at the edge.")
    assert [one["rule"] for one in line.findings] == ["BL-06"]


def test_the_office_keeps_a_line_back_with_a_reason(office):
    pipes_and_markers(office)
    bill = a_bill(office)
    with pytest.raises(Refused, match="kept back without a reason"):
        decide(office, bill, {1: Said("held")})
    markers = bill.lines.get(entry__item="marker").order
    decided = decide(office, bill, {markers: Said("refused", "Two stones are broken.")})
    assert decided.payable == Decimal("7800.00")
    line = bill.lines.get(order=markers)
    assert (line.state, line.why) == ("refused", "Two stones are broken.")


def test_nobody_decides_what_is_their_own_or_by_a_token(office):
    pipes_and_markers(office)
    bill = a_bill(office)
    with pytest.raises(Refused, match="A device's token decides nothing"):
        decide(office, bill, signed_in_at=None)
    with pytest.raises(Refused, match="You may not decide a bill"):
        decide(office, bill, by=office.engineer)
    assert bill.lines.filter(state="open").count() == 2


@pytest.mark.parametrize(
    ("terms", "payable", "steps"),
    [
        # 5 % of 12350.00 is 617.50.
        ({"retention_percent": Decimal(5)}, "11732.50", {"retention": "-617.50"}),
        # 10 % of the gross is 1235.00, but only 1000.00 was advanced.
        (
            {"advance": Decimal("1000.00"), "advance_recovery_percent": Decimal(10)},
            "11350.00",
            {"advance": "-1000.00"},
        ),
        # Income tax 2 % of 12350.00 is 247.00; cess fixed at 50.00.
        (
            {
                "deductions": (
                    {"what": "income tax", "percent": "2"},
                    {"what": "cess", "amount": "50.00"},
                )
            },
            "12053.00",
            {"deduction": "-50.00"},
        ),
    ],
)
def test_only_what_the_contract_states_is_taken_off(terms, payable, steps):
    office = a_works_office(**terms)
    pipes_and_markers(office)
    bill = decide(office, a_bill(office))
    assert bill.payable == Decimal(payable)
    told = {one["code"]: one["amount"] for one in bill.account["steps"]}
    assert told.items() >= steps.items()
    counted = (Decimal(s["amount"]) for s in bill.account["steps"] if not s["apart"])
    assert sum(counted) == bill.payable


def test_without_todays_index_nothing_is_payable():
    """Oracle: handbook 8.e, factor 1.06095032: 12350.00 x 1.06095032 = 13102.74, 752.74 more."""
    parts = [
        {"what": "labour", "share": "0.45", "base": "280"},
        {"what": "material", "share": "0.25", "base": "151"},
        {"what": "fuel", "share": "0.15", "base": "88.0"},
    ]
    office = a_works_office(price_index={"fixed": "0.15", "parts": parts})
    pipes_and_markers(office)
    bill = a_bill(office)
    with pytest.raises(Refused, match="the index of labour, material, fuel"):
        decide(office, bill)
    now = {"labour": Decimal(312), "material": Decimal(148), "fuel": Decimal("96.5")}
    decided = decide(office, bill, indices=now)
    assert decided.payable == Decimal("13102.74")
    assert decided.account["indices"]["fuel"] == "96.5"


def test_a_final_bill_closes_the_account_and_says_what_is_unsettled():
    """Oracle: 5 % of 12350.00 is kept; 4.86 x 763.00 is held."""
    office = a_works_office(retention_percent=Decimal(5))
    pipes_and_markers(office)
    waiting = clay_unseen(office)
    pipes = a_bill(office, kind="final")
    decided = decide(office, pipes)
    held = decided.lines.get(state="held")
    assert held.entry == waiting
    assert decided.account["unsettled"] == [
        "Held and not decided: 1 line, 3708.18.",
        "Retention to release: 617.50.",
    ]
    measured(office, None, "dewatering", "3.00")
    with pytest.raises(Refused, match="closed by final bill RB1"):
        a_bill(office, "RB2")
    release(office, held)
    after = a_bill(office, "RB2", lines=())
    assert decide(office, after).payable == Decimal("3522.77")  # 3708.18 less 5 %, 185.41


def test_a_correction_takes_back_what_was_paid_too_much(office):
    """Oracle: 7 markers paid, 2 of them taken back with 4 m3 at 2850.00: 11400.00 - 1300.00."""
    _, markers = pipes_and_markers(office)
    decide(office, a_bill(office))
    back = correct_measurement(
        entry_id=markers.pk,
        difference=Decimal("-2.00"),
        why="Two stones were counted twice.",
        measured_on=DAY,
        by=office.engineer,
    )
    check_measurement(entry_id=back.pk, by=office.other)
    alone = a_bill(office, "RB2")
    with pytest.raises(Refused, match=r"1300\.00 INR would be owed back"):
        decide(office, alone)
    send_bill_back(bill_id=alone.pk, why="Bill it with the next work.", by=office.officer)
    drop_draft(bill_id=alone.pk, by=office.engineer)
    measured(office, None, "dewatering", "1.00")
    draft = draft_of(office.structure)
    assert [one.asked.entry_id for one in draft.left_out] == ["OD-01-wall-dewatering"]
    assert "contract has none" in draft.left_out[0].why


def lines(*given):
    return tuple(
        BillLineAsked(number, entry, Decimal(quantity), Decimal(rate))
        for number, entry, quantity, rate in given
    )


@pytest.mark.parametrize(
    ("given", "rule"),
    [
        ((1, "OD-01-wall-marker", "7.00", "650.00"), "BL-01"),
        ((1, "OD-01-wall-observation_pipe", "2.00", "3901.00"), "BL-04"),
        ((1, "OD-01-wall-observation_pipe", "2.01", "3900.00"), "BL-05"),
        ((1, "OD-01-wall-dewatering", "1.00", "36.00"), "BL-02"),
        ((1, "OD-01-wall-gold", "1.00", "36.00"), "BL-05"),
    ],
)
def test_a_contractors_bill_is_refused_whole_where_a_line_is_blocked(office, given, rule):
    """Oracle: the office's rules BL-01 to BL-05."""
    measured(office, None, "marker", "7.00")
    decide(office, a_bill(office))
    measured(office, None, "observation_pipe", "2.00")
    measured(office, None, "dewatering", "1.00", checked=False)
    before = BillLine.objects.count()
    with pytest.raises(Refused) as refused:
        a_bill(office, "RB2", lines=lines(given))
    assert rule in {one.rule for one in refused.value.findings}
    assert BillLine.objects.count() == before


def test_a_bill_that_does_not_add_up_is_refused(office):
    """Oracle: BL-07; 2 x 3900.00 is 7800.00."""
    measured(office, None, "observation_pipe", "2.00")
    given = lines((4, "OD-01-wall-observation_pipe", "2.00", "3900.00"))
    with pytest.raises(Refused, match=r"Lines add to 7800\.00, bill says 7900\.00"):
        a_bill(office, lines=given, total=Decimal("7900.00"))
    bill = a_bill(office, lines=given, total=Decimal("7800.00"))
    assert bill.lines.get().order == 1


def test_one_bill_at_a_time_and_each_number_once(office):
    pipes_and_markers(office)
    draft = a_bill(office, handed_in=False)
    with pytest.raises(Refused, match="Bill RB1 is being written"):
        a_bill(office, "RB2")
    assert drop_draft(bill_id=draft.pk, by=office.engineer) == "RB1"
    decide(office, a_bill(office))
    measured(office, None, "dewatering", "1.00")
    with pytest.raises(Refused, match="Bill RB1 was written before"):
        a_bill(office, "RB1")
    with pytest.raises(Refused, match="Bill RB1 is decided"):
        hand_in_bill(bill_id=Bill.objects.get().pk, by=office.engineer)


def test_without_a_contract_nothing_is_billed():
    from tests.trench import a_trench  # noqa: PLC0415 -- the one test that wants no contract

    trench = a_trench()
    given = BillGiven("RB1", "running", TODAY)
    with pytest.raises(Refused, match="has no contract"):
        write_bill(structure_id=trench.structure.pk, given=given, by=trench.engineer)


@pytest.mark.parametrize("day", [date(2026, 4, 9), date(2026, 4, 11)])
def test_it_is_paid_between_its_day_and_today(office, day):
    pipes_and_markers(office)
    bill = decide(office, a_bill(office))
    with pytest.raises(Refused, match="cannot have been paid"):
        pay(office, bill, paid_on=day)


def test_field_staff_see_no_bill(office):
    pipes_and_markers(office)
    a_bill(office)
    assert visible_bills(office.officer).count() == 1
    assert visible_bills(office.trench.field).count() == 0
    assert not LineDecision.objects.exists()
