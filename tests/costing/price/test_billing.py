"""Lines of a bill: paid, held, refused; the office's rules BL-01 to BL-07 and their words."""

from dataclasses import replace
from datetime import date
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from costing.price.billing import (
    Billed,
    BillLineAsked,
    Measured,
    Release,
    add_up,
    judge_line,
    judge_lines,
)
from structures.life.measuring import HoldSeen
from tests.costing.demo_works import bill, book, contract

DAY = date(2026, 2, 10)
ENTRY = Measured(
    entry_id="M04-clay",
    strip=4,
    item="clay",
    from_m=None,
    to_m=None,
    quantity=Decimal("20.00"),
    unit="m3",
    measured_on=DAY,
    covered_on=DAY,
    measured_by="engineer-2",
    checked_by="engineer-3",
    relies_on=("H5", "H7"),
    holds=(HoldSeen("H5", DAY), HoldSeen("H7.1", DAY), HoldSeen("H7.2", DAY)),
)
LINE = BillLineAsked(6, "M04-clay", Decimal("20.00"), Decimal("763.00"))
BACK = replace(
    ENTRY,
    entry_id="M04-clay-c1",
    quantity=Decimal("-2.50"),
    corrects="M04-clay",
    measured_on=date(2026, 2, 20),
)
BACK_LINE = BillLineAsked(7, "M04-clay-c1", Decimal("-2.50"), Decimal("763.00"))


def judged(line=LINE, entry=ENTRY):
    return judge_line(line, entry, contract())


def rules(line):
    return [one.rule for one in line.findings]


def test_a_line_that_nothing_speaks_against_is_paid():
    """Oracle: 20.00 x 763.00 by hand."""
    line = judged()
    assert (line.status, line.amount, line.findings) == ("paid", Decimal("15260.00"), ())


@pytest.mark.parametrize(
    ("changed", "asked", "rule", "status", "words"),
    [
        (
            {"billed_in": Billed("RB1", 3)},
            {},
            "BL-01",
            "refused",
            "Entry M04-clay was billed in RB1, line 3.",
        ),
        (
            {"checked_by": "engineer-2"},
            {},
            "BL-02",
            "refused",
            "engineer-2 measured and checked entry M04-clay. Another person must check.",
        ),
        (
            {"checked_by": None},
            {},
            "BL-02",
            "refused",
            "Nobody has checked entry M04-clay. Another person must check.",
        ),
        (
            {"measured_on": date(2026, 2, 11)},
            {},
            "BL-03",
            "held",
            "Entry M04-clay: measured 2026-02-11, covered 2026-02-10. Nobody could see it.",
        ),
        (
            {},
            {"rate": Decimal("764.00")},
            "BL-04",
            "refused",
            "Line 6: rate 764.00, contract 763.00.",
        ),
        (
            {},
            {"quantity": Decimal("20.01")},
            "BL-05",
            "refused",
            "Billed 20.01, measured 20.00 m3.",
        ),
        (
            {"holds": (HoldSeen("H5", DAY), HoldSeen("H7.1", DAY), HoldSeen("H7.2", None))},
            {},
            "BL-06",
            "held",
            "Line 6 relies on H7.2 of strip 4, not seen.",
        ),
        (
            {"holds": ()},
            {},
            "BL-06",
            "held",
            "Line 6 relies on H5, H7 of strip 4, not seen.",
        ),
        (
            {},
            {"amount": Decimal("15270.00")},
            "BL-07",
            "refused",
            "20.00 m3 x 763.00 is 15260.00, bill says 15270.00.",
        ),
    ],
)
def test_each_rule_has_its_level_and_its_words(changed, asked, rule, status, words):
    """Oracle: the office's table of rules, BL-01 to BL-07."""
    line = judged(replace(LINE, **asked), replace(ENTRY, **changed))
    assert rules(line) == [rule]
    assert line.status == status
    assert line.why.startswith(words)
    assert line.findings[0].where == "line 6"


def test_a_hold_point_seen_after_covering_was_not_seen():
    late = replace(ENTRY, holds=(HoldSeen("H5", DAY), HoldSeen("H7", date(2026, 2, 11))))
    assert rules(judged(entry=late)) == ["BL-06"]
    assert judged(entry=replace(late, covered_on=None, measured_on=DAY)).status == "paid"


def test_layer_ten_is_no_layer_of_one():
    """H7.1 relied on is not satisfied, nor spoiled, by H7.10."""
    entry = replace(ENTRY, relies_on=("H7.1",), holds=(HoldSeen("H7.10", None),))
    assert entry.unseen == ("H7.1",)
    assert replace(entry, holds=(HoldSeen("H7.1", DAY), HoldSeen("H7.10", None))).unseen == ()


