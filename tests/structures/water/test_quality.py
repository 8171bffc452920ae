"""Single readings held against their well, by the rules of field practice (LV-01 to LV-17)."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.water.marks import Mark, level_below_m, mark_findings, mark_on
from structures.water.quality import Past, Sent, WellFacts, doubts_of, held
from structures.water.well_rules import Facts, Known, alike_names, well_findings

NOW = datetime(2026, 4, 10, 12, 0, tzinfo=UTC)
# The parapet of a common well was raised by 0.60 m on 18 October 2025.
OLD = Mark("M1", date(2022, 5, 20), date(2025, 10, 17), 399.45, 0.75)
NEW = Mark("M2", date(2025, 10, 18), None, 400.05, 1.35)
WELL = WellFacts("BI-W05", (OLD, NEW), 398.70, 14.0, date(2022, 5, 20))


def past(depth_m=9.0, count=30):
    """Every half month at much the same depth below the old mark, the last on 5 March 2026."""
    days = [date(2026, 3, 5) - timedelta(days=15 * back) for back in range(count)]
    return Past(
        sorted((day, 399.45 - depth_m - 0.01 * (place % 3)) for place, day in enumerate(days))
    )


def rules(depth_m, *, day=date(2026, 3, 20), before=None, well=WELL, **changes):
    read_at = datetime(day.year, day.month, day.day, 6, 30, tzinfo=UTC)
    values = {"state": "static", "dry": False, "mark": None, **changes}
    sent = Sent(read_at, depth_m=depth_m, **values)
    found = doubts_of(sent, well, before or past(), now=NOW)
    return [(one.rule, one.level, one.suggested) for one in found]


def test_a_reading_like_the_last_one_is_not_doubted():
    assert rules(9.6, mark="M2") == []


@pytest.mark.parametrize(
    ("sent", "told"),
    [
        # 9.60 m below the new mark is 31.5 ft, 960 cm, level 390.45 m.
        (31.5, ("LV-10", "hold", "9.60")),
        (960.0, ("LV-10", "hold", "9.60")),
        (390.45, ("LV-09", "hold", "9.60")),
        (0.96, ("LV-08", "hold", "9.60")),
        (-9.6, ("LV-01", "block", "9.6")),
        # The bottom lies 14.00 + 1.35 = 15.35 m below the new mark; 0.10 m is allowed.
        (15.5, ("LV-02", "hold", "")),
        (0.0, ("LV-07", "hold", "")),
        (5.0, ("LV-08", "hold", "")),
    ],
)
def test_a_slip_is_held_with_what_may_have_been_meant(sent, told):
    """Oracle: the tables of field practice 7 and 8; conversions by hand (1 ft = 0.3048 m)."""
    assert rules(sent) == [told]


def test_a_mark_that_had_ended_is_held_with_the_one_in_use():
    """Oracle: LV-03 and the marks of the well above."""
    assert rules(9.6, mark="M1") == [("LV-03", "hold", "M2")]
    assert rules(9.0, mark="M1", day=date(2025, 10, 17)) == []
    told = doubts_of(
        Sent(datetime(2026, 3, 20, tzinfo=UTC), "static", False, 9.6, "M1"), WELL, past(), now=NOW
    )
    assert told[0].what == (
        "The reading names mark M1, which ended on 2025-10-17. "
        "Since then M2 is in use (0.60 m higher)."
    )
    assert rules(9.6, mark="M7") == [("LV-03", "hold", "M2")]
    assert rules(9.6, day=date(2022, 5, 1)) == [
        ("LV-11", "hold", "2022-01-05T06:30+00:00"),
        ("LV-03", "hold", ""),
    ]


def test_dry_is_a_bound_and_a_shallow_bottom_is_asked_about():
    """Oracle: LV-05 and LV-06; the bottom is 15.35 m below the mark, 0.20 m are allowed."""
    assert rules(15.35, dry=True) == [("LV-05", "note", "")]
    assert rules(15.1, dry=True) == [("LV-06", "hold", "")]


def test_a_day_still_to_come_may_be_day_and_month_changed_places():
    """Oracle: LV-11; 5 November for 11 May is past, 5 June for 6 May is not on 10 April."""
    day = date(2026, 5, 3)
    assert rules(9.6, day=day) == [("LV-11", "hold", "2026-03-05T06:30+00:00")]
    assert rules(9.6, day=date(2026, 6, 5)) == [("LV-11", "hold", "")]


def test_two_readings_that_differ_are_told():
    assert rules(9.6, again_m=9.62) == []
    assert rules(9.6, again_m=9.63) == [("LV-17", "note", "")]


def test_without_a_past_only_the_well_itself_speaks():
    """A first reading cannot surprise; a level still lies inside no well."""
    assert rules(5.0, before=Past()) == []
    assert rules(390.45, before=Past()) == [("LV-09", "hold", "9.60")]
    assert rules(31.5, before=Past()) == [("LV-02", "hold", "")]


@given(
    depth_m=st.floats(0.01, 13.0),
    factor=st.sampled_from([1 / 0.3048, 100.0]),
)
def test_whatever_is_suggested_lies_inside_the_well(depth_m, factor):
    """Law: a suggestion is never deeper than the bottom, and never above the mark."""
    for _, _, suggested in rules(depth_m * factor, before=past(depth_m)):
        if suggested:
            assert 0.0 <= float(suggested) <= 15.35 + 0.1


@given(st.lists(st.tuples(st.integers(0, 2000), st.floats(380, 399)), min_size=13, max_size=40))
def test_the_last_level_itself_never_surprises(rows):
    """Law: the range to expect holds the level from which it starts."""
    start = date(2020, 1, 1)
    before = Past(sorted((start + timedelta(days=day), level) for day, level in rows))
    last_day, last_m = before.rows[-1]
    expected = before.expected(last_day + timedelta(days=1))
    assert expected is not None
    assert expected.holds(last_m)


def test_what_is_held_waits_and_a_note_does_not():
    found = doubts_of(
        Sent(datetime(2026, 3, 20, tzinfo=UTC), "static", True, 15.35, "M1"), WELL, past(), now=NOW
    )
    assert [one.rule for one in found] == ["LV-03", "LV-05"]
    assert [one.rule for one in held(found)] == ["LV-03"]


def test_the_mark_of_the_day_gives_the_level():
    """Oracle: level = level of the mark - depth, by hand: 400.05 - 9.60 = 390.45."""
    assert mark_on((OLD, NEW), date(2025, 10, 17)) is OLD
    assert mark_on((OLD, NEW), date(2025, 10, 18)) is NEW
    assert mark_on((OLD, NEW), date(2022, 5, 19)) is None
    assert level_below_m(9.6, NEW) == 390.45
    assert level_below_m(None, NEW) is None
    assert level_below_m(9.6, None) is None


@pytest.mark.parametrize(
    ("marks", "told"),
    [
        ([OLD, NEW], [("MM-03", "hold")]),
        ([OLD, Mark("M2", date(2025, 10, 18), None, 400.05, 1.35, shown=True)], []),
        ([OLD, Mark("M2", date(2025, 10, 10), None, 399.46, 0.76)], [("MM-01", "block")]),
        ([OLD, Mark("M2", date(2025, 10, 25), None, 399.46, 0.76)], [("MM-02", "hold")]),
        ([Mark("M1", date(2022, 5, 20), None, 399.45, 399.45)], [("MM-04", "warn")]),
    ],
)
def test_marks_follow_one_another(marks, told):
    """Oracle: MM-01 to MM-04 of field practice."""
    assert [(one.rule, one.level) for one in mark_findings("BI-W05", marks)] == told


def test_the_gap_between_marks_is_named():
    late = Mark("M2", date(2025, 10, 25), None, 399.46, 0.76)
    (found,) = mark_findings("BI-W05", [OLD, late])
    assert found.what == "BI-W05 has no mark from 2025-10-18 to 2025-10-24."


def facts(**changes):
    known = Known("OD-W09", ("Mandolerra common well",), (77.44, 15.72))
    values = {
        "known": known,
        "role": "upstream",
        "bottom_m": 9.0,
        "bottom_sounded_on": date(2025, 1, 1),
        "upstream_of_wall_m": 140.0,
    }
    return Facts(**{**values, **changes})


@pytest.mark.parametrize(
    ("well", "others", "told"),
    [
        (facts(), [], []),
        (facts(bottom_sounded_on=None), [], ["WL-02"]),
        (facts(bottom_sounded_on=date(2020, 1, 1)), [], ["WL-02"]),
        # A ten-thousandth of a degree of latitude is 11.06 m here.
        (facts(), [Known("OD-W10", (), (77.44, 15.7201))], ["WL-03"]),
        (facts(), [Known("OD-W10", (), (77.44, 15.7202))], []),
        (facts(), [Known("OD-W10", ("Mandolera comon well",))], ["WL-03"]),
        (facts(role="control"), [], ["WL-05"]),
        (facts(role="control", upstream_of_wall_m=-140.0), [], []),
        (facts(role="control", upstream_of_wall_m=900.0), [], []),
    ],
)
def test_a_well_is_held_against_its_neighbours_and_the_wall(well, others, told):
    """Oracle: WL-02, WL-03 (15 m) and WL-05 of field practice."""
    found = well_findings(well, others, today=date(2026, 4, 10))
    assert [one.rule for one in found] == told


def test_a_neighbour_that_was_said_to_be_another_well_is_not_told_again():
    twin = Known("OD-W10", (), (77.44, 15.72))
    assert well_findings(facts(), [twin], today=date(2026, 4, 10), kept_apart=["OD-W10"]) == ()


def test_three_spellings_of_one_name_are_alike():
    """Oracle: the three spellings of field practice 8, no. 34."""
    first = "Mandolerra common well"
    assert alike_names(first, "Mandolera comon well")
    assert alike_names(first, "MANDOLERRA C. WELL")
    assert not alike_names(first, "Pirrumad east well")
    assert not alike_names(first, "")
