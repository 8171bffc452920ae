"""Clay: handbook 7.a to 7.c and 7.h, and what is told of a test."""

from __future__ import annotations

import pytest

from structures.life.clay import (
    ClayLimits,
    ClayResult,
    a_line_percent,
    failing_share_most,
    judge_clay,
    plasticity,
    plasticity_index_percent,
    upper_line_percent,
)

WHOLE = ClayResult(60.0, 25.0, 28.0, 4e-9, crumb_reaction=False, hand_roll_holds=True)


def held(test, limits=None):
    found = judge_clay(test, *([limits] if limits else []))
    return [one.field for one in found if one.level == "hold"]


def test_the_lines_of_the_plasticity_chart():
    """Oracle: handbook 7.a, LL 60 gives 29.20 and 46.80."""
    assert a_line_percent(60.0) == pytest.approx(29.20, abs=1e-9)
    assert upper_line_percent(60.0) == pytest.approx(46.80, abs=1e-9)


def test_a_clay_of_high_plasticity():
    """Oracle: handbook 7.b, LL 60 and PL 25 give PI 35, clay, high plasticity."""
    assert plasticity_index_percent(60.0, 25.0) == pytest.approx(35.0)
    assert plasticity(60.0) == "high"
    assert held(WHOLE) == []


def test_a_point_below_the_a_line_is_not_accepted():
    """Oracle: handbook 7.c, LL 55 and PL 33 give PI 22 below 25.55."""
    assert a_line_percent(55.0) == pytest.approx(25.55, abs=1e-9)
    assert held(ClayResult(55.0, 33.0)) == ["plastic_limit_percent"]


@pytest.mark.parametrize(("passes", "share"), [(3, 0.53584), (10, 0.20567), (22, 0.09937)])
def test_few_passes_prove_little(passes, share):
    """Oracle: handbook 7.h."""
    assert failing_share_most(passes) == pytest.approx(share, abs=5e-6)


@pytest.mark.parametrize(
    ("limit", "word"), [(50.1, "high"), (50, "medium"), (35, "medium"), (34, "low")]
)
def test_classes_of_plasticity(limit, word):
    """Oracle: handbook 7.2, over 50 high, 35 to 50 medium, under 35 low."""
    assert plasticity(limit) == word


@pytest.mark.parametrize(
    ("test", "fields"),
    [
        (ClayResult(liquid_limit_percent=50.0), ["liquid_limit_percent"]),
        (ClayResult(60.0, 10.0), ["plastic_limit_percent"]),  # PI 50 over 46.8: no soil
        (ClayResult(permeability_m_per_s=1.1e-8), ["permeability_m_per_s"]),
        (ClayResult(crumb_reaction=True), ["crumb_reaction"]),
        (ClayResult(hand_roll_holds=False), ["hand_roll_holds"]),
        (ClayResult(), []),
    ],
)
def test_what_is_against_a_clay(test, fields):
    """Oracle: the list of handbook 7.10."""
    assert held(test) == fields


def test_what_was_not_tested_is_never_accepted_in_silence():
    said = [one.what for one in judge_clay(ClayResult(liquid_limit_percent=60.0))]
    assert said == ["Not tested here: plastic limit, permeability, crumb test, hand roll."]
    assert [one.level for one in judge_clay(WHOLE)] == ["note"]  # a clear crumb clears nothing


def test_an_office_may_ask_for_more():
    assert held(WHOLE, ClayLimits(liquid_limit_percent=65.0)) == ["liquid_limit_percent"]
    assert held(WHOLE, ClayLimits(permeability_m_per_s=1e-9)) == ["permeability_m_per_s"]


def test_no_test_says_nothing():
    with pytest.raises(ValueError, match="no test"):
        failing_share_most(0)