def test_everything_that_was_found_is_told_and_what_blocks_decides():
    entry = replace(ENTRY, measured_on=date(2026, 2, 11), holds=(), checked_by="engineer-2")
    line = judged(replace(LINE, quantity=Decimal(25), rate=Decimal(800)), entry)
    assert rules(line) == ["BL-02", "BL-03", "BL-06", "BL-04", "BL-05"]
    assert line.status == "refused"


@pytest.mark.parametrize("quantity", ["0", "-1", "0.005"])
def test_a_line_asks_for_hundredths_above_zero(quantity):
    assert rules(judged(replace(LINE, quantity=Decimal(quantity)))) == ["BL-05"]


def test_an_entry_nobody_measured_is_refused_by_name():
    line = judge_line(LINE, None, contract())
    assert line.why == ("Entry M04-clay is not in the measurement book. Measure first, then bill.")
    assert line.status == "refused"


def test_an_item_without_a_rate_in_the_contract_is_refused():
    rest = tuple(one for one in contract().rates if one.item != "clay")
    line = judge_line(LINE, ENTRY, replace(contract(), rates=rest))
    assert line.why.startswith("Line 6: rate 763.00, contract has none.")


def test_a_release_by_another_person_pays_a_held_line_and_keeps_what_was_found():
    entry = replace(ENTRY, holds=())
    for by, status in (("district-2", "paid"), ("engineer-2", "held"), ("engineer-3", "held")):
        line = judged(replace(LINE, release=Release(by, DAY, "opened again and seen")), entry)
        assert line.status == status
        assert rules(line)[0] == "BL-06"
    blocked = replace(LINE, rate=Decimal(800), release=Release("district-2", DAY, "fair"))
    assert judged(blocked, entry).status == "refused"


def test_of_two_lines_for_one_entry_the_first_is_paid():
    """Oracle: BL-01; whichever is handed in first, the lower number stands."""
    twice = (replace(LINE, line_no=9), LINE)
    six, nine = judge_lines("RB1", twice, {"M04-clay": ENTRY}, contract())
    assert (six.status, nine.status) == ("paid", "refused")
    assert nine.why.startswith("Entry M04-clay was billed in RB1, line 6.")


def test_a_refused_line_leaves_its_entry_to_a_later_one():
    wrong = replace(LINE, line_no=1, rate=Decimal(900))
    one, six = judge_lines("RB1", (wrong, LINE), {"M04-clay": ENTRY}, contract())
    assert (one.status, six.status) == ("refused", "paid")


def test_a_bill_that_was_decided_can_be_judged_again():
    entry = replace(ENTRY, billed_in=Billed("RB1", 6))
    (line,) = judge_lines("RB1", (LINE,), {"M04-clay": entry}, contract())
    assert line.status == "paid"
    (other,) = judge_lines("RB2", (LINE,), {"M04-clay": entry}, contract())
    assert rules(other) == ["BL-01"]


def test_two_lines_have_two_numbers():
    with pytest.raises(ValueError, match="one number"):
        judge_lines("RB1", (LINE, replace(LINE, entry_id="other")), {}, contract())


def test_what_a_correction_takes_back_is_not_there_to_be_billed():
    """Oracle: 20.00 - 2.50 = 17.50 m3 may be paid, alone or as 20.00 with the correction."""
    entries = {one.entry_id: one for one in (ENTRY, BACK)}
    (alone,) = judge_lines("RB1", (LINE,), entries, contract())
    assert alone.why.startswith("Billed 20.00, measured 17.50 m3.")
    both = judge_lines("RB1", (LINE, BACK_LINE), entries, contract())
    assert [one.status for one in both] == ["paid", "paid"]
    assert sum(one.amount for one in both) == Decimal("17.50") * 763


def test_a_correction_is_taken_whole_and_not_held():
    """It was measured after covering, and that keeps no money that was paid for nothing."""
    entries = {"M04-clay-c1": BACK}
    (whole,) = judge_lines("RB2", (BACK_LINE,), entries, contract())
    assert (whole.status, whole.amount) == ("paid", Decimal("-1907.50"))
    (part,) = judge_lines(
        "RB2", (replace(BACK_LINE, quantity=Decimal("-1.00")),), entries, contract()
    )
    assert rules(part) == ["BL-05"]


@pytest.mark.parametrize(
    "changes",
    [{"unit": "m2"}, {"quantity": Decimal("1.005")}, {"quantity": Decimal(-1)}],
)
def test_an_entry_that_cannot_be_so_is_no_record(changes):
    with pytest.raises(ValueError, match=r"measured in|hundredths|corrects nothing"):
        replace(ENTRY, **changes)


def test_lines_add_up_to_the_bill():
    """Oracle: 15260.00 + 100.00 by hand; the bill's own amounts count where it has some."""
    lines = (LINE, replace(LINE, line_no=7, amount=Decimal("100.00")))
    assert add_up(lines, Decimal("15360.00")) == ()
    (found,) = add_up(lines, Decimal("15360.01"))
    assert (found.rule, found.level) == ("BL-07", "block")
    assert found.what == "Lines add to 15360.00, bill says 15360.01."


