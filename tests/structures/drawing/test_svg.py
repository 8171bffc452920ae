import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.drawing.svg import Sheet
from tests.structures.drawing.paper import SVG, read


@given(words=st.text(max_size=40))
def test_any_words_come_back_as_they_went_in(words):
    """Law: escaping loses only what XML itself forbids (production 2 of XML 1.0)."""
    sheet = Sheet("a", 10.0, words, words)
    sheet.text((1.0, 2.0), words)
    root = read(sheet.markup().encode("utf-8", "surrogatepass"))
    allowed = "".join(c for c in words if c in "\t\n\r" or (c >= " " and c not in "\ufffe\uffff"))
    allowed = "".join(c for c in allowed if not "\ud800" <= c <= "\udfff")
    seen = root.find(f"{SVG}text").text or ""
    assert seen == allowed.replace("\r\n", "\n").replace("\r", "\n")


def test_markup_in_words_stays_words():
    sheet = Sheet("a", 10.0, "</title><script>", 'x" onload="y')
    sheet.text((1.0, 2.0), "<&\">'")
    root = read(sheet.markup())
    assert [e.tag for e in root.iter() if e.tag.endswith("script")] == []
    assert root.find(f"{SVG}title").text == "</title><script>"
    assert root.find(f"{SVG}text").text == "<&\">'"


def test_only_hatches_in_use_are_defined():
    sheet = Sheet("a", 10.0, "t")
    sheet.hatch([(0.0, 0.0), (5.0, 0.0), (5.0, 5.0)], "clay")
    patterns = [p.get("id") for p in read(sheet.markup()).iter(f"{SVG}pattern")]
    assert patterns == ["a-clay"]


def test_size_on_paper_is_in_millimetres():
    sheet = Sheet("a", 180.0, "t", height_mm=92.5)
    root = read(sheet.markup())
    assert (root.get("width"), root.get("height")) == ("180mm", "92.5mm")
    assert root.get("viewBox") == "0 0 180 92.5"


@pytest.mark.parametrize("name", ["", "7", "a b", 'a"', "a<"])
def test_a_name_that_cannot_be_an_id_is_a_wrong_call(name):
    with pytest.raises(ValueError, match="part of an id"):
        Sheet(name, 10.0, "t")
