"""The map: true places, shapes by stage, labels that never touch."""

from __future__ import annotations

import re

import pytest

from structures.drawing.map import Outline, Run, Spot, draw_map
from structures.drawing.map_marks import WELL_WORDS, WORDS, mark_of
from structures.ground.course import COURSE_MOST
from structures.ground.place import distance_m
from structures.life.stages import STAGES
from tests.structures.drawing.paper import read, shapes, words

SQUARE = ((77.4, 15.7), (77.5, 15.7), (77.5, 15.8), (77.4, 15.8), (77.4, 15.7))
SHED = Outline("OD", "Odremma", (SQUARE,))
WEST, EAST = (77.41, 15.75), (77.49, 15.75)


def circles(markup):
    found = re.findall(r'<circle class="p3 fill-paper" cx="([\d.]+)" cy="([\d.]+)"', markup)
    return [(float(x), float(y)) for x, y in found]


def test_distances_on_the_map_are_those_of_the_scale_bar():
    """Oracle: geodesic on the ellipsoid (general library); 1 in 1000 for two decimals of a mm."""
    markup = draw_map([SHED], [Spot("A", "", WEST, "noted"), Spot("B", "", EAST, "noted")])
    (x1, y1), (x2, y2), *_ = circles(markup)
    bar_mm = float(re.search(r'class="staff staff-on".*? width="([\d.]+)"', markup)[1])
    bar_km = float(re.search(r">([\d.]+) km<", markup)[1])
    drawn_km = ((x2 - x1) ** 2 + (y2 - y1) ** 2) ** 0.5 / bar_mm * bar_km
    assert drawn_km == pytest.approx(distance_m(WEST, EAST) / 1000.0, rel=1e-3)
    assert x1 < x2


def test_north_is_up():
    markup = draw_map(
        [], [Spot("A", "", (77.4, 15.7), "noted"), Spot("B", "", (77.4, 15.8), "noted")]
    )
    (_, south), (_, north), *_ = circles(markup)
    assert north < south


@pytest.mark.parametrize("narrow", [False, True])
def test_a_stream_runs_through_its_sites_under_its_name(narrow):
    """Oracle: a site on a bend of the course is drawn on the same place of the paper."""
    run = Run("Odre", (((77.41, 15.75), (77.45, 15.76), (77.49, 15.75)),))
    markup = draw_map([], [Spot("A", "", (77.45, 15.76), "noted")], [run], narrow=narrow)
    course = re.search(r'<polyline class="level-a" points="([^"]+)"', markup)[1].split()
    assert course[1] == ",".join(f"{part:.2f}" for part in circles(markup)[0])
    assert re.search(r'<text class="halo t-water[^>]*>Odre</text>', markup)
    assert ">stream</text>" in markup


@pytest.mark.parametrize("narrow", [False, True])
def test_words_keep_off_the_stream_s_line(narrow):
    """Law: no point of the course lies inside the box of a word."""
    course = tuple((77.41 + 0.002 * n, 15.75 + 0.0006 * n) for n in range(41))
    spots = [Spot(f"OD-{n}", "", course[n], "noted") for n in (4, 15, 33)]
    root = read(draw_map([SHED], spots, [Run("Odre", (course,))], narrow=narrow))
    (line,) = [one for one in shapes(root, "level-a") if len(one) == len(course)]
    known = {"Odre", "Odremma OD", *(spot.code for spot in spots)}
    found = [word for word in words(root) if word.words in known]
    assert {word.words for word in found} == known
    for word in found:
        for x, y in line:
            assert not (word.left < x < word.right and word.top < y < word.bottom), word


def test_a_course_of_very_many_points_is_named_all_the_same():
    """As many points as a course may have; a search over all of them would take minutes."""
    course = tuple((77.41 + 4e-6 * n, 15.75 + 1.2e-6 * n) for n in range(COURSE_MOST))
    root = read(draw_map([SHED], [Spot("OD-1", "", course[0], "noted")], [Run("Odre", (course,))]))
    assert {"Odre", "OD-1"} <= {word.words for word in words(root)}


def test_a_map_without_streams_explains_none():
    assert ">stream</text>" not in draw_map([SHED], [])


def test_every_stage_has_a_shape_that_the_key_explains():
    assert {mark_of(stage) for stage in STAGES} == set(WORDS)
    assert mark_of("noted") == "open circle"
    assert mark_of("drawn") == "open square"
    assert mark_of("digging") == "full square"
    assert mark_of("judged") == "full circle"
    assert mark_of("closed-off") == "cross"


@pytest.mark.parametrize("narrow", [False, True])
def test_wells_have_shapes_of_their_own_and_yield_to_sites(narrow):
    """Law: a site keeps its name and its place on top; the key and the words name the wells."""
    spots = [
        Spot("OD-W01", "", WEST, "well upstream"),
        Spot("OD-W07", "", EAST, "well control"),
        Spot("OD-01", "", WEST, "drawn"),
    ]
    markup = draw_map([SHED], spots, narrow=narrow)
    assert {mark_of(f"well {role}") for role in ("upstream", "downstream", "control")} == set(
        WELL_WORDS
    )
    assert re.search(r'<text class="halo strong[^>]*>OD-01</text>', markup)
    assert re.search(r'<text class="halo( mid| end)?"[^>]*>OD-W07</text>', markup)
    assert markup.index('<rect class="p3') > markup.index("<circle")  # the site over the well
    assert ">well or pipe</text>" in markup
    assert ">control well</text>" in markup
    assert "Wells: OD-W01 (well or pipe), OD-W07 (control well)." in markup


def test_a_map_without_wells_explains_none():
    markup = draw_map([SHED], [Spot("OD-01", "", WEST, "drawn")])
    assert "well" not in markup


@pytest.mark.parametrize("narrow", [False, True])
def test_words_are_escaped_and_a_lone_site_is_drawn(narrow):
    markup = draw_map([], [Spot("A<B", "x", WEST, "noted")], narrow=narrow)
    assert "A&lt;B" in markup
    assert "A<B" not in markup


def test_a_map_of_nothing_is_a_wrong_call():
    with pytest.raises(ValueError, match="outline, a stream or a site"):
        draw_map([], [])
