"""Rock as the open trench showed it, in place of a drawn line or as pits in an estimate."""

from dataclasses import replace

import numpy as np
import pytest

from structures.errors import Refused
from structures.ground.found import FoundLevel, take_in
from structures.ground.found_lines import DrawnRange, draw_around
from structures.ground.rock import estimate_rock
from structures.intake.pack import (
    GroundPoint,
    Probe,
    RockLinePoint,
    RockTest,
    Site,
    SurveyPack,
    Toes,
)

FLAT = SurveyPack(
    Site("NE-01"),
    tuple(GroundPoint(x, 100.0) for x in (0.0, 20.0, 40.0, 60.0, 80.0)),
    Toes(20.0, 60.0),
    rock_line=tuple(
        RockLinePoint(x, z)
        for x, z in ((0.0, 99.5), (10.0, 96.0), (30.0, 95.0), (50.0, 95.0), (80.0, 99.5))
    ),
)


def line(as_found):
    return [(one.offset_m, one.level_m) for one in as_found.pack.rock_line]


def strip(number, *levels):
    return [FoundLevel(offset, level, number) for offset, level in levels]


def test_inside_a_strip_the_found_profile_takes_the_place_of_the_drawn_one():
    """Oracle: by hand; the drawn point at 30 m lies in the strip and goes, 50 m stays."""
    found = strip(2, (28.0, 95.2), (31.0, 94.0), (34.0, 94.6))
    as_found = take_in(FLAT, found)
    assert line(as_found) == [
        (0.0, 99.5),
        (10.0, 96.0),
        (28.0, 95.2),
        (31.0, 94.0),
        (34.0, 94.6),
        (50.0, 95.0),
        (80.0, 99.5),
    ]
    assert (as_found.lowered, as_found.over_found) == ((), ())


def test_between_strips_that_do_not_touch_the_drawn_line_stands():
    found = [*strip(1, (12.0, 96.0), (18.0, 95.5)), *strip(7, (48.0, 95.0), (54.0, 95.4))]
    assert [x for x, _ in line(take_in(FLAT, found))] == [0, 10, 12, 18, 30, 48, 54, 80]


def test_rock_seen_beside_the_trench_stands_for_its_own_place():
    found = [FoundLevel(28.0, 94.0), FoundLevel(52.0, 95.3)]
    assert [x for x, _ in line(take_in(FLAT, found))] == [0, 10, 28, 30, 50, 52, 80]


def test_where_two_strips_meet_the_lower_level_is_kept():
    found = [*strip(1, (24.0, 95.0), (30.0, 94.9)), *strip(2, (30.0, 94.7), (36.0, 95.0))]
    as_found = take_in(FLAT, found)
    assert [one.level_m for one in as_found.found] == [95.0, 94.7, 95.0]
    assert take_in(FLAT, reversed(found)).pack == as_found.pack


def test_a_line_over_the_foot_of_a_probe_is_lowered_to_it_the_worst_first():
    """Oracle: by hand. Between 34 and 50 m the line runs at 95; probes of 6.0, 8.0 and 6.5 m end
    at 94, 92 and 93.5. Lowered to 92 at 42 m the line passes 93.5 at 38 m and 92.75 at 44 m, so it
    is still 0.5 m under the first foot and over no other.
    """
    probed = replace(
        FLAT,
        probes=(
            Probe(38.0, 6.0, refused=True),
            Probe(42.0, 8.0, refused=True),
            Probe(44.0, 6.5, refused=False),
        ),
    )
    as_found = take_in(probed, strip(1, (28.0, 95.0), (34.0, 95.0)))
    assert (42.0, 92.0) in line(as_found)
    assert [one.offset_m for one in as_found.lowered] == [42.0]


def test_close_to_rock_that_was_seen_a_probe_says_no_more():
    """Oracle: by hand; 0.3 m from the level found at 95.0 a rod went down to 94.0."""
    probed = replace(FLAT, probes=(Probe(34.3, 6.0, refused=True),))
    as_found = take_in(probed, strip(1, (28.0, 95.0), (34.0, 95.0)))
    assert as_found.lowered == ()
    assert [one.level_m for one in as_found.over_found] == [94.0]


def test_a_steep_rock_is_no_contradiction_of_a_probe_beside_it():
    """Oracle: the profile falls 0.5 m a metre; 0.4 m on, the rod ends on it, 0.2 m lower."""
    probed = replace(FLAT, probes=(Probe(31.4, 5.7, refused=True),))
    as_found = take_in(probed, strip(1, (28.0, 96.0), (31.0, 94.5), (34.0, 93.0)))
    assert (as_found.lowered, as_found.over_found) == ((), ())


