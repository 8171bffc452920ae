"""The one list of cautions: its words, its units, and the sentence that ends a list."""

from __future__ import annotations

from structures.life.cautions import ALWAYS, CATALOGUE, CLOSING_SENTENCE, WORDS, caution


def test_no_caution_carries_the_sentence_that_ends_the_list():
    assert [code for code, (_, words) in CATALOGUE.items() if CLOSING_SENTENCE in words] == []


def test_every_level_has_its_printed_word_and_every_general_caution_is_in_the_list():
    assert {level for level, _ in CATALOGUE.values()} <= set(WORDS)
    assert set(CATALOGUE) >= ALWAYS


def test_square_and_cubic_metres_are_written_as_pages_write_them():
    """Oracle: the units of the pages (m², m³)."""
    text = caution("rock-default-spread", range_m=15.0, sill_m2=1.0, count=3).text
    assert text.startswith("Range 15 m and sill 1.00 m² of the rock line")
    said = {"words": "Pump", "value": 20.0, "unit": "m3/h", "source": "am3"}
    assert caution("default-used", **said).text == (
        "Pump was not measured: 20 m³/h is taken (am3)."
    )
