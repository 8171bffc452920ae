import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.drawing.letters import BOLD, FIRST, REGULAR, shorten, width_mm, wrap_mm
from tests.structures.drawing.font import advances

WORDS = st.text(st.characters(codec="utf-8", categories=["L", "N", "P", "Zs"]), max_size=60)


@pytest.mark.parametrize(("table", "weight"), [(REGULAR, "Regular"), (BOLD, "Bold")])
def test_widths_are_those_of_the_shipped_font(table, weight):
    """Oracle: hmtx table of the font file, in thousandths of an em."""
    font = advances(f"NotoSans-{weight}.ttf")
    assert [round(1000 * font[chr(FIRST + place)]) for place in range(95)] == list(table)


def test_no_devanagari_word_is_wider_than_guessed():
    """Oracle: hmtx table of the Devanagari fonts; joined letters are never wider than apart."""
    for weight in ("Regular", "Bold"):
        font = advances(f"NotoSansDevanagari-{weight}.ttf")
        for letter, width in font.items():
            if "\u0900" <= letter <= "\u097f" and letter.isalpha():
                assert width_mm(letter, 1.0) >= width - 0.15


def test_width_of_a_level():
    """Oracle: hand sum, five figures of 0.572 em and a full stop of 0.268 em at 2.6 mm."""
    assert width_mm("249.70") == pytest.approx((5 * 0.572 + 0.268) * 2.6)


@given(words=WORDS, limit=st.floats(3.0, 80.0))
def test_wrapped_lines_fit_and_lose_nothing(words, limit):
    lines = wrap_mm(words, limit)
    assert "".join(lines).replace(" ", "") == "".join(words.split())
    assert all(width_mm(line) <= limit for line in lines if len(line) > 1)


@given(words=WORDS, limit=st.floats(5.0, 80.0))
def test_shortened_words_fit_and_say_so(words, limit):
    short = shorten(words, limit)
    if width_mm(words) <= limit:
        assert short == words
    else:
        assert short.endswith("...")
        assert width_mm(short) <= limit
