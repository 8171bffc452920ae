from structures.drawing.section import draw_section
from structures.drawing.svg import Sheet
from structures.drawing.written import Written, lift_other_scripts
from tests.structures.drawing.paper import read, words
from tests.structures.drawing.views import VIEWS


def test_words_of_another_script_are_lifted_out_with_their_place():
    sheet = Sheet("a", 100.0, "t")
    sheet.text((3.0, 5.0), "NE-07 नेर्लवाडी <ford>", "strong end")
    sheet.text((3.0, 9.0), "plain", "mid")
    left, lifted = lift_other_scripts(sheet.markup())
    assert lifted == (Written(3.0, 5.0, "NE-07 नेर्लवाडी <ford>", 2.6, "end", strong=True),)
    assert [word.words for word in words(read(left))] == ["plain"]


def test_the_narrow_sheet_has_larger_letters():
    """Oracle: 3.2 mm in drawing.css against 2.6 mm of the wide sheet."""
    sizes = {}
    for narrow in (False, True):
        markup = draw_section(VIEWS["long name"](), narrow=narrow)
        sizes[narrow] = {one.size_mm for one in lift_other_scripts(markup)[1]}
    assert sizes == {False: {2.6}, True: {3.2}}


def test_a_latin_drawing_is_left_as_it_is():
    markup = draw_section(VIEWS["B"]())
    assert lift_other_scripts(markup) == (markup, ())
