"""The defaults in force as one record: what they are, what was changed, and by whose word."""

from __future__ import annotations

import json
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.defaults import EVERY
from structures.intake.practice import (
    HANDBOOK,
    KEYS,
    Decision,
    Practice,
    make_practice,
    practice_document,
    practice_of,
)

RAO = Decision("sichardt_c", 3000.0, "A. Rao", "L-1", date(2026, 3, 1), "pumped here")


def test_without_a_word_of_the_office_the_handbook_holds():
    """Oracle: handbook 12."""
    assert {key: getattr(HANDBOOK, key) for key in KEYS} == {key: EVERY[key].value for key in KEYS}
    assert HANDBOOK.changed == ()
    assert practice_document(HANDBOOK) == {"values": {}, "decisions": []}


def test_what_differs_is_told_with_who_decided_it():
    made = make_practice(
        {"sichardt_c": 3000.0, "thickness_m": 1.2, "sounding_starts": 16.0}, (RAO,)
    )
    assert [(default.key, value) for default, value in made.changed] == [
        ("sounding_starts", 16),
        ("sichardt_c", 3000.0),
    ]
    assert (made.decision("sichardt_c"), made.decision("rock_share")) == (RAO, None)


@pytest.mark.parametrize(
    ("values", "words"),
    [
        ({"sounding_segment_sd": 0.5}, "factor of a segment, log sd: 0.5, accepted 0.02 to 0.2"),
        ({"sounding_starts": 4}, "starts of an inversion: 4, accepted 8 to 64"),
        ({"sounding_starts": 8.5}, "starts of an inversion: 8.5 is not a whole number"),
        ({"sounding_chi_square": 3.0}, "accepted 1.2 to 2"),
        ({"se_pit_m": 0.04}, "error of rock seen in a pit: 0.04, accepted 0.05 to 5"),
        ({"licensed_depth_m": 7.0}, "accepted 1.5 to 6.1"),
    ],
)
def test_a_value_out_of_range_is_a_wrong_call(values, words):
    """Oracle: handbook 12, accepted ranges."""
    with pytest.raises(ValueError, match=words):
        make_practice(values)


@given(st.data())
def test_a_document_gives_the_same_practice_back(data):
    """Law: through JSON and back nothing is lost."""
    keys = data.draw(st.sets(st.sampled_from(KEYS)))
    values = {
        key: data.draw(
            st.integers(int(EVERY[key].low), int(EVERY[key].high))
            if EVERY[key].whole
            else st.floats(EVERY[key].low, EVERY[key].high)
        )
        for key in keys
    }
    made = Practice(**values, decisions=(RAO,))
    assert practice_of(json.loads(json.dumps(practice_document(made)))) == made
