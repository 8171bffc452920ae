"""Head across the wall. Oracle: hand sums on two pipes."""

from datetime import UTC, date, datetime

import pytest

from structures.intake.readings import WellReading
from structures.life.verdict import Limits, judge
from structures.water.head import head_across
from structures.water.rules import EffectRules

COMPLETED = date(2020, 6, 1)
ONE_YEAR = EffectRules(least_full_years=1)
LIMITS = Limits(0.30, 1, 6)


def pipe(well, first_year, level_m, *, dry=()):
    return [
        WellReading(
            well,
            "control",
            datetime(first_year + (5 + place) // 12, (5 + place) % 12 + 1, 4, tzinfo=UTC),
            "static",
            dry=place in dry,
            depth_m=100.0 - level_m - place / 100,
            height_m=100.0,
        )
        for place in range(12)
    ]


def across(*rows, **options):
    return head_across(
        [one for row in rows for one in row], "UP", "DOWN", COMPLETED, ONE_YEAR, **options
    )


def test_the_head_is_the_upper_level_less_the_lower():
    """Oracle: 0.10 m before and 1.10 m after, without scatter."""
    found = across(
        pipe("UP", 2019, 50.1),
        pipe("DOWN", 2019, 50.0),
        pipe("UP", 2020, 51.0),
        pipe("DOWN", 2020, 49.9),
    )
    assert found.before_m == pytest.approx((0.1, 0.1, 0.1))
    assert found.now_m == pytest.approx((1.1, 1.1, 1.1))
    assert found.measured.gain_m == pytest.approx(1.0)
    assert (found.full_after, found.measured.pairs) == ((2020,), 12)
    assert judge(found.measured, None, LIMITS).verdict == "holds"


def test_the_range_is_of_nine_heads_in_ten():
    """Oracle: by hand, heads before 0.00 to 0.11 by hundredths (quantiles 0.011, 0.055, 0.099);
    the upper pipe rises by a hundredth a month, the lower one stays.
    """
    level = pipe("DOWN", 2019, 50.0)
    still = [
        one.__class__(one.well, one.role, one.read_at, "static", False, 50.0, 100.0)
        for one in level
    ]
    found = across(pipe("UP", 2019, 50.0), still, pipe("UP", 2020, 51.0), pipe("DOWN", 2020, 50.0))
    assert found.before_m == pytest.approx((0.011, 0.055, 0.099))
    assert found.measured.low_m == pytest.approx(1.0 - 0.099)
    assert found.measured.high_m == pytest.approx(1.0 - 0.011)
    assert found.measured.spread_m == pytest.approx(0.088)


def test_a_dry_pipe_below_gives_a_least_head_and_one_above_none():
    found = across(
        pipe("UP", 2019, 50.0, dry=(0, 1)),
        pipe("DOWN", 2019, 50.0),
        pipe("UP", 2020, 51.0),
        pipe("DOWN", 2020, 50.0, dry=(3,)),
    )
    assert found.upstream_dry == 2
    assert len(found.heads) == 22
    assert [least for _, _, least in found.heads].count(True) == 1


def test_pipes_set_with_the_wall_take_the_natural_head():
    after = (pipe("UP", 2020, 51.0), pipe("DOWN", 2020, 50.0))
    assert across(*after).measured.gain_m is None
    assert judge(across(*after).measured, None, LIMITS).verdict == "not known"
    found = across(*after, natural_head_m=0.2)
    assert found.measured.gain_m == pytest.approx(0.8)
    assert judge(found.measured, None, LIMITS).verdict == "holds"


def test_without_a_full_year_nothing_is_known():
    short = (pipe("UP", 2020, 51.0)[:5], pipe("DOWN", 2020, 50.0))
    found = across(*short, natural_head_m=0.2)
    assert (found.now_m, found.full_after, found.measured.gain_m) == (None, (), None)
    assert judge(found.measured, None, LIMITS).verdict == "not known"
