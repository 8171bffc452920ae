"""Angles as people write them."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.ground.angle import read_angle, read_position


@pytest.mark.parametrize(
    ("text", "axis", "degrees"),
    [
        ("15.7237", "latitude", 15.7237),
        ("-67.2", "longitude", -67.2),
        ("15°43'25.5\" N", "latitude", 15 + 43 / 60 + 25.5 / 3600),
        ("N 15 43 25.5", "latitude", 15 + 43 / 60 + 25.5 / 3600),
        ("15 43.5 S", "latitude", -(15 + 43.5 / 60)),
        ("67:26:32 w", "longitude", -(67 + 26 / 60 + 32 / 3600)),
        ("15.5 S", "latitude", -15.5),
    ],
)
def test_an_angle_reads_as_degrees(text, axis, degrees):
    """Oracle: sixty minutes a degree, sixty seconds a minute."""
    assert read_angle(text, axis) == pytest.approx(degrees, abs=1e-12)


@pytest.mark.parametrize(
    ("text", "axis"),
    [
        ("N 15", "longitude"),
        ("E 15", "latitude"),
        ("15 61 00", "latitude"),
        ("15 10 60", "latitude"),
        ("-15 S", "latitude"),
        ("fifteen", "latitude"),
        ("1725410.2", "latitude"),
        ("", "latitude"),
        ("15,72", "latitude"),
    ],
)
def test_what_is_no_such_angle_reads_as_nothing(text, axis):
    assert read_angle(text, axis) is None


@pytest.mark.parametrize(
    "text",
    ["N 15°43'30\" E 67°26'15\"", "15 43 30 N 67 26 15 E", "15.725, 67.4375"],
)
def test_a_position_reads_as_longitude_and_latitude(text):
    """Oracle: 43 min 30 s = 0.725 degrees, 26 min 15 s = 0.4375 degrees."""
    assert read_position(text) == pytest.approx((67.4375, 15.725), abs=1e-12)


@pytest.mark.parametrize("text", ["15.725", "15.725, 67.4, 3", "E 67 26 N 15 43", "here"])
def test_half_a_position_is_none(text):
    assert read_position(text) is None


@given(st.integers(0, 89), st.integers(0, 59), st.integers(0, 59), st.booleans())
def test_writing_an_angle_out_and_reading_it_gives_it_back(degrees, minutes, seconds, south):
    text = f"{degrees}°{minutes}'{seconds}\" {'S' if south else 'N'}"
    whole = degrees + (minutes + seconds / 60) / 60
    assert read_angle(text, "latitude") == pytest.approx(-whole if south else whole, abs=1e-12)
