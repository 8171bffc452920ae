"""The demo's history, taken over as it stands, with the findings of today's rules beside it."""

from __future__ import annotations

import csv
from datetime import UTC, date, datetime
from decimal import Decimal
from pathlib import Path
from uuid import UUID

import pytest

from costing.actions import demo
from costing.actions.bill_decisions import decide_bill
from costing.models import Bill, BillLine, Sanction
from costing.queries.bills import Said
from structures.access import Act, watersheds
from structures.life.chain import content_digest
from structures.models import (
    Complaint,
    District,
    Entry,
    FirstRun,
    FoundLevel,
    Gauge,
    HoldPoint,
    MeasurementEntry,
    MeasuringPoint,
    Move,
    Paper,
    RainDay,
    RainMonth,
    Reading,
    Strip,
    Structure,
    TrenchLook,
    User,
    Verdict,
    Well,
)
from structures.queries.register import check_registers, visible_entries

pytestmark = pytest.mark.django_db
FOLDER = Path("fixtures/demo")


def rows(name):
    with (FOLDER / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


@pytest.fixture(scope="module")
def loaded(django_db_setup, django_db_blocker):
    """The demo, loaded once for all looks at it; taken away again behind them."""
    from django.db import transaction  # noqa: PLC0415 -- needs the database of the tests

    with django_db_blocker.unblock():
        outer = transaction.atomic()
        outer.__enter__()
        try:
            yield demo.load_demo(folder=FOLDER, password="quenharra-sand-and-clay")
        finally:
            transaction.set_rollback(True)
            outer.__exit__(None, None, None)


def test_every_row_is_kept(loaded):
    """Oracle: the tables themselves, counted by the csv module."""
    h2 = [row for row in rows("hold_points") if row["hold"] == "H2" and row["reading_m"]]
    counts = {
        Move: len(rows("moves")),
        Strip: len(rows("strips")),
        HoldPoint: len(rows("hold_points")),
        FoundLevel: sum(len(row["reading_m"].split(";")) for row in h2),
        TrenchLook: len(rows("trench_looks")),
        MeasurementEntry: len(rows("measurements")),
        Well: len(rows("wells")),
        MeasuringPoint: len(rows("measuring_points")),
        Reading: len(rows("levels")),
        Gauge: len({row["gauge_id"] for row in (*rows("rain"), *rows("rain_monthly"))}),
        RainDay: len(rows("rain")),
        RainMonth: len(rows("rain_monthly")),
        FirstRun: len(rows("season_starts")),
        Complaint: len(rows("complaints")),
        Verdict: len(rows("verdicts")),
        Sanction: len(rows("sanctions")),
        Bill: len({row["bill_id"] for row in rows("bills")}),
        BillLine: len(rows("bills")),
        # An underflow sheet a row, a walk-over for each site that was walked and answers who is below.
        Paper: len(rows("underflow")) + sum(bool(row["downstream_users"]) for row in rows("sites")),
    }
    assert {model: model.objects.count() for model in counts} == counts


def test_a_structure_stands_where_its_last_move_led(loaded):
    """Oracle: structures.csv; moves.csv counts the same way."""
    for row in rows("structures"):
        structure = Structure.objects.get(site__code=row["structure_id"])
        last = structure.moves.order_by("-number").first()
        assert structure.stage == last.to_stage == row["state"]
        assert (structure.since, last.reason) == (
            date.fromisoformat(row["state_since"]),
            row["cause"],
        )
        assert last.entry is None


def test_only_strip_7_of_ta_05_was_covered_unseen(loaded):
    """Oracle: hold_points.csv by hand: H3, H4, H6 and H8 of that strip have no day of seeing."""
    (strip,) = Strip.objects.filter(covered_unseen=True)
    assert (strip.structure.site.code, strip.number) == ("TA-05", 7)
    assert [part.split()[0] for part in strip.unseen_what.split(", ")] == [
        *("H3", "H4", "H6", "lower", "H8", "upper")
    ]


def test_rock_found_below_the_drawn_range_halts_its_strip(loaded):
    """Oracle: OD-03 strip 6 by hand: 405.29 m found, drawn 408.60 m to 409.21 m at 44.68 m."""
    (strip,) = Strip.objects.filter(halted=True)
    assert (strip.structure.site.code, strip.number) == ("OD-03", 6)
    hold = strip.holds.get(hold="H2")
    assert hold.result == "no"
    assert hold.readings == {
        "rock_start_m": 409.08,
        "rock_middle_m": 409.01,
        "rock_end_m": 405.29,
    }
    assert [one["rule"] for one in hold.findings] == ["HP-05"]
    assert hold.findings[0]["what"].startswith("Rock at 405.29 m, drawn 408.61\N{EN DASH}409.21.")
    found = strip.found.order_by("offset_m").values_list("offset_m", "level_m", "by__username")
    assert list(found) == [
        (38.68, 409.08, "field-1"),
        (41.68, 409.01, "field-1"),
        (44.68, 405.29, "field-1"),
    ]
    others = HoldPoint.objects.filter(hold="H2").exclude(pk=hold.pk)
    assert not any(one["rule"] == "HP-05" for other in others for one in other.findings)


def test_the_rules_of_order_speak_beside_a_hold_point(loaded):
    """Oracle: rule HP-01 by hand: H5 and H9 of strip 7 were seen, H3 never was."""
    strip = Strip.objects.get(structure__site__code="TA-05", number=7)
    said = {
        hold.hold: [one["what"] for one in hold.findings]
        for hold in strip.holds.all()
        if hold.findings
    }
    assert said == {
        "H5": ["H5 of strip 7 cannot be seen before H3."],
        "H9": ["H9 of strip 7 cannot be seen before H3."],
    }


def test_a_look_keeps_what_was_ticked(loaded):
    """Oracle: trench_looks.csv; rule TR-01: what the sheet of then did not ask is blank today."""
    told = [row["result"] for row in rows("trench_looks")]
    stops = TrenchLook.objects.filter(result="stop")
    assert stops.count() == told.count("stop: nobody goes in") == 22
    assert TrenchLook.objects.filter(result="no stop found").count() == len(told) - 22
    look = TrenchLook.objects.get(structure__site__code="OD-01", day=date(2023, 3, 14))
    assert (look.spoil_back_m, look.ladder_within_m, look.depth_m) == (3.69, 5.6, None)
    assert [one["field"] for one in look.findings] == ["depth_m", "slope_as_cut", "crack"]


def test_a_reading_stands_at_the_level_of_the_mark_of_its_day(loaded):
    """Oracle: measuring_points.csv and levels.csv: level of the mark less the depth, by hand."""
    marks = rows("measuring_points")
    for row in rows("levels"):
        day = row["read_at"][:10]
        (valid,) = [
            mark
            for mark in marks
            if mark["well_id"] == row["well_id"]
            and mark["valid_from"] <= day <= (mark["valid_to"] or "9999")
        ]
        reading = Reading.objects.get(pk=UUID(row["reading_id"]))
        level = Decimal(valid["level_m"]) - Decimal(row["depth_below_mark_m"])
        assert reading.level_m == float(level)
        assert (reading.depth_m, reading.dry) == (
            float(row["depth_below_mark_m"]),
            row["dry"] == "yes",
        )
        assert reading.read_at == datetime.fromisoformat(row["read_at"])
        assert (reading.mark.mark, reading.by.username) == (row["mark_id"], row["read_by"])
    first = Reading.objects.get(pk="f50f3e6d-7fff-4eef-a17f-06cb85f0b1fc")
    assert first.level_m == 434.19  # 442.50 m of the mark less 8.31 m
    assert first.read_at == datetime(2022, 6, 3, 0, 55, tzinfo=UTC)


def test_a_reading_that_names_an_old_mark_is_not_moved_to_it(loaded):
    """Oracle: BI-W05 by hand: the parapet was raised by 0.60 m on 18 October 2025."""
    old = Reading.objects.filter(
        well__code="BI-W05", mark__mark="M1", read_at__gte=datetime(2025, 10, 18, tzinfo=UTC)
    )
    assert old.exists()
    for reading in old:
        assert reading.level_m == pytest.approx(400.05 - reading.depth_m, abs=1e-9)


def test_a_day_without_a_reading_is_no_dry_day(loaded):
    """Oracle: rain.csv: its blank cells, remarked "not read"."""
    blank = [row for row in rows("rain") if row["rain_mm"] == ""]
    kept = RainDay.objects.filter(rain_mm=None)
    assert kept.count() == len(blank) == 19
    assert all(one.rules == ["RN-01"] for one in kept)
    assert RainMonth.objects.get(month=date(2002, 6, 1)).rain_mm == 74.3


def test_an_underflow_sheet_says_what_nobody_wrote_down(loaded):
    """Oracle: underflow.csv of OD-01, and the fields of today's form that it has no column for."""
    paper = Paper.objects.get(kind="underflow", structure__site__code="OD-01")
    content = paper.content
    assert (content["k_likely_m_per_day"], content["k_source"]) == (18.0, "pumping test")
    assert (content["wetted_area_m2"], content["gradient"]) == (89.2, 0.0042)
    assert {one["field"] for one in paper.findings} == {"area_source", "gradient_source", "shares"}
    assert paper.by.username == "engineer-1"  # who moved it to flow-judged


def test_a_walk_over_holds_what_the_list_of_sites_answers(loaded):
    """Oracle: sites.csv by hand."""
    papers = {
        one.structure.site.code: one.content for one in Paper.objects.filter(kind="walk-over")
    }
    assert "OD-04" not in papers  # who uses water below it is not answered
    assert papers["BI-04"]["none_found_within_km"] == 1.5
    (user,) = papers["OD-03"]["downstream"]
    assert (user["settlement"], user["use"]) == ("Pirrumad east", "1 dug well, cattle")
    assert (papers["OD-03"]["bed_width_m"], papers["OD-03"]["walked_on"]) == (60.0, "2025-09-10")


def test_bills_stand_as_they_were_with_their_findings(loaded):
    """Oracle: bills.csv added up by hand, rules BL-03 and BL-06 on what nobody saw."""
    for bill in Bill.objects.all():
        told = [row for row in rows("bills") if row["bill_id"] == bill.number]
        assert bill.claimed == sum(Decimal(row["amount"]) for row in told)
        assert bill.contract is None
    paid = Bill.objects.get(number="TA-05-RB1")
    assert (paid.state, paid.payable) == (Bill.State.DECIDED, paid.claimed)
    assert paid.account["why"].startswith("Taken over:")
    assert set(paid.lines.values_list("state", flat=True)) == {"paid"}
    final = Bill.objects.get(number="TA-05-FB")
    assert (final.state, final.payable, final.account) == (Bill.State.HANDED_IN, None, None)
    held = {
        line.entry.code: [one["rule"] for one in line.findings]
        for line in BillLine.objects.select_related("entry")
        if line.findings
    }
    assert held == {
        f"TA-05-M07-{item}": ["BL-03", "BL-06"]
        for item in ("rock_key", "clay", "film", "centering")
    }


def test_a_bill_of_before_is_decided_without_a_contract(loaded):
    """Oracle: bills.csv by hand: all lines of TA-05-FB but the four that nobody could see."""
    final = Bill.objects.get(number="TA-05-FB")
    officer = User.objects.get(username="district-1")
    held = {
        line.order: Said("held", "covered before anybody saw it")
        for line in final.lines.all()
        if line.findings
    }
    decided = decide_bill(bill_id=final.pk, said=held, by=officer, signed_in_at=datetime.now(UTC))
    paid = [
        Decimal(row["amount"])
        for row in rows("bills")
        if row["bill_id"] == "TA-05-FB" and int(row["line_no"]) not in held
    ]
    assert (len(held), decided.payable) == (4, sum(paid))
    assert {step["code"] for step in decided.account["steps"]} == {"gross", "held"}


def test_sanctions_are_exact_and_without_an_entry(loaded):
    """Oracle: sanctions.csv."""
    for row in rows("sanctions"):
        one = Sanction.objects.get(structure__site__code=row["site_id"], kind=row["kind"])
        assert (one.amount, one.number, one.by.username) == (
            Decimal(row["amount"]),
            row["number"],
            row["given_by"],
        )
        assert (one.revision, one.entry, one.estimate) == (0, None, None)


def test_each_structure_is_entered_once_with_the_digest_of_its_rows(loaded):
    """Oracle: the rows of OD-05 gathered by the csv module and digested by the chain's own rule."""
    entries = Entry.objects.filter(act="taken over")
    assert sorted(entries.values_list("structure__site__code", flat=True)) == sorted(
        row["site_id"] for row in rows("sites")
    )
    tables = {}
    wells = {row["well_id"] for row in rows("wells") if row["site_id"] == "OD-05"}
    for name in (
        *("sites", "structures", "moves", "underflow", "drawings", "strips", "hold_points"),
        *("trench_looks", "measurements", "wells", "measuring_points", "levels", "complaints"),
        *("verdicts", "sanctions", "bills"),
    ):
        own = [
            row
            for row in rows(name)
            if "OD-05" in (row.get("structure_id"), row.get("site_id"))
            or ("site_id" not in row and row.get("well_id") in wells)
        ]
        if own:
            tables[name] = own
    (entry,) = entries.filter(structure__site__code="OD-05")
    assert entry.content == {
        "rows": {name: len(own) for name, own in tables.items()},
        "digest": content_digest(tables),
    }
    assert all(one.whole for one in check_registers())


def test_nothing_of_it_is_seen_from_the_other_district(loaded):
    for role in ("field", "engineer", "district", "programme", "auditor"):
        other = User.objects.get(username=f"av-{role}")
        assert not watersheds(other, Act.SEE).exists()
        assert not visible_entries(other).exclude(structure=None).exists()
    assert not District.objects.get(code="AV").gauges.exists()
