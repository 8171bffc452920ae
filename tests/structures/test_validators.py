"""The gate that tables, forms and serializers share."""

from __future__ import annotations

import pytest
from django.core.exceptions import ValidationError

from structures import validators
from structures.intake.defaults import WALL


@pytest.mark.parametrize(
    ("gate", "wrong", "words"),
    [
        (validators.validate_latitude, 90.5, "90.5 is no latitude: -90 to 90 degrees."),
        (validators.validate_latitude, float("nan"), "nan is no latitude: -90 to 90 degrees."),
        (validators.validate_longitude, -181.0, "-181 is no longitude: -180 to 180 degrees."),
        (validators.validate_zone, "+05:30", "+05:30 is no time zone. Write it like Asia/Kolkata."),
        (
            validators.validate_currency,
            "inr",
            "inr is no currency. Write its three capital letters.",
        ),
        (
            validators.validate_outline,
            {"type": "Point"},
            "outline: This is no polygon. Send one GeoJSON polygon.",
        ),
        (
            validators.validate_course,
            {"type": "Point"},
            "course: This is no line. Send a GeoJSON LineString or MultiLineString.",
        ),
    ],
)
def test_what_cannot_be_is_said_in_words(gate, wrong, words):
    with pytest.raises(ValidationError) as error:
        gate(wrong)
    assert error.value.messages == [words]


@pytest.mark.parametrize(
    ("key", "value", "words"),
    [
        ("thickness_m", 1.6, "1.6 m is outside 0.6 to 1.5."),
        ("film_faces", 1.5, "1.5 is not a whole number."),
        ("sounding_noise", 0.2, "0.2 is outside 0.01 to 0.1."),
        ("licensed_depth_m", 7.0, "7 m is outside 1.5 to 6.1."),
        ("sounding", 0.03, "There is no setting sounding."),
    ],
)
def test_a_setting_stays_in_its_range(key, value, words):
    """Oracle: handbook section 12, accepted ranges."""
    with pytest.raises(ValidationError) as error:
        validators.validate_setting(key, value)
    assert error.value.messages[0].startswith(words)


def test_none_passes_since_the_field_has_spoken():
    for gate in (
        validators.validate_latitude,
        validators.validate_longitude,
        validators.validate_outline,
        validators.validate_course,
    ):
        gate(None)
    validators.validate_setting("thickness_m", None)


@pytest.mark.parametrize("key", WALL)
def test_every_default_of_the_wall_can_be_set_to_itself_and_its_limits(key):
    for value in (WALL[key].low, WALL[key].value, WALL[key].high):
        validators.validate_setting(key, value)
