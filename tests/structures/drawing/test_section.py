import re
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings

from structures.drawing.section import draw_section
from structures.drawing.view import RockDrawn, SectionView, WallDrawn
from tests.structures.drawing.paper import (
    SVG,
    close,
    cut_off,
    overlaps,
    read,
    shapes,
    size,
    words,
)
from tests.structures.drawing.views import (
    LONG_NAME,
    VIEWS,
    drawn,
    estimated,
    pack_of,
    settled,
    survey_b,
    valley,
)
from tests.structures.wall.examples import cases, example

EACH = pytest.mark.parametrize("name", VIEWS)
SHEETS = pytest.mark.parametrize("narrow", [False, True], ids=["wide", "narrow"])


def sheet(view, *, narrow=False):
    return read(draw_section(view, narrow=narrow))


def said(root):
    return [word.words for word in words(root)]


@EACH
@SHEETS
def test_no_words_touch_and_none_leave_the_sheet(name, narrow):
    """Oracle: boxes from the advance widths of the shipped fonts."""
    root = sheet(VIEWS[name](), narrow=narrow)
    assert overlaps(root) == []
    assert cut_off(root) == []


@settings(max_examples=25, deadline=None)
@given(case=cases())
def test_whatever_is_surveyed_can_be_drawn(case):
    """Law: any ground and rock line gives two sheets on which no words touch or are cut."""
    view = drawn(pack_of(case), settled(case))
    for narrow in (False, True):
        root = sheet(view, narrow=narrow)
        assert overlaps(root) == []
        assert cut_off(root) == []


@SHEETS
def test_ground_and_rock_lie_where_their_values_say(narrow):
    """Oracle: the staff's numbers and the survey's ends give the scales, example B the values."""
    view = VIEWS["B"]()
    root = sheet(view, narrow=narrow)
    ground = max(shapes(root, "ground"), key=len)  # the other is the sign in the key
    left, right = ground[0][0], ground[-1][0]
    mm_per_m = (right - left) / 68.0
    numbers = {
        int(w.words): (w.top + w.bottom) / 2
        for w in words(root)
        if w.right < left and w.words.isdigit()
    }
    low, high = min(numbers), max(numbers)
    rise = (numbers[low] - numbers[high]) / (high - low)
    for (x, y), offset, level in zip(ground, view.offset_m, view.ground_m, strict=True):
        assert close(x, left + offset * mm_per_m)
        assert close(y, ground[0][1] + (253.90 - level) * rise)
    (rock,) = [line for line in shapes(root, "rock-read") if len(line) == 12]
    at_33 = list(view.rock.offset_m).index(33.0)
    assert close(rock[at_33][1], ground[0][1] + (253.90 - 243.90) * rise)


def test_scales_are_those_stated():
    """Oracle: 68 m at 1:500 are 136 mm, and one box of the staff, 1 m at 1:200, is 5 mm."""
    root = sheet(VIEWS["B"]())
    assert (
        "Heights are drawn two and a half times as tall as lengths: 1:500 and 1:200 on A4."
        in said(root)
    )
    ground = max(shapes(root, "ground"), key=len)
    assert ground[-1][0] - ground[0][0] == pytest.approx(136.0)
    boxes = [r for r in root.iter(f"{SVG}rect") if "staff" in (r.get("class") or "").split()]
    assert float(boxes[0].get("height")) == pytest.approx(5.0)
    assert (root.get("width"), size(root)[0]) == ("180mm", 180.0)


def test_example_b_reads_like_its_results():
    """Oracle: handbook 13, example B: ends, length, bed, crest, lowest rock, depth to the key."""
    root = sheet(VIEWS["B"]())
    texts = said(root)
    for text in (
        "end 5.00 m,",
        "end 59.00 m,",
        "wall 54.00 m",
        "249.70 bed",
        "249.40 crest",
        "243.90 rock, lowest",
        "247.60 water",
        "bore 2",
        "P1",
        "S5",
    ):
        assert texts.count(text) == 1, text
    assert texts.count("closed on rock") == 2
    assert any("6.20 m down to the bottom of the key, over 6.1 m" in t for t in texts)


def test_every_sheet_carries_its_caution_in_a_frame():
    """Oracle: handbook 11: each sheet that somebody may dig by ends with the closing sentence."""
    for make in VIEWS.values():
        for narrow in (False, True):
            root = sheet(make(), narrow=narrow)
            joined = " ".join(said(root))
            assert joined.endswith("Local codes and licensed practice decide; this sheet does not.")
            assert "Caution: " in joined
            assert any(r.get("class") == "change" for r in root.iter(f"{SVG}rect"))


