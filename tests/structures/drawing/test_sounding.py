import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.drawing.sounding import draw_sounding
from structures.drawing.sounding_view import view_sounding
from structures.ground.sounding import Interpretation, Layer
from structures.ground.sounding_refusals import Refusal
from structures.intake.pack import Sounding, SoundingReading
from tests.structures.drawing.paper import SVG, cut_off, overlaps, read, shapes, size, words
from tests.structures.drawing.soundings import AB2, COMPUTED, table_2, unread


def said(root):
    return [word.words for word in words(root)]


def grid_place(root, text, axis):
    """The grid line that a number of an axis stands beside."""
    (word,) = [w for w in words(root) if w.words == text and ("end" in w.css) == (axis == "y")]
    place = (word.top + word.bottom) / 2 if axis == "y" else (word.left + word.right) / 2
    lines = [line[0]["xy".index(axis)] for line in shapes(root, "grid")]
    return min(lines, key=lambda at: abs(at - place))


@pytest.mark.parametrize("narrow", [False, True])
def test_decades_are_equal_both_ways(narrow):
    root = read(draw_sounding(table_2(), narrow=narrow))
    across = grid_place(root, "100", "x") - grid_place(root, "10", "x")
    up = grid_place(root, "50", "y") - grid_place(root, "500", "y")
    assert across == pytest.approx(up, abs=0.02)


def test_readings_bars_and_line_lie_where_their_values_say():
    """Oracle: logarithms of handbook table 2 between the numbers 10 and 100 of the axes."""
    root = read(draw_sounding(table_2()))
    decade = grid_place(root, "100", "x") - grid_place(root, "10", "x")
    x10, y100 = grid_place(root, "10", "x"), grid_place(root, "100", "y")
    line = max(shapes(root, "p3"), key=len)
    for (x, y), ab2, ohm_m in zip(line, AB2[:8], COMPUTED[:8], strict=True):
        assert x == pytest.approx(x10 + decade * np.log10(ab2 / 10.0), abs=0.02)
        assert y == pytest.approx(y100 - decade * np.log10(ohm_m / 100.0), abs=0.02)
    first = next(c for c in root if c.tag == f"{SVG}circle")
    assert float(first.get("cy")) == pytest.approx(line[0][1] - decade * np.log10(1.03), abs=0.011)
    bar = shapes(root, "p1")[-len(AB2) * 3 - 3 :]
    heights = {round(abs(a[1] - b[1]), 1) for a, b in bar if a[0] == b[0]}
    assert round(4 * 0.03 / np.log(10) * decade, 1) in heights


def test_the_line_breaks_where_mn_was_changed():
    root = read(draw_sounding(table_2()))
    lines = [line for line in shapes(root, "p3") if len(line) != 2]
    assert sorted(len(line) for line in lines) == [1, 1, 8]
    assert {"MN/2 0.5 m", "MN/2 2.5 m", "MN/2 10 m"} <= set(said(root))


def test_the_narrow_sheet_says_the_same_and_is_legible_on_a_telephone():
    """Oracle: 97 mm shown on 328 px (360 less the page's edges); letters of 10 px or more."""
    wide, narrow = (read(draw_sounding(table_2(), narrow=one)) for one in (False, True))
    assert " ".join(said(narrow)) == " ".join(said(wide))
    width_mm, _ = size(narrow)
    assert width_mm == 97.0
    assert 3.0 * 328.0 / width_mm >= 10.0
    assert "dw-narrow" in narrow.get("class")


def test_layers_and_rock_stand_on_the_same_axis():
    """Oracle: depths 2 and 8 m, range 6.5 to 8.9 m, on the spacing's axis."""
    root = read(draw_sounding(table_2()))
    decade = grid_place(root, "100", "x") - grid_place(root, "10", "x")
    x10 = grid_place(root, "10", "x")
    (steps,) = [line for line in shapes(root, "p5") if len(line) == 6]
    wanted = [x10 + decade * np.log10(depth / 10.0) for depth in (2.0, 8.0)]
    assert [steps[1][0], steps[3][0]] == pytest.approx(wanted, abs=0.02)
    edges = [line[0][0] for line in shapes(root, "band-edge")]
    assert edges == pytest.approx(
        [x10 + decade * np.log10(depth / 10.0) for depth in (6.5, 8.9)], abs=0.02
    )
    assert "Rock at 8.0 m, 10 to 90 %: 6.5 to 8.9 m." in said(root)


def test_a_refusal_is_said_in_place_of_a_depth():
    root = read(draw_sounding(unread()))
    texts = " ".join(said(root))
    assert "No depth of rock: the curve does not show rock." in texts
    assert shapes(root, "band-edge") == []
    assert shapes(root, "p5") == []
    assert "Wenner, AB/2 is 1.5 a" in texts
    assert "S2 <नेर>" in root.find(f"{SVG}title").text


@pytest.mark.parametrize("narrow", [False, True])
@pytest.mark.parametrize("make", [table_2, unread])
def test_no_words_touch(make, narrow):
    root = read(draw_sounding(make(), narrow=narrow))
    assert overlaps(root) == []
    assert cut_off(root) == []


@settings(max_examples=25, deadline=None)
@given(
    narrow=st.booleans(),
    ohm_m=st.lists(st.floats(0.5, 50000.0), min_size=3, max_size=20),
    layers=st.lists(st.floats(1.0, 20000.0), min_size=2, max_size=5),
)
def test_whatever_was_read_can_be_drawn(narrow, ohm_m, layers):
    """Law: no words are cut off, whatever curve and layers."""
    count = len(ohm_m)
    view = table_2(
        ab2_m=np.geomspace(1.0, 150.0, count),
        mn2_m=np.full(count, 0.3),
        observed_ohm_m=np.array(ohm_m),
        computed_ohm_m=None,
        noise=np.full(count, 0.03),
        bottom_m=np.geomspace(1.0, 30.0, len(layers) - 1),
        resistivity_ohm_m=np.array(layers),
    )
    assert cut_off(read(draw_sounding(view, narrow=narrow))) == []


def test_a_view_takes_what_the_interpretation_says():
    readings = tuple(SoundingReading(a, 0.5, 100.0) for a in (1.5, 3.0))
    sounding = Sounding(40.0, "schlumberger", readings, "S7")
    layers = (Layer(2.0, 200.0), Layer(6.0, 40.0), Layer(None, 900.0))
    view = view_sounding(
        sounding,
        Interpretation(
            40.0,
            "S7",
            1,
            np.full(2, 0.03),
            layers=layers,
            computed_ohm_m=np.array([101.0, 99.0]),
            refusal=Refusal("no-rock", "it shows none."),
        ),
    )
    assert view.bottom_m.tolist() == [2.0, 8.0]
    assert view.resistivity_ohm_m.tolist() == [200.0, 40.0, 900.0]
    assert (view.label, view.refusal, view.rock_depth_m) == ("S7", "it shows none.", None)


def test_a_view_that_contradicts_itself_is_refused():
    with pytest.raises(ValueError, match="above zero"):
        table_2(observed_ohm_m=-COMPUTED)
    with pytest.raises(ValueError, match="has a bottom"):
        table_2(bottom_m=np.array([2.0]))
