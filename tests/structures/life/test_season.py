"""The dry-season clock. Oracle: sums by hand, the office's practice, section 5, and the demo."""

from __future__ import annotations

import csv
from collections import defaultdict
from dataclasses import replace
from datetime import date, timedelta
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.first_flow import EarlyFlow, early_first_flow, years_known
from structures.life.progress import (
    Progress,
    StripWork,
    days_needed,
    days_of_work,
    reserve_days,
)
from structures.life.season import (
    ALLOWANCE,
    Plan,
    in_order,
    judge_opening,
    last_opening_day,
    read_clock,
)

AS_OF = date(2026, 4, 10)


def demo_runs():
    runs = defaultdict(list)
    with Path("fixtures/demo/season_starts.csv").open() as file:
        for row in csv.DictReader(file):
            runs[row["watershed"]].append(date.fromisoformat(row["first_run_on"]))
    return runs


@pytest.mark.parametrize(
    ("watershed", "early"),
    [("OD", date(2026, 6, 9)), ("BI", date(2026, 6, 5)), ("TA", date(2026, 6, 8))],
)
def test_the_early_date_of_the_demos_streams(watershed, early):
    """Oracle: read off the sorted lists of 20 years: the third day, two lie before it.

    Odre 3, 5, 9 June; Bissa 1, 1, 5 June; Tavri 1, 8, 8 June.
    """
    found = early_first_flow(demo_runs()[watershed], AS_OF)
    assert found == EarlyFlow(early, 20)
    assert not found.too_few


@pytest.mark.parametrize(
    ("site", "last", "left", "words", "deep_short"),
    [
        ("OD-03", date(2026, 4, 30), 20, "20 days left, last opening day 2026-04-30", 0),
        ("OD-05", date(2026, 4, 22), 12, "12 days left, last opening day 2026-04-22", 0),
        ("BI-03", date(2026, 4, 6), -4, "too late by 4 days: do not open this season", 12),
        ("TA-02", date(2026, 5, 5), 25, "25 days left, last opening day 2026-05-05", 0),
        ("TA-04", date(2026, 4, 26), 16, "16 days left, last opening day 2026-04-26", 0),
    ],
)
def test_the_clock_of_the_demo(site, last, left, words, deep_short):
    """Oracle: by hand, OD-03: 9 June - 30 - 10 = 30 April; BI-03: 5 June - 50 - 10 = 6 April."""
    with Path("fixtures/demo/season_plan.csv").open() as file:
        (row,) = (row for row in csv.DictReader(file) if row["site_id"] == site)
    plan = Plan(
        early_first_flow(demo_runs()[site[:2]], AS_OF),
        int(row["days_needed_likely"]),
        int(row["reserve_days"]),
        int(row["days_needed_deep_rock"]),
    )
    clock = read_clock(plan, AS_OF)
    assert (clock.last_opening_day, clock.days_left) == (last, left)
    assert (clock.words, clock.deep_short) == (words, deep_short)
    assert clock.notes == (ALLOWANCE,)


SOON = Plan(EarlyFlow(date(2026, 6, 9), 20), 38, 10, 47)  # last opening day 22 April


def test_each_sentence_of_the_clock():
    """Oracle: 9 June - 38 - 10 days = 22 April; section 5, "too late by 6 days"."""
    day = date(2026, 4, 22)
    assert read_clock(SOON, day).words == "today is the last opening day"
    assert read_clock(SOON, date(2026, 4, 28)).words == (
        "too late by 6 days: do not open this season"
    )
    assert read_clock(SOON, date(2026, 4, 23)).words.startswith("too late by 1 day:")
    assert read_clock(SOON, date(2026, 4, 21)).words == "1 day left, last opening day 2026-04-22"
    late = read_clock(SOON, date(2026, 4, 28), trench_open=True)
    assert late.words == "open 6 days after the last opening day: close it"
    assert late.late_and_open
    assert not read_clock(SOON, day, trench_open=True).late_and_open