def test_an_open_flank_is_broken_off_and_named():
    root = sheet(VIEWS["C open flank"]())
    (zigzag,) = shapes(root, "open-end")
    ground = max(shapes(root, "ground"), key=len)
    assert np.mean([x for x, _ in zigzag]) == pytest.approx(ground[-1][0], abs=0.2)
    texts = said(root)
    assert "open: rock not reached" in texts
    assert "survey ends at 45.00 m" in texts
    assert "wall 38.88 m as far as surveyed" in texts
    assert texts.count("closed on rock") == 1
    assert "OPEN, rock not reached" in root.find(f"{SVG}desc").text


def test_both_flanks_open_where_the_rock_line_ends_inside_the_survey():
    texts = said(sheet(VIEWS["both flanks open"]()))
    assert texts.count("open: rock not reached") == 2
    assert "rock line ends at 20.00 m" in texts
    assert "rock line ends at 40.00 m" in texts
    assert texts.count("rock not surveyed") == 2


def test_without_a_rock_line_nothing_of_rock_or_wall_is_drawn():
    """Convention: no line where not surveyed, with the words; and no wall on it."""
    root = sheet(VIEWS["no rock"]())
    for css in ("clay", "key", "rock-read", "rock-wash", "band", "wall-line", "open-end"):
        assert shapes(root, css) == [], css
    texts = said(root)
    assert "rock not surveyed" in texts
    assert not any("rock m" in text for text in texts)
    assert any(text.startswith("Caution: No rock line") for text in texts)


def test_a_rock_bar_is_named_where_it_stands():
    """Oracle: the bar of check value 5.g as the wall room finds it."""
    view = VIEWS["rock bar"]()
    (bar,) = view.wall.bars
    texts = said(sheet(view))
    assert "rock bar" in texts
    assert f"{bar.from_m:.2f} to {bar.to_m:.2f} m" in texts
    assert f"wall {view.wall.length_m:.2f} m without the rock bars" in texts


def test_clay_covers_the_face_of_the_wall():
    """Oracle: face above the rock of example B, 169.85 m2, at 2 mm and 5 mm to the metre."""
    root = sheet(VIEWS["B"]())
    areas = [abs(_shoelace(shape)) for shape in shapes(root, "clay") if len(shape) > 4]
    assert sum(areas) / (2.0 * 5.0) == pytest.approx(169.85, abs=0.05)


def _shoelace(points):
    x, y = np.array(points).T
    return 0.5 * float(x @ np.roll(y, -1) - y @ np.roll(x, -1))


def test_the_top_steps_at_the_toes():
    """Oracle: example B, crest 0.30 m under the bed between 15 and 46 m: 1.5 mm at 1:200."""
    root = sheet(VIEWS["B"]())
    ground = max(shapes(root, "ground"), key=len)
    film = max(shapes(root, "film"), key=len)
    steps = {
        round((a[0] - ground[0][0]) / 2.0, 2): round(b[1] - a[1], 2)
        for a, b in pairwise(film)
        if a[0] == b[0] and a[1] != b[1]
    }
    assert steps == {15.0: 1.5, 46.0: -1.5}


def test_crowded_points_are_thinned_and_counted():
    view = VIEWS["crowded 400 m"]()
    root = sheet(view)
    turned = [t for t in root.iter(f"{SVG}text") if t.get("transform")]
    offsets = [t for t in turned if t.get("y") == turned[0].get("y")]
    assert f"{len(offsets)} of 80 points" in said(root)
    assert len(offsets) < 80
    texts = said(root)
    assert {"bore 1", "bore 2", "bore 3", "bore 4", "bore 5"} <= set(texts)
    named = sum(bool(re.fullmatch(r"S\d+", text)) for text in texts)
    assert (
        f"{60 - named} tests stand too close to be named here; the table names them all." in texts
    )


def test_every_kind_of_test_has_its_sign_and_its_line_in_the_key():
    texts = said(sheet(VIEWS["every test"]()))
    for text in (
        "bore: black in rock",
        "pit: black in rock",
        "rock at the surface",
        "rock at or below the tip",
        "rock below the tip",
        "rock seen",
        "its 10 to 90 % range",
        "rock read, 50 %",
    ):
        assert texts.count(text) == 1, text