@pytest.mark.parametrize(
    ("one", "words"),
    [
        (
            FoundLevel(90.0, 95.0, 1),
            "rock found at 90.00 m: The ground is surveyed from 0 to 80 m.",
        ),
        (FoundLevel(30.0, 100.1, 1), "stands above the ground at 100.00 m"),
    ],
)
def test_a_level_that_cannot_be_so_is_refused_in_words(one, words):
    with pytest.raises(Refused, match=r"rock found at") as refusal:
        take_in(FLAT, [one])
    assert words in refusal.value.sentence()


def test_in_an_estimate_levels_found_are_pits():
    """Oracle: handbook 4.3; at a level found the line keeps to it within a few errors of 0.05 m."""
    survey = replace(
        FLAT,
        rock_line=None,
        rock=(
            RockTest(0.0, 0.5, "bore", met_rock=True),
            RockTest(80.0, 0.5, "bore", met_rock=True),
        ),
    )
    as_found = take_in(survey, strip(1, (28.0, 95.2), (34.0, 94.0)))
    before = estimate_rock(survey, seed=1, draws=2000)
    after = estimate_rock(as_found.pack, seed=1, draws=2000)
    assert [(one.offset_m, one.method) for one in as_found.pack.rock[2:]] == [
        (28.0, "pit"),
        (34.0, "pit"),
    ]
    at = list(after.offset_m).index(34.0)
    assert after.level_m[at] == pytest.approx(94.0, abs=0.1)
    # Beside the pits the range is narrower than it was before anything was dug.
    assert after.sd_m[at] < 0.1 < before.sd_m[list(before.offset_m).index(34.0)]


RANGES = tuple(
    DrawnRange(one.offset_m, one.level_m - 0.6, one.level_m, one.level_m + 0.3)
    for one in FLAT.rock_line
)


def test_far_from_any_level_found_the_draws_have_the_recorded_range():
    """Oracle: the 10 % and 90 % points are those recorded, 0.6 m deeper and 0.3 m higher; their
    standard error at 20,000 draws is 0.6 / 1.2816 x 1.71 / sqrt(20000) = 0.006 m.
    """
    lines = draw_around(take_in(FLAT, ()), RANGES, draws=20000, seed=3)
    at = list(lines.offset_m).index(40.0)
    low, half, high = np.quantile(lines.draws_m[:, at], (0.1, 0.5, 0.9))
    assert (low, half, high) == pytest.approx((94.4, 95.0, 95.3), abs=0.02)


def test_where_rock_was_found_nothing_varies_but_the_level_of_a_pit():
    """Oracle: handbook 4.2, one level of error 0.05 m in a field of sill s^2 leaves
    s^2 e^2 / (s^2 + e^2) with s = 0.45 / 1.2816 on average, which is 0.0495 m.
    """
    lines = draw_around(take_in(FLAT, strip(1, (30.0, 94.0))), RANGES, draws=20000, seed=3)
    at = list(lines.offset_m).index(30.0)
    column = lines.draws_m[:, at]
    assert float(np.median(column)) == pytest.approx(94.0, abs=0.01)
    deep, shallow = 94.0 - np.quantile(column, 0.1), np.quantile(column, 0.9) - 94.0
    # One field, two sides: 2/3 and 4/3 of the mean, as 0.6 and 0.3 are.
    assert (deep + shallow) / 2 / 1.2816 == pytest.approx(0.0495, abs=0.003)


def test_draws_keep_under_the_foot_to_which_the_line_was_lowered_and_under_the_ground():
    probed = replace(FLAT, probes=(Probe(40.0, 7.0, refused=True),))
    as_found = take_in(probed, strip(1, (20.0, 95.5), (26.0, 95.0)))
    lines = draw_around(as_found, RANGES, draws=2000, seed=3)
    at = list(lines.offset_m).index(40.0)
    assert lines.draws_m[:, at].max() <= 93.0 + 1e-6
    assert lines.draws_m.max() <= 100.0
    again = draw_around(as_found, RANGES, draws=2000, seed=3)
    assert (lines.draws_m == again.draws_m).all()


def test_a_range_upside_down_and_a_line_without_range_are_no_calls():
    with pytest.raises(ValueError, match="upside down at 10 m"):
        DrawnRange(10.0, 95.0, 94.0, 96.0)
    with pytest.raises(ValueError, match="recorded range"):
        draw_around(take_in(FLAT, ()), (), draws=10, seed=1)
