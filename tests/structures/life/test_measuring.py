"""Measured work. Oracle: rules BL-02, BL-03, BL-06 and the demo's measurement book."""

from __future__ import annotations

import csv
from collections import defaultdict
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.measuring import (
    RELIES_ON,
    HoldSeen,
    MeasuredWork,
    judge_measurement,
    measured_late,
    unseen,
)

COVERED = date(2026, 2, 14)
SEEN = tuple(HoldSeen(hold, date(2026, 2, 12)) for hold in ("H2", "H3", "H4", "H7.1", "H7.2"))
GOOD = MeasuredWork(
    entry="M07",
    measured_by="engineer-2",
    measured_on=COVERED,
    strip=7,
    covered_on=COVERED,
    checked_by="engineer-3",
    relies_on=("H3", "H7"),
    holds=SEEN,
)


def test_what_was_seen_measured_in_time_and_checked_stands():
    assert judge_measurement(GOOD) == ()
    assert judge_measurement(replace(GOOD, checked_by="")) == ()  # nobody has checked it yet
    assert judge_measurement(replace(GOOD, covered_on=None, measured_on=date(2027, 1, 1))) == ()


@pytest.mark.parametrize(
    ("changes", "rule", "level", "words"),
    [
        (
            {"checked_by": "engineer-2"},
            "BL-02",
            "block",
            "engineer-2 measured and checked entry M07.",
        ),
        (
            {"measured_on": date(2026, 2, 16)},
            "BL-03",
            "hold",
            "Entry M07: measured 2026-02-16, covered 2026-02-14. Nobody could see it.",
        ),
        (
            {"relies_on": ("H4", "H6")},
            "BL-06",
            "hold",
            "Entry M07 relies on H6 of strip 7, not seen.",
        ),
        (
            {"strip": None, "relies_on": ("H9",)},
            "BL-06",
            "hold",
            "Entry M07 relies on H9, not seen.",
        ),
    ],
)
def test_each_rule_in_its_words(changes, rule, level, words):
    (found,) = judge_measurement(replace(GOOD, **changes))
    assert (found.rule, found.level, found.what) == (rule, level, words)
    assert found.remedy


def test_h7_stands_for_all_its_layers_and_h1_for_no_other():
    third = (*SEEN, HoldSeen("H7.3", None))
    assert unseen(("H7",), third, COVERED) == ("H7.3",)
    assert unseen(("H7",), (), COVERED) == ("H7",)
    assert unseen(("H1",), (HoldSeen("H10", COVERED),), COVERED) == ("H1",)


def test_seen_after_it_was_covered_is_not_seen():
    late = (HoldSeen("H3", date(2026, 2, 15)),)
    assert unseen(("H3",), late, COVERED) == ("H3",)
    assert unseen(("H3",), late, None) == ()


def test_covered_on_the_day_it_was_measured_could_be_seen():
    assert not measured_late(COVERED, COVERED)
    assert measured_late(date(2026, 2, 15), COVERED)
    assert not measured_late(date(2026, 2, 15), None)


def demo():
    with Path("fixtures/demo/measurements.csv").open() as file:
        return list(csv.DictReader(file))


def test_items_rest_on_the_hold_points_of_the_demos_book():
    """Oracle: column relies_on of the demo's measurement book."""
    for row in demo():
        expected = tuple(row["relies_on"].split(";")) if row["relies_on"] else ()
        assert RELIES_ON.get(row["item"], ()) == expected


def test_the_doubtful_entries_of_the_demo_are_those_of_the_strip_covered_unseen():
    """Oracle: read off measurements.csv and hold_points.csv: strip 7 of TA-05, covered 14 February,
    measured 16 February for four items, of which H3, H4, H6, H7 and H8 were never seen.
    """
    holds = defaultdict(list)
    with Path("fixtures/demo/hold_points.csv").open() as file:
        for row in csv.DictReader(file):
            on = row["seen_at"][:10] if row["result"] == "go" else ""
            seen = HoldSeen(row["hold"], date.fromisoformat(on) if on else None)
            holds[row["structure_id"], row["strip_no"]].append(seen)
    found = {}
    for row in demo():
        work = MeasuredWork(
            entry=row["entry_id"],
            measured_by=row["measured_by"],
            measured_on=date.fromisoformat(row["measured_on"]),
            strip=int(row["strip_no"]),
            covered_on=date.fromisoformat(row["covered_on"]) if row["covered_on"] else None,
            checked_by=row["checked_by"],
            relies_on=tuple(row["relies_on"].split(";")) if row["relies_on"] else (),
            holds=tuple(holds[row["structure_id"], row["strip_no"]]),
        )
        rules = [one.rule for one in judge_measurement(work)]
        if rules:
            found[row["entry_id"]] = rules
    assert found == {
        f"TA-05-M07-{item}": ["BL-03", "BL-06"]
        for item in ("rock_key", "clay", "film", "centering")
    }


DAYS = st.dates(date(2026, 1, 1), date(2026, 3, 1))
HOLDS = st.lists(
    st.builds(HoldSeen, st.sampled_from(["H2", "H3", "H7.1", "H7.2"]), st.none() | DAYS),
    max_size=4,
    unique_by=lambda one: one.hold,
)


@given(HOLDS, st.none() | DAYS)
def test_covering_earlier_never_makes_more_seen(holds, covered_on):
    """Law: what was not seen before a day was not seen before an earlier one either."""
    relied = ("H2", "H3", "H7")
    if covered_on is not None:
        earlier = date.fromordinal(covered_on.toordinal() - 5)
        assert set(unseen(relied, holds, covered_on)) <= set(unseen(relied, holds, earlier))
    assert set(unseen(relied, holds, None)) <= set(unseen(relied, holds, covered_on))
