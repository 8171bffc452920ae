"""Figures as people type them."""

from __future__ import annotations

import pytest
from django.core.exceptions import ValidationError
from hypothesis import given
from hypothesis import strategies as st

from structures.web.figure_field import FigureField


@pytest.mark.parametrize(
    ("typed", "read"),
    [
        ("0.9", 0.9),
        (" 0,9 ", 0.9),
        ("0,125", 0.125),
        ("1e-8", 1e-8),
        ("-3", -3.0),
        (".5", 0.5),
        ("\u0966.\u096f", 0.9),
        ("\u0662,\u0665", 2.5),
    ],
)
def test_a_figure_is_understood(typed, read):
    """Oracle: the same figure in our digits."""
    assert FigureField().clean(typed) == read


@pytest.mark.parametrize(
    ("typed", "sentence"),
    [
        ("1,500", "thousands or a decimal"),
        ("1,500,000", "no number"),
        ("1.5 m", "no number"),
        ("nan", "no number"),
        ("1e999", "no number"),
        ("1_0", "no number"),
        ("", "required"),
    ],
)
def test_what_can_be_read_in_two_ways_or_none_is_asked_again(typed, sentence):
    with pytest.raises(ValidationError, match=sentence):
        FigureField().clean(typed)


@given(st.floats(-1e6, 1e6))
def test_a_number_is_read_back_as_it_is_written(number):
    assert FigureField().clean(repr(number)) == number
