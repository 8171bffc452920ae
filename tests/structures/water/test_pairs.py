"""Pairs of half months. Oracle: hand sums on a few readings; handbook 10.1 and 10.10."""

from datetime import UTC, date, datetime

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.readings import WellReading
from structures.water.half_months import own_means_m, stretch_of
from structures.water.pairs import make_pairs
from structures.water.rules import EffectRules

COMPLETED = date(2020, 6, 10)
RULES = EffectRules()


def reading(well, day, level_m, *, dry=False, left_out=""):
    role = "control" if well.startswith("C") else "affected"
    at = datetime(*(int(part) for part in day.split("-")), 7, tzinfo=UTC)
    return WellReading(well, role, at, "static", dry, 100.0 - level_m, 100.0, left_out=left_out)


def year(well, first_year, levels, day=5):
    """One reading a month from June on."""
    months = [(first_year + (5 + place) // 12, (5 + place) % 12 + 1) for place in range(12)]
    return [
        reading(well, f"{at}-{month:02d}-{day:02d}", level)
        for (at, month), level in zip(months, levels, strict=True)
        if level is not None
    ]


FLAT = [50.0] * 12
STEPS = [50.0 + place / 10 for place in range(12)]


@pytest.mark.parametrize(
    ("day", "first", "last"),
    [
        (date(2020, 2, 15), date(2020, 2, 1), date(2020, 2, 15)),
        (date(2020, 2, 16), date(2020, 2, 16), date(2020, 2, 29)),
        (date(2020, 6, 9), date(2020, 6, 1), date(2020, 6, 9)),
        (date(2020, 6, 10), date(2020, 6, 10), date(2020, 6, 15)),
    ],
)
def test_half_months_break_at_completion(day, first, last):
    """Oracle: handbook 10.10, 1 to 15 and 16 to the end; the completion day counts as after."""
    found = stretch_of(day, COMPLETED)
    assert (found.first, found.last) == (first, last)
    assert found.middle_day == (first.toordinal() + last.toordinal()) / 2


@given(
    st.dates(date(2019, 1, 1), date(2022, 12, 31)), st.dates(date(2019, 1, 1), date(2022, 12, 31))
)
def test_a_day_lies_in_its_half_month_and_on_one_side(day, completed):
    found = stretch_of(day, completed)
    assert found.first <= day <= found.last
    assert (found.first >= completed) == (day >= completed)
    assert (found.last >= completed) == (day >= completed)


def test_departures_are_from_the_mean_of_twelve_months():
    """Oracle: 50.00 to 51.10 by tenths has the mean 50.55; the controls stay at 50."""
    readings = [*year("A1", 2019, STEPS), *year("C1", 2019, FLAT)]
    readings += [*year("A1", 2020, [52.0] * 12, day=20), *year("C1", 2020, [50.5] * 12, day=20)]
    found = make_pairs(readings, COMPLETED, RULES)
    assert found.after.tolist() == [False] * 12 + [True] * 12
    assert found.affected_m[:12] == pytest.approx(np.array(STEPS) - 50.55)
    assert found.affected_m[12:] == pytest.approx([1.45] * 12)
    assert found.control_m[12:] == pytest.approx([0.5] * 12)
    assert found.difference_m[12:] == pytest.approx([0.95] * 12)
    assert (found.full_before, found.full_after) == ((2019,), (2020,))
    assert found.readings.sum() == 48
    assert found.left_out == ()


def test_a_missing_month_does_not_move_a_well_with_companions():
    """Oracle: two wells with the same course; the one without May has the mean of the other."""
    whole = year("A1", 2019, STEPS)
    short = year("A2", 2019, [*STEPS[:11], None])
    found = own_means_m({"A1": whole, "A2": short}, COMPLETED)
    assert found == pytest.approx({"A1": 50.55, "A2": 50.55}, abs=1e-9)


def test_a_well_without_enough_months_is_left_out_and_counted():
    readings = [*year("A1", 2019, FLAT), *year("C1", 2019, FLAT)]
    readings += year("A2", 2019, [50.0] * 9 + [None] * 3)
    readings += [reading("A3", "2020-07-05", 51.0)]
    readings += [*year("A1", 2020, FLAT, day=20), *year("C1", 2020, FLAT, day=20)]
    found = make_pairs(readings, COMPLETED, RULES)
    assert found.affected_wells == ("A1",)
    assert dict(found.left_out) == {"well not read in enough months before completion": 10}


def test_a_half_month_without_partner_is_counted():
    readings = [*year("A1", 2019, FLAT), *year("C1", 2019, FLAT, day=6)]
    readings += [*year("A1", 2020, FLAT, day=20), *year("C1", 2020, FLAT, day=20)]
    readings += [reading("A1", "2019-08-20", 50.0), reading("C1", "2020-09-03", 50.0)]
    found = make_pairs(readings, COMPLETED, RULES)
    assert dict(found.left_out) == {"no well of the other kind read in that half month": 2}


def test_only_like_seasons_are_compared():
    """Oracle: after completion only ten months are read; the pairs of the other two before go."""
    readings = [*year("A1", 2019, FLAT), *year("C1", 2019, FLAT)]
    readings += year("A1", 2020, [50.0] * 10 + [None] * 2, day=20)
    readings += year("C1", 2020, FLAT, day=20)
    found = make_pairs(readings, COMPLETED, RULES)
    assert {day.month for day in found.days} == {6, 7, 8, 9, 10, 11, 12, 1, 2, 3}
    assert dict(found.left_out) == {
        "month without a pair on the other side of completion": 4,
        "no well of the other kind read in that half month": 2,
    }


def test_the_median_of_wells_and_what_dry_wells_do_to_it():
    """Oracle: of departures -0.5 (dry), 0.2, 0.4 the median is 0.2 wherever the dry one stands;
    with two of three dry the middle is a bound; dry on both sides says nothing.
    """
    wells = ("A1", "A2", "A3")
    readings = [one for well in (*wells, "C1") for one in year(well, 2019, FLAT)]
    readings += [one for well in (*wells, "C1") for one in year(well, 2020, FLAT, day=20)]
    extra = [
        ("2020-07-03", (49.5, True), (50.2, False), (50.4, False), (50.0, False)),
        ("2020-08-03", (49.5, True), (49.7, True), (50.4, False), (50.0, False)),
        ("2020-09-03", (49.5, True), (49.7, True), (50.4, False), (49.9, True)),
        ("2020-10-03", (50.1, False), (50.2, False), (50.4, False), (49.9, True)),
    ]
    for day, *levels in extra:
        for well, (level_m, dry) in zip((*wells, "C1"), levels, strict=True):
            readings.append(reading(well, day, level_m, dry=dry))
    found = make_pairs(readings, COMPLETED, RULES)
    by_day = {day: place for place, day in enumerate(found.days)}
    july, august, october = (by_day[date(2020, month, 1)] for month in (7, 8, 10))
    assert found.difference_m[july] == pytest.approx(0.2)
    assert not found.bounded[july]
    assert found.difference_m[august] == pytest.approx(-0.3)
    assert (found.below[august], found.above[august]) == (True, False)
    assert date(2020, 9, 1) not in by_day
    assert dict(found.left_out) == {"dry on both sides": 4}
    assert found.difference_m[october] == pytest.approx(0.3)
    assert (found.below[october], found.above[october]) == (False, True)


def test_readings_that_take_no_part_keep_their_reason():
    readings = [*year("A1", 2019, FLAT), *year("C1", 2019, FLAT)]
    readings += [*year("A1", 2020, FLAT, day=20), *year("C1", 2020, FLAT, day=20)]
    readings += [reading("A1", "2019-08-06", 49.0, left_out="pumping")]
    found = make_pairs(readings, COMPLETED, RULES)
    assert dict(found.left_out) == {"pumping": 1}
    assert found.difference_m == pytest.approx(np.zeros(24))


def test_the_water_year_begins_where_the_office_says():
    june, april = EffectRules(), EffectRules(year_starts=(4, 1))
    assert [one.water_year(date(2020, 5, 31)) for one in (june, april)] == [2019, 2020]
    assert june.water_year(date(2020, 6, 1)) == 2020
    with pytest.raises(ValueError, match="confidence"):
        EffectRules(confidence=1.0)
    with pytest.raises(ValueError, match="one year"):
        EffectRules(least_pairs=0)
