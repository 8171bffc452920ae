"""From evidence to a verdict. Oracle: handbook 10.11 read out rule by rule."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.verdict import (
    RULE,
    VERDICTS,
    Forecast,
    Head,
    Limits,
    Measured,
    from_readings,
    judge,
)

LIMITS = Limits(least_effect_m=0.30, least_full_years=2, least_pairs=6)
NOTHING = Measured(None, None, None, None, (24, 24), (2, 2), 2)


def gain(low_m, high_m, *, smallest_m=0.2, pairs=(24, 24), years=(2, 2), controls=2):
    return Measured((low_m + high_m) / 2, low_m, high_m, smallest_m, pairs, years, controls)


HOLDS, IN_PART, NOT, OPEN = (
    gain(0.31, 1.0),
    gain(0.05, 1.0),
    gain(-0.1, 0.15),
    gain(-0.5, 0.8, smallest_m=0.9),
)


@pytest.mark.parametrize(
    ("wells", "verdict"),
    [
        (HOLDS, "holds"),
        (gain(0.30, 0.9), "holds"),  # low >= e
        (IN_PART, "holds in part"),
        (gain(0.0, 0.5), "does not hold"),  # reaches 0
        (NOT, "does not hold"),
        (gain(-0.9, -0.4), "does not hold"),
        (gain(-0.1, 0.4, smallest_m=0.30), "does not hold"),  # smallest <= e
        (OPEN, "not known"),
        (gain(0.5, 0.9, controls=0), "not known"),
        (gain(0.5, 0.9, years=(1, 2)), "not known"),
        (gain(0.5, 0.9, years=(2, 1)), "not known"),
        (gain(0.5, 0.9, pairs=(5, 24)), "not known"),
        (gain(0.5, 0.9, pairs=(24, 5)), "not known"),
        (NOTHING, "not known"),
    ],
)
def test_the_rule_of_readings_alone(wells, verdict):
    found = from_readings(wells, LIMITS)
    assert (found.verdict, found.rule) == (verdict, RULE)
    assert found.reasons


def head(low_m, high_m, *, spread_m=0.2, pairs=24, years=2):
    return Head((low_m + high_m) / 2, low_m, high_m, spread_m, pairs, years)


HIGH, SOME, NONE, WIDE = (
    head(0.31, 1.0),
    head(0.05, 1.0),
    head(-0.1, 0.15),
    head(-0.5, 0.8, spread_m=0.9),
)


@pytest.mark.parametrize(
    ("across", "verdict"),
    [
        (HIGH, "holds"),
        (SOME, "holds in part"),
        (NONE, "does not hold"),
        (WIDE, "not known"),
        (head(0.5, 0.9, years=1), "not known"),
        (head(0.5, 0.9, pairs=5), "not known"),
        (Head(None, None, None, None, 24, 2), "not known"),
    ],
)
def test_the_head_is_weighed_by_the_same_limits(across, verdict):
    assert judge(across, None, LIMITS).verdict == verdict


@pytest.mark.parametrize(
    ("across", "wells", "verdict"),
    [
        (None, None, "not known"),
        (None, HOLDS, "holds"),
        (None, IN_PART, "holds in part"),
        (HIGH, None, "holds"),
        (HIGH, OPEN, "holds"),
        (HIGH, HOLDS, "holds"),
        (HIGH, IN_PART, "holds in part"),
        (SOME, HOLDS, "holds in part"),
        (HIGH, NOT, "holds in part"),
        (NONE, HOLDS, "does not hold"),
        (NONE, NOT, "does not hold"),
        (WIDE, NOT, "does not hold"),
        (WIDE, OPEN, "not known"),
    ],
)
def test_the_head_across_the_wall_comes_before_the_wells(across, wells, verdict):
    """Oracle: the order of evidence, head, wells, forecast; wells never raise a verdict of the head."""
    found = judge(across, wells, LIMITS)
    assert found.verdict == verdict
    assert all(reason.endswith(".") for reason in found.reasons)


@pytest.mark.parametrize(
    ("wells", "words"),
    [
        (None, "a forecast is no reading"),
        (NOTHING, "a forecast is no reading"),
        (gain(0.1, 0.3), "gained less"),
        (gain(0.5, 0.9), "agree with it"),
        (gain(1.5, 1.9), "gained more"),
    ],
)
def test_a_forecast_moves_no_verdict(wells, words):
    forecast = Forecast(0.6, 1.2)
    with_it = judge(None, wells, LIMITS, forecast=forecast)
    assert with_it.verdict == judge(None, wells, LIMITS).verdict
    assert words in with_it.reasons[-1]


@st.composite
def measured(draw):
    ends = sorted(draw(st.lists(st.floats(-3, 3), min_size=3, max_size=3)))
    known = draw(st.booleans())
    low_m, gain_m, high_m = ends if known else (None, None, None)
    pairs = st.tuples(st.integers(0, 40), st.integers(0, 40))
    years = st.tuples(st.integers(0, 5), st.integers(0, 5))
    smallest = draw(st.floats(0.01, 3)) if known else None
    return Measured(
        gain_m, low_m, high_m, smallest, draw(pairs), draw(years), draw(st.integers(0, 3))
    )


@given(measured())
def test_too_little_is_never_more_than_not_known(wells):
    """A law: without years, pairs or controls no reading moves a verdict."""
    short = (
        min(wells.full_years) < 2
        or min(wells.pairs) < 6
        or not wells.controls
        or wells.gain_m is None
    )
    verdict = from_readings(wells, LIMITS).verdict
    assert verdict in VERDICTS
    assert not short or verdict == "not known"


@given(st.sampled_from([HIGH, SOME, NONE, WIDE]), measured())
def test_wells_never_raise_what_the_head_says(across, wells):
    """A law: where the head gives a verdict, wells leave it or lower it."""
    alone = judge(across, None, LIMITS).verdict
    both = judge(across, wells, LIMITS).verdict
    if alone != "not known":
        assert VERDICTS.index(both) <= VERDICTS.index(alone)
        assert both != "not known"


def test_a_gain_that_cannot_be_is_refused():
    with pytest.raises(ValueError, match="lies outside"):
        Measured(2.0, 0.0, 1.0, 0.1, (9, 9), (2, 2), 1)
    with pytest.raises(ValueError, match="both ends"):
        Head(None, 0.0, 1.0, 0.1, 9, 2)


def test_what_rounds_to_nothing_has_no_sign():
    assert "(0.00 to" in from_readings(gain(-0.001, 0.9, smallest_m=0.1), LIMITS).reasons[0]