def test_sg_01_and_sg_02():
    assert judge_opening("OD-05", read_clock(SOON, date(2026, 4, 13))) == ()
    (warned,) = judge_opening("OD-05", read_clock(SOON, date(2026, 4, 14)))
    assert (warned.rule, warned.level, warned.what) == (
        "SG-02",
        "warn",
        "With rock at the deep limit 1 day is missing.",
    )
    (late,) = judge_opening("OD-05", read_clock(SOON, date(2026, 4, 28)))
    assert (late.rule, late.level) == ("SG-01", "block")
    assert late.sentence() == (
        "OD-05, last_opening_day: Too late by 6 days for OD-05. Do not open this season."
    )


def test_what_is_not_known_is_said_and_gives_no_date():
    clock = read_clock(Plan(None, None, 10), AS_OF)
    assert (clock.last_opening_day, clock.days_left) == (None, None)
    assert clock.words == (
        "cannot be computed: the days of first flow are not known, the days needed are not known"
    )
    (found,) = judge_opening("OD-04", clock)
    assert (found.rule, found.level) == ("SG-01", "block")
    assert found.what.startswith("The last opening day cannot be computed: ")
    assert read_clock(replace(SOON, reserve_days=None), AS_OF).words.endswith(
        "reserve is not known"
    )
    assert read_clock(replace(SOON, days_needed_deep=None), AS_OF).deep_short is None


@pytest.mark.parametrize("field", ["days_needed", "reserve_days", "days_needed_deep"])
def test_no_days_under_zero_are_needed(field):
    with pytest.raises(ValueError, match="-1 days cannot be needed"):
        replace(SOON, **{field: -1})


def test_few_years_give_the_earliest_day_and_say_so():
    runs = [date(2017 + n, 6, 20 - n) for n in range(9)]
    found = early_first_flow(runs, AS_OF)
    assert found == EarlyFlow(date(2026, 6, 12), 9)
    note = "Only 9 years are known: the earliest first flow counts."
    assert read_clock(Plan(found, 10, 10), AS_OF).notes == (ALLOWANCE, note)
    assert years_known(1) == "1 year is known"
    assert early_first_flow([], AS_OF) is None
    ten = [*runs, date(2026, 6, 25)]
    assert early_first_flow(ten, AS_OF).on == date(2026, 6, 13)  # one of ten lies before it


@pytest.mark.parametrize(
    ("today", "year"),
    [
        (date(2026, 4, 10), 2026),
        (date(2026, 6, 9), 2026),
        (date(2026, 9, 30), 2026),
        (date(2026, 10, 9), 2026),
        (date(2026, 10, 10), 2027),
        (date(2026, 12, 31), 2027),
    ],
)
def test_the_season_is_this_one_until_the_rains_are_over(today, year):
    assert early_first_flow([date(2020, 6, 9)], today).on == date(year, 6, 9)


def test_a_list_across_the_turn_of_the_year_is_in_its_order():
    """Oracle: by eye. Of these twelve, 20 December is first, 23 December second."""
    runs = [date(2010, 12, 20), date(2011, 12, 23)]
    runs += [date(2012 + n, 1, 2 + n) for n in range(10)]
    assert early_first_flow(runs, date(2026, 9, 1)).on == date(2026, 12, 23)
    leap = [date(2016, 2, 29)]
    assert early_first_flow(leap, date(2026, 1, 1)).on == date(2026, 2, 28)
    assert early_first_flow(leap, date(2028, 1, 1)).on == date(2028, 2, 29)


@given(st.lists(st.dates(date(1990, 4, 1), date(2025, 9, 30)), min_size=10, max_size=40))
def test_at_most_one_year_of_ten_lies_before_the_early_date(days):
    """Law, on lists that all lie in one part of a year."""
    runs = [day.replace(month=5, day=min(day.day, 28)) for day in days]
    early = early_first_flow(runs, AS_OF).on
    earlier = [run for run in runs if (run.month, run.day) < (early.month, early.day)]
    assert len(earlier) * 10 <= len(runs)
    later = [run for run in runs if (run.month, run.day) <= (early.month, early.day)]
    assert len(later) * 10 > len(runs) - 10
    assert (early.month, early.day) in {(run.month, run.day) for run in runs}


@given(st.integers(0, 90), st.integers(0, 30), st.integers(0, 60))
def test_more_days_never_give_a_later_last_day(needed, reserve, more):
    one = replace(SOON, days_needed=needed, reserve_days=reserve)
    other = replace(one, days_needed=needed + more)
    assert last_opening_day(other) == last_opening_day(one) - timedelta(days=more)
    assert read_clock(one, AS_OF).days_left == (last_opening_day(one) - AS_OF).days


