"""Trench volumes: areas, prismoids, lifts, backfill, surplus."""

from fractions import Fraction
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.takeoff.trench import (
    backfill_m3,
    excavation_by_lift_m3,
    lift_limits_m,
    prismoid_m3,
    surplus_m3,
    trench_area_m2,
    volume_below_m3,
)
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from tests.structures.wall.exact import exact_wall
from tests.structures.wall.examples import ORACLE, cases, example, expected, printed, rock_bar


def lifts_of(case):
    cutoff = cut(make_section(*case.parts))
    limits = lift_limits_m(float(cutoff.greatest_depth_m.max()), case.wall.lift_m)
    return limits, excavation_by_lift_m3(cutoff, limits)[0]


def test_area_and_bands_across_the_line():
    """Oracle: check value 5.c, D = 4.15, B = 1.2, m = 1.5."""
    below = [float(trench_area_m2(max(4.15 - d, 0.0), 1.5, 1.2)) for d in (0.0, 1.5, 3.0, 4.5)]
    assert below[0] == printed("30.813750")
    bands = [a - b for a, b in pairwise(below)]
    assert bands == [printed("17.100000"), printed("10.350000"), printed("3.363750")]


def test_prismoid_against_the_end_area_rule():
    """Oracle: check value 8.a; the end-area rule overstates by m (D1 - D2)^2 L / 6 (8.1)."""
    volume = float(prismoid_m3(30.0, 1.2, (2.0, 5.0), (1.5, 1.5)))
    ends = trench_area_m2([2.0, 5.0], 1.5, 1.2)
    assert volume == printed("711.0000")
    assert 30.0 * float(ends.mean()) == printed("778.5000")
    assert 30.0 * float(ends.mean()) - volume == pytest.approx(1.5 * (2.0 - 5.0) ** 2 * 30.0 / 6)


@given(*(st.integers(0, 1200) for _ in range(2)), *(st.integers(10, 30) for _ in range(2)))
def test_prismoid_is_exact_for_depth_and_slope_that_both_vary(d1, d2, s1, s2):
    """Oracle: integral of B D + m D^2 term by term in fractions, D and m straight."""
    p, q = Fraction(d1, 100), Fraction(d2, 100) - Fraction(d1, 100)
    m, n = Fraction(s1, 10), Fraction(s2, 10) - Fraction(s1, 10)
    floor, length = Fraction(6, 5), Fraction(7)
    # (m + n t)(p + q t)^2 = sum of coefficients of t^0 .. t^3
    powers = (m * p * p, n * p * p + 2 * m * p * q, 2 * n * p * q + m * q * q, n * q * q)
    integral = floor * (p + q / 2) + sum(c / (k + 1) for k, c in enumerate(powers))
    volume = prismoid_m3(7.0, 1.2, (d1 / 100, d2 / 100), (s1 / 10, s2 / 10))
    assert float(volume) == pytest.approx(float(length * integral), rel=1e-12, abs=1e-12)


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_lifts_of_the_worked_examples(name):
    """Oracle: handbook 13."""
    limits, lifts = lifts_of(example(name))
    wanted = ORACLE["examples"][name]["lifts"]
    assert limits.tolist() == [wanted[0]["from_m"], *(lift["to_m"] for lift in wanted)]
    assert lifts.tolist() == [printed(lift["quantity"]) for lift in wanted]
    assert lifts.sum() == printed(expected(name)["excavation_m3"])


def test_excavation_of_the_variants_of_example_a():
    """Oracle: check values 5.e and 5.g."""
    case = example("A")
    _, lower = lifts_of(case.with_rock(z - 0.5 for z in case.rock_z))
    assert lower.sum() == printed(expected("5.e")["excavation_m3"])
    _, barred = lifts_of(rock_bar())
    assert barred.sum() == printed(expected("5.g")["excavation_m3"])


@settings(max_examples=50)
@given(cases())
def test_every_lift_agrees_with_exact_fractions(case):
    """Oracle: the slow route in exact fractions (tests/structures/wall/exact.py)."""
    limits, lifts = lifts_of(case)
    exact = [float(volume) for volume in exact_wall(case).lifts_m3]
    padded = np.zeros(max(len(exact), lifts.size))
    padded[: len(exact)] = exact
    assert lifts == pytest.approx(padded[: lifts.size], rel=1e-9, abs=1e-7)
    assert padded[lifts.size :] == pytest.approx(0.0, abs=1e-7)
    assert limits[:2].tolist() == [0.0, case.wall.lift_m]


@settings(max_examples=50)
@given(cases())
def test_lifts_add_up_to_the_excavation(case):
    """Law: handbook 5.11; no lift is negative."""
    cutoff = cut(make_section(*case.parts))
    _, lifts = lifts_of(case)
    assert lifts.sum() == pytest.approx(volume_below_m3(cutoff, 0.0).sum(), rel=1e-12, abs=1e-12)
    assert (lifts >= -1e-9).all()


@settings(max_examples=50)
@given(cases(), st.lists(st.integers(0, 300), min_size=9, max_size=9))
def test_lower_rock_never_means_less_excavation(case, drops):
    """Law: trenches to lower rock hold the trenches to higher rock."""
    lower = case.with_rock(z - drop / 100 for z, drop in zip(case.rock_z, drops, strict=False))
    assert lifts_of(lower)[1].sum() >= lifts_of(case)[1].sum() - 1e-6


@settings(max_examples=50)
@given(cases())
def test_a_mirrored_section_has_the_same_lifts(case):
    """Law (check value 5.f)."""
    assert lifts_of(case.mirrored())[1] == pytest.approx(lifts_of(case)[1], rel=1e-9, abs=1e-7)


@pytest.mark.parametrize(
    ("deepest_m", "lift_m", "limits"),
    [
        (0.0, 1.5, [0.0, 1.5]),
        (4.5, 1.5, [0.0, 1.5, 3.0, 4.5]),
        (4.500000000001, 1.5, [0.0, 1.5, 3.0, 4.5]),
        (4.51, 1.5, [0.0, 1.5, 3.0, 4.5, 6.0]),
        (3.7, 1.2, [0.0, 1.2, 2.4, 3.6, 4.8]),
    ],
)
def test_limits_of_lifts(deepest_m, lift_m, limits):
    """Oracle: hand; multiples of the lift from the ground down, written as a person would."""
    assert lift_limits_m(deepest_m, lift_m).tolist() == limits


def test_backfill_and_surplus_of_example_a():
    """Oracle: handbook 13."""
    wanted = expected("A")
    assert backfill_m3(1430.518519, 147.333333, 0.9) == printed(wanted["backfill_m3"])
    assert surplus_m3(139.8, 1.25) == printed(wanted["surplus_m3"])
