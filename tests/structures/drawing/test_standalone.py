import re

import pytest

from structures.drawing.section import draw_section
from structures.drawing.sounding import draw_sounding
from structures.drawing.standalone import standalone
from structures.drawing.svg import Sheet
from tests.structures.drawing.paper import SVG, read
from tests.structures.drawing.soundings import table_2
from tests.structures.drawing.views import VIEWS


@pytest.fixture(scope="module")
def alone():
    return standalone(draw_section(VIEWS["every test"]()))


def test_it_needs_nothing_outside_itself(alone):
    """Viewers of SVG files and the typesetter know no custom properties and no other files."""
    read(alone.encode())
    assert "var(" not in alone
    assert "@" not in alone
    assert not re.search(r"(href|src)=|url\((?!#)", alone)


def test_every_class_that_paints_is_written_in(alone):
    """Oracle: colours of print in tokens.css, pens of drawing.css, read off by eye."""
    style = re.search(r"<style>(.*?)</style>", alone)[1]
    for rule in (
        ".dw .clay{fill:#a5612b}",
        ".dw .ground{stroke:#000;stroke-width:.7;stroke-linejoin:round}",
        ".dw .open-end{stroke:#8e1f23;stroke-width:.7;stroke-linejoin:miter}",
        ".dw .fill-paper{fill:#fff}",
        ".dw text{fill:#000;font-size:2.6px}",
    ):
        assert rule in style, rule
    assert "display" not in style


def test_it_lies_on_paper(alone):
    first = next(e for e in read(alone.encode()) if e.tag == f"{SVG}rect")
    assert (first.get("class"), first.get("width"), first.get("height")) == (
        "fill-paper",
        "100%",
        "100%",
    )


def test_letters_of_another_script_name_the_font_that_has_them():
    sheet = Sheet("name", 100.0, "title")
    sheet.text((1.0, 5.0), "KE-04 नेर्लवाडी <ford>", "strong")
    root = read(standalone(sheet.markup()).encode())
    (text,) = root.iter(f"{SVG}text")
    (span,) = text
    assert span.text == "नेर्लवाडी"
    assert span.get("font-family") == "Noto Sans Devanagari"
    assert "".join(text.itertext()) == "KE-04 नेर्लवाडी <ford>"


def test_the_narrow_sheet_stands_alone_too():
    root = read(standalone(draw_section(VIEWS["A"](), narrow=True)).encode())
    assert ".dw-narrow text{font-size:3.2px}" in root.find(f"{SVG}style").text


def test_a_sounding_stands_alone():
    alone = standalone(draw_sounding(table_2()))
    read(alone.encode())
    assert ".dw .obs{" in alone