def test_the_final_bill_of_the_demo_holds_what_nobody_saw():
    """Oracle: the tables by hand. Strip 7 of TA-05 was covered on 2026-02-14; its key, clay, film
    and centering were measured on 2026-02-16, H3, H4, H6, H7.1 to H7.6 and H8 never seen.
    Held 2308.50 + 13566.14 + 3047.92 + 3204.50 = 22127.06 of 235569.10.
    """
    asked = bill("TA-05", "TA-05-FB")
    entries = book("TA-05", billed_before=("TA-05-RB1", "TA-05-RB2"))
    lines = judge_lines("TA-05-FB", asked.lines, entries, contract())
    held = [line for line in lines if line.status == "held"]
    assert [(one.asked.line_no, rules(one)) for one in held] == [
        (line, ["BL-03", "BL-06"]) for line in (13, 14, 15, 16)
    ]
    assert {one.status for one in lines} == {"paid", "held"}
    assert sum(one.amount for one in held) == Decimal("22127.06")
    assert "measured 2026-02-16, covered 2026-02-14." in held[0].why
    assert "Line 13 relies on H3, H4 of strip 7, not seen." in held[0].why
    layers = ", ".join(f"H7.{n}" for n in range(1, 7))
    assert f"Line 14 relies on {layers} of strip 7, not seen." in held[1].why
    assert "Line 15 relies on H6, H8 of strip 7, not seen." in held[2].why


def test_an_entry_of_the_demo_billed_once_more_is_refused():
    """The demo bills each entry once; its first line handed in again names where it was billed."""
    first = bill("TA-05", "TA-05-RB1").lines[0]
    entries = book("TA-05", billed_before=("TA-05-RB1",))
    (line,) = judge_lines("TA-05-RB3", (first,), entries, contract())
    assert line.why.startswith("Entry TA-05-M01-excavation-0.0 was billed in TA-05-RB1, line 1.")


@pytest.mark.parametrize("bill_id", ["TA-05-RB1", "TA-05-RB2"])
def test_the_running_bills_of_the_demo_are_paid_whole(bill_id):
    lines = judge_lines(bill_id, bill("TA-05", bill_id).lines, book("TA-05"), contract())
    assert {line.status for line in lines} == {"paid"}


hundredths = st.integers(1, 5000).map(lambda cents: Decimal(cents) / 100)


@st.composite
def bills(draw):
    """A book of a few clay entries, some corrected, and lines for them in any number and order."""
    entries = {}
    for n in range(draw(st.integers(1, 4))):
        whole = draw(hundredths)
        entries[f"E{n}"] = replace(
            ENTRY,
            entry_id=f"E{n}",
            quantity=whole,
            checked_by=draw(st.sampled_from(["engineer-3", "engineer-2", None])),
            measured_on=draw(st.sampled_from([DAY, date(2026, 2, 11)])),
            billed_in=draw(st.sampled_from([None, None, None, Billed("OLD", 1)])),
        )
        if draw(st.booleans()):
            back = draw(st.integers(1, int(whole * 100)).map(lambda cents: -Decimal(cents) / 100))
            entries[f"C{n}"] = replace(BACK, entry_id=f"C{n}", corrects=f"E{n}", quantity=back)
    names = draw(st.lists(st.sampled_from([*entries, "unknown"]), min_size=1, max_size=8))
    lines = []
    for number, name in enumerate(names, start=1):
        exact = [entries[name].quantity] if name in entries else []
        quantity = draw(st.one_of(*(st.just(one) for one in exact), hundredths))
        rate = draw(st.sampled_from([Decimal("763.00"), Decimal("763.00"), Decimal("764.00")]))
        lines.append(BillLineAsked(number, name, quantity, rate))
    return entries, draw(st.permutations(lines))


@given(bills())
def test_no_more_is_paid_than_was_measured_and_nothing_twice(drawn):
    entries, lines = drawn
    judged = judge_lines("B", lines, entries, contract())
    paid = [line for line in judged if line.status == "paid"]
    names = [line.asked.entry_id for line in judged if line.status != "refused"]
    assert len(names) == len(set(names))
    assert not any(entries[name].billed_in for name in names)
    for name, entry in entries.items():
        family = {name, *(key for key, one in entries.items() if one.corrects == name)}
        if entry.quantity < 0 or entry.billed_in:
            continue
        net = sum(entries[key].quantity for key in family)
        assert sum(one.asked.quantity for one in paid if one.asked.entry_id in family) <= net


@given(bills())
def test_the_order_of_lines_does_not_matter(drawn):
    entries, lines = drawn
    judged = judge_lines("B", lines, entries, contract())
    assert judged == judge_lines(
        "B", sorted(lines, key=lambda one: one.line_no), entries, contract()
    )
    assert [one.asked.line_no for one in judged] == sorted(one.line_no for one in lines)
