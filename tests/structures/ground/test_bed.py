"""The level of the bed on the wall line."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.ground.bed import bed_level_m
from tests.structures.wall.examples import example


def test_the_bed_of_example_b():
    """Oracle: check value 1.e, 249.70 at x = 26."""
    case = example("B")
    x, z = zip(*((one.offset_m, one.level_m) for one in case.ground), strict=True)
    assert bed_level_m(x, z, case.toes.left_m, case.toes.right_m) == 249.70


def test_a_toe_between_points_counts_itself():
    """Oracle: by hand; a bank that falls past the toe is 100.50 m there, halfway."""
    assert bed_level_m([0.0, 10.0, 20.0], [101.0, 100.0, 103.0], 0.0, 5.0) == 100.5
    assert bed_level_m([0.0, 10.0, 20.0], [101.0, 100.0, 103.0], 5.0, 15.0) == 100.0


@given(
    st.lists(st.floats(90.0, 110.0), min_size=2, max_size=12),
    st.tuples(st.floats(0.0, 1.0), st.floats(0.0, 1.0)),
)
def test_no_ground_between_the_toes_lies_lower(levels, shares):
    """Law: the least of a finely walked line, which it never exceeds."""
    x = np.arange(len(levels), dtype=float)
    left, right = sorted(share * x[-1] for share in shares)
    walked = np.interp(np.linspace(left, right, 501), x, levels)
    found = bed_level_m(x, levels, left, right)
    assert found <= walked.min() + 1e-9
    assert found >= min(levels)


@pytest.mark.parametrize("toes", [(5.0, 4.0), (-1.0, 4.0), (3.0, 21.0)])
def test_toes_outside_the_ground_are_a_wrong_call(toes):
    with pytest.raises(ValueError, match="toes at"):
        bed_level_m([0.0, 20.0], [101.0, 100.0], *toes)
