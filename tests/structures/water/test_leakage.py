"""Water that passes a wall."""

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.wall.cutoff import cut
from structures.wall.section import make_section
from structures.water.leakage import (
    clay_leakage_m3_per_day,
    face_of,
    film_hole_m3_per_day,
    most_clay_leakage_m3_per_day,
    slot_flow,
    slot_path_m,
    surface_seepage_ratio,
)
from structures.water.section_area import Bands
from tests.structures.wall.examples import example
from tests.structures.water.oracle import WATER, bands, printed, steps

DAY = 86400.0  # seconds, exact
CLAY = {"thickness_m": 0.9, "clay_k_m_per_day": 1e-8 * DAY}  # handbook 12
LEVELS = st.integers(0, 2000).map(lambda level: level / 100.0)


def handbook_form(band, upstream, downstream):
    """Handbook 9.3 on thin strips: full head under the lower level, the rest over it."""
    lower, upper, width = steps(band)
    below = np.clip(np.minimum(downstream, upper) - lower, 0.0, None)
    bottom = np.clip(np.maximum(lower, downstream), None, upstream)
    top = np.clip(np.minimum(upper, upstream), bottom, None)
    over = ((upstream - bottom) ** 2 - (upstream - top) ** 2) / 2.0
    return (((upstream - downstream) * below + over) * width).sum()


def test_leakage_at_the_full_head():
    """Oracle: check value 9.b, an upper bound."""
    case = WATER["9.b"]
    most = most_clay_leakage_m3_per_day(
        case["area_m2"], case["head_m"], case["thickness_m"], case["k_m_per_day"]
    )
    assert 1000.0 * most == printed(case["litre_per_day"])


def test_leakage_through_an_upright_face():
    """Oracle: hand sum; width 5, water at 8 and 3: 5 x 5 x 3 below and 5 x 5 x 5/2 over it."""
    face = Bands([5.0], [0.0], [0.0], [10.0], [10.0])
    flow = clay_leakage_m3_per_day(face, upstream_m=8.0, downstream_m=3.0, **CLAY)
    assert flow == pytest.approx(8.64e-4 / 0.9 * (75.0 + 62.5))


def test_a_dry_foot_counts_the_wetted_face_alone():
    """Oracle: hand sum; the whole column of 8 over its foot, 5 x 8 x 8/2."""
    face = Bands([5.0], [0.0], [0.0], [10.0], [10.0])
    flow = clay_leakage_m3_per_day(face, upstream_m=8.0, downstream_m=-4.0, **CLAY)
    assert flow == pytest.approx(8.64e-4 / 0.9 * 160.0)


@settings(max_examples=40, deadline=None)
@given(bands(), LEVELS, LEVELS)
def test_leakage_is_that_of_the_handbook(band, first_m, second_m):
    """Oracle: handbook 9.3 as written, on strips across the face."""
    downstream, upstream = sorted((first_m, second_m))
    flow = clay_leakage_m3_per_day(
        band, upstream_m=upstream, downstream_m=downstream, thickness_m=1.0, clay_k_m_per_day=1.0
    )
    assert flow == pytest.approx(handbook_form(band, upstream, downstream), abs=1e-4)


def test_leakage_of_example_a():
    """Oracle: handbook 9.3 on strips, water at the crest 99.70 and at 98.00; under the bound."""
    cutoff = cut(make_section(*example("A").parts))
    face = face_of(cutoff)
    assert face.area_below_m2(1000.0) == pytest.approx(155.333333, abs=5e-7)  # check value 5.a
    flow = clay_leakage_m3_per_day(face, upstream_m=99.70, downstream_m=98.00, **CLAY)
    assert flow == pytest.approx(8.64e-4 / 0.9 * handbook_form(face, 99.70, 98.00), rel=1e-6)
    assert flow < most_clay_leakage_m3_per_day(155.333333, 1.7, 0.9, 8.64e-4)


def test_no_head_no_leakage():
    """Oracle: equal levels."""
    face = Bands([5.0], [0.0], [0.0], [10.0], [10.0])
    assert clay_leakage_m3_per_day(face, upstream_m=3.0, downstream_m=3.0, **CLAY) == 0.0


def test_face_of_many_draws_is_a_wrong_call():
    case = example("A")
    ground, toes, offsets, levels, wall = case.parts
    cutoff = cut(make_section(ground, toes, offsets, [levels, levels], wall))
    with pytest.raises(ValueError, match="one rock line"):
        face_of(cutoff)


@pytest.mark.parametrize(("share", "ratio"), WATER["9.c"])
def test_seepage_under_a_wall_with_surface_water(share, ratio):
    """Oracle: check value 9.c."""
    assert surface_seepage_ratio(8.0, share * 8.0) == printed(ratio)


@given(st.floats(1e-6, 1.0 - 1e-6))
def test_seepage_under_a_wall_in_many_digits(share):
    """Oracle: complete elliptic integrals of mpmath in 40 digits."""
    with mpmath.workdps(40):
        parameter = mpmath.sin(mpmath.pi * mpmath.mpf(share) / 2) ** 2
        wanted = float(mpmath.ellipk(1 - parameter) / (2 * mpmath.ellipk(parameter)))
    assert surface_seepage_ratio(1.0, share) == pytest.approx(wanted, rel=1e-9)


@pytest.mark.parametrize(("share", "path"), WATER["9.d"])
def test_extra_path_of_a_slot(share, path):
    """Oracle: check value 9.d; the path goes with the layer's thickness."""
    assert slot_path_m(1.0, share) == printed(path)
    assert slot_path_m(7.0, 7.0 * share) / 7.0 == printed(path)


@pytest.mark.parametrize(
    ("closed", "reach", "share"),
    [
        (WATER[key]["closed"], reach, share)
        for key in ("9.e", "9.f")
        for reach, share in WATER[key]["share"]
    ],
)
def test_share_that_still_passes_a_slot(closed, reach, share):
    """Oracle: check values 9.e and 9.f; L/T stands beside the share (handbook 9.5)."""
    flow = slot_flow(6.0, 6.0 * closed, 6.0 * reach)
    assert flow.passing_share == printed(share)
    assert flow.reach_over_layer == pytest.approx(reach)


def test_no_wall_no_extra_path():
    """Oracle: sec 0 is 1."""
    assert slot_flow(6.0, 0.0, 30.0).passing_share == 1.0


def test_hole_in_the_film():
    """Oracle: check value 9.g, sand on both sides and sand against clay."""
    case = WATER["9.g"]
    sand, clay = case["sand_m_per_s"] * DAY, case["clay_m_per_s"] * DAY
    both = 1000.0 * film_hole_m3_per_day(case["diameter_m"], case["head_m"], sand, sand)
    one = 1000.0 * film_hole_m3_per_day(case["diameter_m"], case["head_m"], sand, clay)
    assert both == printed(case["sand_both_litre_per_day"])
    assert one == printed(case["sand_and_clay_litre_per_day"])


@pytest.mark.parametrize("closed", [6.0, 7.0, -0.1])
def test_a_slot_is_open(closed):
    with pytest.raises(ValueError, match=r"open_m|closed_m"):
        slot_path_m(6.0, closed)


@pytest.mark.parametrize("depth", [0.0, 6.0, 7.0])
def test_a_wall_that_stops_short_ends_inside_the_layer(depth):
    with pytest.raises(ValueError, match=r"open_m|wall_depth_m"):
        surface_seepage_ratio(6.0, depth)
