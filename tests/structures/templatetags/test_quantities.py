"""Figures on a page are those of the drawing and the command: rounded, never cut off."""

from __future__ import annotations

import pytest

from structures.templatetags.quantities import figure, small


@pytest.mark.parametrize(
    ("value", "places", "printed"),
    [
        (66.9999999999999, 2, "67.00"),  # a sum of floats a hair under its value
        (8.878048780487918, 2, "8.88"),
        (4.339999999999998, 2, "4.34"),
        (1404.6, 0, "1,405"),
        (-0.001, 2, "0.00"),
        (3, 2, "3.00"),
        (None, 2, "not known"),
    ],
)
def test_a_figure_is_rounded_to_its_places(value, places, printed):
    """Oracle: rounding by hand."""
    assert figure(value, places) == printed


def test_a_small_figure_keeps_what_would_print_as_nothing():
    """Oracle: rounding by hand."""
    assert (small(0.15666), small(6.744), small(None)) == ("0.1567", "6.74", "not known")