def test_the_key_explains_only_what_is_drawn():
    texts = said(sheet(VIEWS["A"]()))
    assert "rock, settled line" in texts
    for text in ("rock read, 50 %", "its 10 to 90 % range", "rock seen", "bore: black in rock"):
        assert text not in texts


def test_a_settled_line_has_no_band():
    assert shapes(sheet(VIEWS["A"]()), "band") == []
    assert len(shapes(sheet(VIEWS["B"]()), "band")) == 1


def test_names_are_escaped_and_kept_whole():
    root = sheet(VIEWS["long name"]())
    assert LONG_NAME in root.find(f"{SVG}title").text
    header = " ".join(w.words for w in words(root) if w.bottom < 9 and "strong" in w.css)
    assert header.startswith(f"नेर-०७ {LONG_NAME}")


def test_title_and_description_are_tied_to_the_drawing_by_its_name():
    view = VIEWS["A"]()
    for narrow, name in ((False, "site-7"), (True, "site-7-narrow")):
        root = read(draw_section(view, name="site-7", narrow=narrow))
        assert root.get("aria-labelledby") == f"{name}-t {name}-d"
        assert root.find(f"{SVG}title").get("id") == f"{name}-t"
        assert root.find(f"{SVG}desc").get("id") == f"{name}-d"
        ids = [e.get("id") for e in root.iter() if e.get("id")]
        assert len(ids) == len(set(ids))
        assert all(one.startswith(f"{name}-") for one in ids)
    with pytest.raises(ValueError, match="part of an id"):
        draw_section(view, name='x" onload="')


def test_no_style_and_no_script_of_its_own():
    """The pages' content policy refuses both."""
    markup = draw_section(VIEWS["every test"]())
    assert "style" not in markup
    assert "script" not in markup


def test_water_is_drawn_only_over_lower_rock():
    """Oracle: example B's rock crosses 247.60 m at 11 + 4 x 0.3 / 1.1 and 46 + 6 x 1.0 / 1.7 m."""
    root = sheet(drawn(survey_b(), settled(example("B"))))
    ground = max(shapes(root, "ground"), key=len)
    level = max(shapes(root, "water-line"), key=lambda line: line[1][0] - line[0][0])
    offsets = [(x - ground[0][0]) / 2.0 for x, _ in level]
    assert offsets == pytest.approx([11 + 4 * 0.3 / 1.1, 46 + 6 * 1.0 / 1.7], abs=0.01)


def test_a_view_that_contradicts_itself_is_refused():
    x, z = np.array([0.0, 10.0]), np.array([5.0, 5.0])
    view = SectionView("X", "", x, z, (2.0, 8.0))
    wall = VIEWS["A"]().wall
    with pytest.raises(ValueError, match="stands on a rock line"):
        SectionView("X", "", x, z, (2.0, 8.0), wall=wall)
    with pytest.raises(ValueError, match="two points or more"):
        SectionView("X", "", x[:1], z[:1], (2.0, 8.0))
    with pytest.raises(ValueError, match="ground_m has 1 points"):
        SectionView("X", "", x, z[:1], (2.0, 8.0))
    with pytest.raises(ValueError, match="both its ends"):
        RockDrawn(x, z, low_m=z)
    with pytest.raises(ValueError, match="two uprights"):
        WallDrawn(x[:, None], z[:, None], z[:, None], 5.0, 0.1, (0, 10), (True, True), (2, 2), True)
    assert view.gaps == ((0.0, 10.0),)


def test_a_narrow_gorge_is_drawn_true_to_scale_where_that_is_wide_enough():
    """Oracle: 10 m wide and 8 m high need 1:150 for the height alone and stay 67 mm wide."""
    root = sheet(valley(10.0, 8.0, 9))
    assert "True to scale, heights as lengths: 1:150 on A4." in said(root)


def test_the_band_is_the_range_given():
    """Oracle: 0.8 m to each side at 1:200 are 8 mm between the edges at example B's offset 33."""
    case = example("B")
    root = sheet(drawn(pack_of(case), estimated(case)))
    band = shapes(root, "band")[0]
    half = len(band) // 2
    up, down = band[:half], band[half:][::-1]
    at_33 = list(case.rock_x).index(33.0)
    assert down[at_33][1] - up[at_33][1] == pytest.approx(2 * 0.8 * 5.0, abs=0.011)
