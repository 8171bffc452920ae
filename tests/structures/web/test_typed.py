"""Figures as people type them."""

from __future__ import annotations

import pytest
from django.core.exceptions import ValidationError
from hypothesis import given
from hypothesis import strategies as st

from structures.web.typed import NumberField


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
    assert NumberField(label="Value", required=True).clean(typed) == read


@pytest.mark.parametrize(
    ("typed", "sentence"),
    [
        ("1,500", "no thousands mark"),
        ("1,500,000", "no thousands mark"),
        ("1.5 m", "words behind the number"),
        ("nan", "not a number"),
        ("1e999", "too large"),
        ("1_0", "words behind the number"),
        ("", "required"),
    ],
)
def test_what_can_be_read_in_two_ways_or_none_is_asked_again(typed, sentence):
    with pytest.raises(ValidationError, match=sentence):
        NumberField(label="Value", required=True).clean(typed)


@given(st.floats(-1e6, 1e6))
def test_a_number_is_read_back_as_it_is_written(number):
    assert NumberField(label="Value", required=True).clean(repr(number)) == number


def test_a_number_outside_its_range_is_refused_and_a_blank_one_is_not_known():
    """Law: unknown is never zero."""
    field = NumberField(label="Thickness", low=0.6, high=1.5)
    assert field.clean("") is None
    assert field.clean("0,9") == 0.9
    with pytest.raises(ValidationError):
        field.clean("1.6")
