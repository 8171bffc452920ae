from datetime import date

import pytest
import typst

from structures.documents.press import FONTS, press
from structures.drawing.section import draw_section
from tests.structures.documents.pdf import read_pdf
from tests.structures.drawing.views import VIEWS

ON = date(2027, 3, 14)
WORDS = {
    "title": "नेर्लवाडी <ford> & #sys.inputs $x$ *bold*",
    "site": "NE-07",
    "stream": "Nerla",
    "document": "a leaf",
    "date": "14 Mar 2027",
    "revision": "abc",
    "closing": "Local codes decide.",
}
SOURCE = """
#import "leaf.typ": drawing, leaf, not-known, values
#let data = json("data.json")
#show: leaf.with(data)
= #data.title
#not-known(("Rock is not known.",))
#values(("item", "m"), (("crest", "249.40"),), numbers: (1,))
#drawing("section.svg", "a section")
"""


def leaf(**changes):
    drawings = {"section.svg": draw_section(VIEWS["A"]())}
    return press(SOURCE, WORDS | changes, made_on=ON, drawings=drawings)


@pytest.fixture(scope="module")
def paper():
    return read_pdf(leaf())


def test_sheets_are_a4(paper):
    """Oracle: ISO 216, 210 by 297 mm."""
    assert set(paper.sheets_mm) == {(210.0, 297.0)}


def test_the_shipped_fonts_are_embedded_and_no_other(paper):
    assert paper.fonts == {
        "NotoSans-Regular",
        "NotoSans-Bold",
        "NotoSansDevanagari-Bold",
    }
    assert paper.embedded == len(paper.fonts)


def test_words_are_printed_as_they_are(paper):
    """No word of a survey is ever read as source."""
    assert "<ford> & #sys.inputs $x$ *bold*" in paper.words.replace("\n", "")
    for word in ("Not known", "Rock is not known.", "249.40", "Local codes decide.", "approved by"):
        assert word in paper.words


def test_the_title_block_counts_its_sheets(paper):
    assert "1 of 1" in paper.words


def test_the_drawing_is_text_and_lines(paper):
    """A drawing that was turned into a picture would have no words."""
    assert "wall 53.33 m" in paper.words.replace("\n", "")
    assert b"/Subtype/Image" not in leaf()


def test_the_same_words_give_the_same_bytes():
    assert leaf() == leaf()
    assert leaf() != leaf(stream="Odre")


def test_the_fonts_are_found_by_the_typesetter():
    fonts = typst.Fonts(
        include_system_fonts=False, include_embedded_fonts=False, font_paths=[str(FONTS)]
    )
    assert fonts.families() == ["Noto Sans", "Noto Sans Devanagari"]
