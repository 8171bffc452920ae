"""The look into the trench. Oracle: rules TR-01 to TR-04 and handbook 11, figure by figure."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, date, datetime

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.field_records import RESULTS
from structures.life.trench import (
    NO_STOP,
    NOT_LOOKED,
    STOP,
    WORDS,
    Asked,
    Look,
    judge_entry,
    judge_look,
    spoil_distance_m,
)

TODAY = date(2026, 4, 10)
DRAWN = Asked(slope=1.5)


def at(hour, minute=0):
    return datetime(2026, 4, 10, hour, minute, tzinfo=UTC)


GOOD = Look(
    day=TODAY,
    at=at(7, 40),
    result=NO_STOP,
    depth_m=4.0,
    slope_as_cut=1.5,
    spoil_back_m=2.0,
    ladder_within_m=7.6,
    crack=False,
    sides="no change seen",
    water="pumped down",
    rain_since_last=False,
)


def entry(*looks, now=None, rained_at=None, alarm_set=False):
    now = now or at(8)
    return judge_entry(looks, now, TODAY, asked=DRAWN, rained_at=rained_at, alarm_set=alarm_set)


def test_the_three_results_in_words_none_of_which_says_safe():
    assert tuple(WORDS) == RESULTS
    assert list(WORDS.values()) == ["no stop found", "stop: nobody goes in", "not looked"]


@pytest.mark.parametrize(("depth_m", "back_m"), [(0, 1.5), (3.0, 1.5), (3.2, 1.6), (6.0, 3.0)])
def test_spoil_lies_back_by_the_larger_of_a_metre_and_a_half_and_half_the_depth(depth_m, back_m):
    """Oracle: handbook 11, max(1.5, D/2), which is never under 0.6 m."""
    assert spoil_distance_m(depth_m) == back_m


def test_no_trench_has_a_negative_depth():
    with pytest.raises(ValueError, match="deep"):
        spoil_distance_m(-0.1)


def test_a_whole_look_without_a_stop():
    judged = judge_look(GOOD, DRAWN)
    assert (judged.result, judged.findings) == (NO_STOP, ())
    assert judged.words == "no stop found"


@pytest.mark.parametrize(
    ("changes", "rule", "sentence"),
    [
        (
            {"spoil_back_m": 1.99},
            "TR-03",
            (
                "Spoil is 1.99 m from the edge; 2 m is asked for here. "
                "Nobody goes in until it is moved back."
            ),
        ),
        (
            {"depth_m": 1.0, "spoil_back_m": 1.4},
            "TR-03",
            (
                "Spoil is 1.4 m from the edge; 1.5 m is asked for here. "
                "Nobody goes in until it is moved back."
            ),
        ),
        (
            {"ladder_within_m": 7.7},
            "TR-04",
            "Nearest ladder 7.7 m. Nobody goes in until another stands.",
        ),
        (
            {"depth_m": 1.2, "ladder_within_m": 20.0},
            "TR-04",
            "Nearest ladder 20 m. Nobody goes in until another stands.",
        ),
        (
            {"slope_as_cut": 1.4},
            "",
            (
                "Sides are cut 1.4 across to 1 up, 1.5 is asked for. "
                "Nobody goes in until they are flattened from above."
            ),
        ),
        (
            {"crack": True},
            "",
            "There is a crack or a bulge. Nobody goes in; keep off the edge and call the engineer.",
        ),
        (
            {"result": STOP},
            "",
            "Whoever looked says stop. Nobody goes in. Mend the cause, then look again.",
        ),
    ],
)
def test_each_reason_stops_in_its_words(changes, rule, sentence):
    judged = judge_look(replace(GOOD, **changes), DRAWN)
    assert judged.result == STOP
    assert [(one.rule, f"{one.what} {one.remedy}") for one in judged.findings] == [(rule, sentence)]


def test_a_shallow_trench_needs_no_ladder():
    shallow = replace(GOOD, depth_m=1.19, ladder_within_m=None)
    assert judge_look(shallow, DRAWN).result == NO_STOP
    stricter = Asked(slope=1.5, ladder_from_m=0.9)
    assert judge_look(shallow, stricter).result == NOT_LOOKED


@pytest.mark.parametrize(
    "field",
    [
        "depth_m",
        "slope_as_cut",
        "spoil_back_m",
        "ladder_within_m",
        "crack",
        "rain_since_last",
        "sides",
        "water",
    ],
)
def test_a_blank_is_not_looked_and_never_no_stop_found(field):
    blank = "" if field in {"sides", "water"} else None
    judged = judge_look(replace(GOOD, **{field: blank}), DRAWN)
    assert judged.result == NOT_LOOKED
    assert [one.field for one in judged.findings] == [field]


def test_a_stop_is_told_even_where_much_is_blank():
    bare = Look(TODAY, at(7), NO_STOP, spoil_back_m=1.0)
    judged = judge_look(bare, DRAWN)
    assert (judged.result, [one.rule for one in judged.findings]) == (STOP, ["TR-03"])


def test_tr_01_without_a_look_of_today_nobody_goes_in():
    for looks in ((), (replace(GOOD, day=date(2026, 4, 9)),), (replace(GOOD, at=at(9)),)):
        judged = entry(*looks)
        assert judged.result == NOT_LOOKED
        assert judged.findings[0].sentence() == (
            "trench, look: No trench look today. Nobody goes in."
        )
        assert judged.findings[0].rule == "TR-01"
    assert entry(replace(GOOD, result=NOT_LOOKED)).result == NOT_LOOKED


def test_tr_02_after_rain_it_is_looked_at_again():
    judged = entry(GOOD, now=at(12), rained_at=at(11, 20))
    assert judged.result == STOP
    assert judged.findings[0].sentence() == (
        "trench, rain: It rained at 11:20, or the stream rose. "
        "Nobody goes in until the trench was looked at again."
    )
    again = replace(GOOD, at=at(11, 40), rain_since_last=True)
    assert entry(GOOD, again, now=at(12), rained_at=at(11, 20)).result == NO_STOP
    assert entry(GOOD, now=at(12), rained_at=at(7)).result == NO_STOP


def test_the_newest_look_counts():
    later = replace(GOOD, at=at(7, 50), crack=True)
    assert entry(GOOD, later).result == STOP
    assert entry(later, replace(GOOD, at=at(7, 55))).result == NO_STOP


def test_an_alarm_stops_and_so_does_not_knowing_of_one():
    assert entry(GOOD, alarm_set=True).findings[0].what.startswith("A forecast or a stream alarm")
    assert entry(GOOD, alarm_set=None).findings[0].what.startswith("Cannot be judged")
    assert {entry(GOOD, alarm_set=alarm).result for alarm in (True, None)} == {STOP}


def test_a_result_that_is_none_is_a_mistake_of_the_caller():
    with pytest.raises(ValueError, match="no result 'safe'"):
        judge_look(replace(GOOD, result="safe"), DRAWN)


LOOKS = st.builds(
    Look,
    day=st.just(TODAY),
    at=st.just(at(7)),
    result=st.sampled_from(RESULTS),
    depth_m=st.none() | st.floats(0, 20),
    slope_as_cut=st.none() | st.floats(0, 4),
    spoil_back_m=st.none() | st.floats(0, 20),
    ladder_within_m=st.none() | st.floats(0, 40),
    crack=st.none() | st.booleans(),
    sides=st.sampled_from(["", "dry"]),
    water=st.sampled_from(["", "none"]),
    rain_since_last=st.none() | st.booleans(),
)


@given(LOOKS)
def test_no_stop_found_stands_only_where_all_was_answered_and_nothing_was_wrong(look):
    """Law, with every figure of handbook 11 written out here once more."""
    judged = judge_look(look, DRAWN)
    if judged.result == NO_STOP:
        assert look.result == NO_STOP
        assert look.crack is False
        assert look.slope_as_cut >= 1.5
        assert look.spoil_back_m >= 1.5
        assert look.spoil_back_m >= look.depth_m / 2
        assert look.depth_m < 1.2 or look.ladder_within_m <= 7.6
        assert judged.findings == ()
    else:
        assert judged.findings != ()