def test_the_first_screen_is_in_order():
    """Oracle: open and late, too late, not known, then fewest days left."""
    late_open = read_clock(SOON, date(2026, 4, 24), trench_open=True)
    late = read_clock(SOON, date(2026, 4, 28))
    unknown = read_clock(Plan(None, 3, 3), AS_OF)
    near, far = read_clock(SOON, date(2026, 4, 20)), read_clock(SOON, AS_OF)
    assert in_order([far, unknown, near, late, late_open]) == (
        late_open,
        late,
        unknown,
        near,
        far,
    )


# --- days needed


def test_the_rates_are_those_of_the_handbook():
    """Oracle: handbook 12, progress 80, 1.5, 10, 100, 120 a gang and day."""
    assert Progress() == Progress(80.0, 1.5, 10.0, 100.0, 120.0)


def test_days_of_example_a_of_the_handbook():
    """Oracle: by hand from handbook 13 A, excavation 1430.52, key 7.2, clay 139.8, film 394.39,
    backfill 1297.92: 17.8815 + 4.8 + 13.98 + 3.9439 + 10.816 = 51.4214 days; two gangs 25.7107.
    """
    work = StripWork(1430.52, 7.2, 139.8, 394.39, 1297.92)
    assert days_of_work(work, Progress()) == pytest.approx(51.4214, abs=1e-9)
    assert days_needed([work], Progress()) == 52
    assert days_needed([work], Progress(), gangs=2) == 26
    assert days_needed([work, work], Progress()) == 103


def test_whole_days_are_not_rounded_up_and_parts_are():
    whole = StripWork(80.0, 1.5, 10.0, 100.0, 120.0)
    assert days_needed([whole] * 3, Progress()) == 15
    tenth = StripWork(8.0, 0.0, 0.0, 0.0, 0.0)
    assert days_needed([tenth] * 10, Progress()) == 1  # ten times 0.1 is one
    assert days_needed([tenth] * 11, Progress()) == 2


def test_days_of_what_is_not_known_are_not_known():
    work = StripWork(80.0, None, 10.0, 100.0, 120.0)
    assert days_of_work(work, Progress()) is None
    assert days_needed([work], Progress()) is None
    assert days_needed([], Progress()) is None
    unknown = replace(work, excavation=None)
    assert reserve_days(10, [work], [unknown], Progress()) is None


def test_an_uncertain_rock_adds_the_days_of_digging_to_its_deep_end():
    """Oracle: by hand, (1000 - 700) / 80 = 3.75 days, 4 whole ones; two gangs 1.875, 2."""
    likely = [StripWork(700.0, 1.0, 1.0, 1.0, 1.0)]
    deep = [StripWork(1000.0, 9.0, 9.0, 9.0, 9.0)]
    assert reserve_days(10, likely, deep, Progress()) == 14
    assert reserve_days(10, likely, deep, Progress(), gangs=2) == 12
    assert reserve_days(10, deep, likely, Progress()) == 10


@pytest.mark.parametrize(
    "wrong",
    [
        lambda: Progress(clay=0.0),
        lambda: Progress(film=float("inf")),
        lambda: StripWork(-1.0, 0.0, 0.0, 0.0, 0.0),
        lambda: StripWork(float("nan"), 0.0, 0.0, 0.0, 0.0),
        lambda: days_of_work(StripWork(0.0, 0.0, 0.0, 0.0, 0.0), Progress(), gangs=0),
        lambda: reserve_days(-1, [], [], Progress()),
    ],
)
def test_nonsense_is_refused(wrong):
    with pytest.raises(ValueError, match=r"cannot be|do no work|is none"):
        wrong()


QUANTITY = st.floats(0, 5000)
WORK = st.builds(StripWork, QUANTITY, QUANTITY, QUANTITY, QUANTITY, QUANTITY)


@given(st.lists(WORK, min_size=1, max_size=6), WORK)
def test_another_strip_never_takes_days_away(strips, more):
    one, other = days_needed(strips, Progress()), days_needed([*strips, more], Progress())
    assert one <= other
    slower = Progress(40.0, 0.75, 5.0, 50.0, 60.0)
    assert days_needed(strips, slower) >= one
