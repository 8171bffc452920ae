"""The rock line of a survey: what is firm, what only bounds, where nothing is said."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.stats import norm

from structures.ground.gaussian import Covariance, Observations, predict
from structures.ground.refraction import RefractionReading
from structures.ground.rock import estimate_rock
from structures.ground.sounding_refusals import Refusal
from structures.intake.pack import (
    GroundPoint,
    Probe,
    RockLinePoint,
    RockTest,
    Site,
    SurveyPack,
    Toes,
)
from structures.intake.practice import Practice

PACK = SurveyPack(
    Site("T-1"),
    (
        GroundPoint(0.0, 103.0),
        GroundPoint(20.0, 100.0),
        GroundPoint(40.0, 100.0),
        GroundPoint(60.0, 103.0),
    ),
    Toes(20.0, 40.0),
    rock=(
        RockTest(0.0, 1.0, "pit", True),
        RockTest(25.0, 6.0, "bore", True),
        RockTest(60.0, 1.5, "bore", True),
    ),
)
DRAWS = 2000


def line_of(pack, **others):
    return estimate_rock(pack, draws=DRAWS, seed=7, **others)


def codes(line):
    return [one.code for one in line.cautions]


def sounding(at, depth, *, sd=0.4, low=None, high=None):
    return RefractionReading(
        at,
        "S1",
        (),
        depth,
        depth - 1 if low is None else low,
        depth + 1 if high is None else high,
        sd,
    )


def test_the_line_runs_between_the_outermost_levels_only():
    inner = replace(PACK, rock=PACK.rock[:2], probes=(Probe(50.0, 3.0, True),))
    line = line_of(inner)
    assert (line.offset_m[0], line.offset_m[-1]) == (0.0, 25.0)


def test_the_line_has_every_ground_point_toe_test_and_metre():
    pack = replace(PACK, toes=Toes(20.3, 39.7), probes=(Probe(33.3, 2.0, True),))
    x = set(line_of(pack).offset_m.tolist())
    assert x == {float(m) for m in range(61)} | {20.3, 39.7, 33.3}


@pytest.mark.parametrize("kept", [(), PACK.rock[1:2]])
def test_fewer_than_two_levels_give_no_line(kept):
    line = line_of(
        replace(PACK, rock=kept, probes=(Probe(30.0, 4.0, True), Probe(10.0, 2.0, True)))
    )
    assert (line.source, line.offset_m.size) == ("none", 0)
    assert [(one.code, one.level) for one in line.cautions] == [("rock-not-known", "block")]
    assert len(line.evidence) == 2 + len(kept)


@pytest.mark.parametrize(("kept", "said"), [((), "nowhere"), (PACK.rock[1:2] * 2, "at 1 place,")])
def test_what_lacks_is_counted_in_places(kept, said):
    """Two tests of one place give no line between places."""
    (found,) = line_of(replace(PACK, rock=kept)).cautions
    assert said in found.text


def test_printed_points_without_bounds_are_those_of_the_normal_law():
    """Oracle: 1.281552 sd to each side (handbook 8.9), the draws within their own error."""
    line = line_of(PACK)
    at = int(np.flatnonzero(line.offset_m == 33.0)[0])
    half = (line.high_m[at] - line.low_m[at]) / 2
    assert half == pytest.approx(1.2815515655 * line.sd_m[at], rel=0.05)
    assert line.level_m[at] == pytest.approx(
        line.draws_m[:, at].mean(), abs=4 * line.sd_m[at] / DRAWS**0.5
    )


def test_doubt_under_shallow_ground_is_that_of_the_cut_normal_law():
    """Oracle: numerical integration of min(z, ground) over the normal law of the prediction."""
    shallow = replace(PACK, rock=tuple(replace(test, depth_m=0.4) for test in PACK.rock))
    line = line_of(shallow)
    i = int(np.flatnonzero(line.offset_m == 33.0)[0])
    ground = 100.0
    seen = Observations([0.0, 25.0, 60.0], [102.6, 99.6, 102.6], [0.05, 0.10, 0.10])
    found = predict(seen, Covariance(1.0, 20.0), [33.0])
    z = norm(found.mean_m[0], found.sd_m[0]).ppf((np.arange(2_000_000) + 0.5) / 2_000_000)
    assert found.mean_m[0] + 3 * found.sd_m[0] > ground
    assert line.sd_m[i] == pytest.approx(np.minimum(z, ground).std(), rel=1e-4)
    assert line.level_m[i] == pytest.approx(min(found.mean_m[0], ground), rel=1e-9)
    assert line.draws_m[:, i].std() == pytest.approx(line.sd_m[i], rel=0.08)


def test_a_probe_that_stops_far_above_the_line_changes_nothing():
    """Oracle: check value 4.h, 1e-6, on the whole line."""
    without, probed = line_of(PACK), line_of(replace(PACK, probes=(Probe(25.0, 0.2, True),)))
    assert probed.level_m == pytest.approx(without.level_m, abs=1e-6)
    assert probed.low_m == pytest.approx(without.low_m, abs=1e-6)
    assert probed.sd_m == pytest.approx(without.sd_m, abs=1e-6)


def test_a_bore_is_met_within_its_error():
    line = line_of(PACK)
    at = int(np.flatnonzero(line.offset_m == 25.0)[0])
    assert line.level_m[at] == pytest.approx(94.0, abs=0.1)
    assert line.sd_m[at] <= 0.10 + 1e-3  # handbook 4.3, core bore


@settings(max_examples=15)
@given(st.floats(26.0, 59.0), st.floats(0.5, 14.0), st.booleans())
def test_draws_keep_every_probe_and_the_ground(at, depth, refused):
    """Law: handbook 4.4; a probe is a bound from above whether it refused or not."""
    pack = replace(PACK, probes=(Probe(at, depth, refused),))
    line = line_of(pack)
    ground = np.interp(line.offset_m, [0, 20, 40, 60], [103, 100, 100, 103])
    assert (line.draws_m <= ground + 1e-9).all()
    i = int(np.flatnonzero(line.offset_m == at)[0])
    assert (line.draws_m[:, i] <= ground[i] - depth + 1e-9).all()


@pytest.mark.parametrize(
    "bound",
    [
        {"probes": (Probe(45.0, 7.0, True),)},
        {"rock": (*PACK.rock, RockTest(45.0, 7.0, "bore", False))},
        {"rock": (*PACK.rock, RockTest(45.0, 7.0, "bore", True, "weathered"))},
    ],
)
def test_probe_soil_hole_and_weathered_rock_bound_alike(bound):
    """Law: handbook 4.4; the three say the same of sheet rock."""
    line = line_of(replace(PACK, **bound))
    i = int(np.flatnonzero(line.offset_m == 45.0)[0])
    assert line.level_m[i] < 100.75 - 7.0
    assert line.draws_m[:, i].max() <= 100.75 - 7.0 + 1e-9


def test_the_same_seed_gives_the_same_digits():
    pack = replace(PACK, probes=(Probe(45.0, 7.0, True),))
    one, two = line_of(pack), line_of(pack)
    assert (one.draws_m == two.draws_m).all()
    assert (one.level_m == two.level_m).all()
    other = estimate_rock(pack, draws=DRAWS, seed=8)
    assert (one.draws_m != other.draws_m).any()


def test_defaults_are_said_and_follow_the_mean_depth():
    """Oracle: handbook 4.6: sill (0.25 x mean depth)^2, at least 1 m2; depths 1, 6 and 1.5 m."""
    assert "sill 1.00 m² " in next(
        one.text for one in line_of(PACK).cautions if one.code == "rock-default-spread"
    )
    deep = replace(PACK, rock=tuple(replace(test, depth_m=8.0) for test in PACK.rock))
    assert "sill 4.00 m² " in next(
        one.text for one in line_of(deep).cautions if one.code == "rock-default-spread"
    )


def test_fifteen_observations_are_fitted():
    many = tuple(RockTest(4.0 * i, 2.0 + (i % 5), "bore", True) for i in range(16))
    said = codes(line_of(replace(PACK, rock=many)))
    assert "rock-spread-fitted" in said
    assert "rock-default-spread" not in said


def test_a_sounding_counts_with_the_error_of_the_handbook():
    """Oracle: handbook 4.3 tied max(0.75, 15 %), 2.11 untied max(1.5, 25 %), or its own sd."""
    tied = line_of(PACK, soundings=[sounding(45.0, 8.0)])
    assert next(e.sd_m for e in tied.evidence if e.kind == "sounding") == pytest.approx(1.2)
    wide = line_of(PACK, soundings=[sounding(45.0, 8.0, sd=2.5)])
    assert next(e.sd_m for e in wide.evidence if e.kind == "sounding") == 2.5
    alone = line_of(replace(PACK, rock=()), soundings=[sounding(5.0, 3.0), sounding(45.0, 8.0)])
    assert [e.sd_m for e in alone.evidence] == [1.5, 2.0]
    assert codes(alone)[0] == "rock-untied"
    assert "rock-untied" not in codes(tied)


@pytest.mark.parametrize(("below_m", "tied"), [(0.4, True), (0.6, False)])
def test_a_thick_weathered_layer_unties_soundings(below_m, tied):
    """Oracle: handbook 2.11, 0.5 m."""
    weathered = RockTest(25.2, 6.0 - below_m, "bore", True, "weathered")
    line = line_of(replace(PACK, rock=(*PACK.rock, weathered)), soundings=[sounding(45.0, 4.0)])
    assert ("rock-untied" not in codes(line)) == tied


def test_a_refused_sounding_is_named_and_enters_nothing():
    refused = RefractionReading(30.0, "S9", refusal=Refusal("no-rock", "the curve shows none."))
    line = line_of(PACK, soundings=[refused])
    assert [e.kind for e in line.evidence] == ["pit", "bore", "bore"]
    assert "Sounding S9 gives no depth of rock: the curve shows none." in [
        one.text for one in line.cautions
    ]


def test_a_settled_line_is_used_as_given():
    settled = (RockLinePoint(0.0, 102.0), RockLinePoint(30.0, 94.0), RockLinePoint(60.0, 101.0))
    pack = replace(PACK, rock_line=settled, probes=(Probe(30.0, 7.0, True), Probe(15.0, 1.0, True)))
    line = line_of(pack, soundings=[sounding(30.0, 9.0)])
    assert line.source == "given"
    assert line.offset_m.tolist() == [0.0, 30.0, 60.0]
    assert line.level_m.tolist() == [102.0, 94.0, 101.0]
    assert (line.sd_m, line.low_m, line.draws_m) == (None, None, None)
    # At 30 m the probe went down to 93 m, one metre under the line; at 15 m it stopped above it.
    assert codes(line) == ["rock-line-above-test", "sounding-differs"]


def test_a_sounding_that_holds_the_settled_line_or_stands_beside_it_says_nothing():
    settled = (RockLinePoint(10.0, 98.0), RockLinePoint(50.0, 98.0))
    read = [sounding(30.0, 2.4), sounding(5.0, 9.0)]
    assert codes(line_of(replace(PACK, rock_line=settled), soundings=read)) == []


def test_a_probe_far_below_a_bore_beside_it_is_told():
    pack = replace(PACK, probes=(Probe(26.0, 9.5, False),))
    assert "rock-bounds-contradict" in codes(line_of(pack))


def test_long_stretches_without_a_level_are_told():
    said = [one.text for one in line_of(PACK).cautions if one.code == "rock-levels-far-apart"]
    assert [text[:31] for text in said] == [
        "Between 0.00 and 25.00 m no tes",
        "Between 25.00 and 60.00 m no te",
    ]


def test_very_many_bounds_keep_the_deepest_of_each_two_metres():
    probes = tuple(Probe(0.9 * i + 1.0, 0.5 + (i % 3), True) for i in range(60))
    line = line_of(replace(PACK, probes=probes))
    assert "rock-bounds-thinned" in codes(line)


def test_errors_of_tests_are_those_that_are_set():
    """Oracle: handbook 4.3 and 4.4; an outcrop keeps its 0.05 m."""
    pack = replace(PACK, rock=(*PACK.rock[:2], RockTest(60.0, 0.0, "outcrop", True)))
    practice = Practice(se_pit_m=0.3, se_core_m=0.4, se_sounding_m=2.0, se_sounding_share=0.5)
    line = line_of(pack, practice=practice, soundings=[sounding(35.0, 6.0)])
    assert {one.kind: one.sd_m for one in line.evidence} == {
        "pit": 0.3,
        "bore": 0.4,
        "outcrop": 0.05,
        "sounding": 3.0,
    }
    # An untied sounding is never surer than a tied one is said to be.
    alone = replace(PACK, rock=(), probes=())
    both = [sounding(20.0, 4.0), sounding(40.0, 4.0)]
    untied = line_of(alone, practice=practice, soundings=both)
    assert [one.sd_m for one in untied.evidence] == [2.0, 2.0]


def test_range_and_least_sill_are_those_that_are_set():
    """Oracle: handbook 4.2 with 4.6, predicted with the covariance that is set."""
    practice = Practice(rock_range_m=40.0, rock_least_sill_m2=9.0)
    # Rock so deep that the ground cuts nothing off; the mean depth alone would give a sill of 4 m2.
    deep = replace(PACK, rock=tuple(replace(test, depth_m=8.0) for test in PACK.rock))
    line = line_of(deep, practice=practice)
    seen = Observations([0.0, 25.0, 60.0], [95.0, 92.0, 95.0], [0.05, 0.10, 0.10])
    wanted = predict(seen, Covariance(9.0, 40.0), [33.0])
    at = int(np.flatnonzero(line.offset_m == 33.0)[0])
    assert line.level_m[at] == pytest.approx(wanted.mean_m[0], abs=1e-9)
    assert line.sd_m[at] == pytest.approx(wanted.sd_m[0], rel=1e-5)
