"""The drawing of the strips: its words, its ends, its twin in words."""

from __future__ import annotations

import xml.etree.ElementTree as ET

import numpy as np
import pytest

from structures.drawing.strips import StripDrawn, StripsView, describe, draw_strips

SVG = "{http://www.w3.org/2000/svg}"


def view(**changes):
    values = {
        "site": "KE-04 <&>",
        "ground_offset_m": np.array([0.0, 24.0, 80.0]),
        "ground_m": np.array([103.2, 100.4, 103.0]),
        "rock_offset_m": np.array([0.0, 40.0, 80.0]),
        "rock_m": np.array([103.0, 95.0, 103.0]),
        "strips": (
            StripDrawn(1, 10.0, 16.0, "covered", unseen=True),
            StripDrawn(2, 16.0, 22.0, "halted"),
            StripDrawn(3, 22.0, 28.0, "open"),
            StripDrawn(4, 28.0, 31.5, "not begun"),
        ),
        "found": ((19.0, 98.7), (25.0, 97.0)),
        **changes,
    }
    return StripsView(**values)


@pytest.mark.parametrize("narrow", [False, True])
def test_every_strip_has_its_number_and_what_stands_is_said(narrow):
    sheet = ET.fromstring(draw_strips(view(), narrow=narrow))  # noqa: S314 -- our own markup
    words = [one.text for one in sheet.iter(f"{SVG}text")]
    for word in ("1", "2", "3", "4", "unseen", "halted", "open"):
        assert word in words
    assert sheet.find(f"{SVG}title").text.startswith("KE-04 <&>")
    width, height = (float(sheet.get(side).removesuffix("mm")) for side in ("width", "height"))
    for one in sheet.iter(f"{SVG}line"):
        assert all(0.0 <= float(one.get(key)) <= width for key in ("x1", "x2"))
        assert all(0.0 <= float(one.get(key)) <= height for key in ("y1", "y2"))


def test_ends_of_strips_lie_where_their_offsets_are():
    """Oracle: proportion; equal lengths are drawn equal."""
    sheet = ET.fromstring(draw_strips(view()))  # noqa: S314 -- our own markup
    ends = sorted(
        {
            float(one.get("x1"))
            for one in sheet.iter(f"{SVG}line")
            if one.get("class") == "p1" and one.get("x1") == one.get("x2")
        }
    )
    steps = np.diff(ends)
    assert steps[0] == pytest.approx(steps[1], abs=0.02)
    assert steps[3] / steps[0] == pytest.approx(3.5 / 6.0, abs=0.01)


def test_the_drawing_says_itself_in_words():
    said = describe(view())
    assert "Strip 1 from 10.00 to 16.00 m: covered, covered unseen." in said
    assert "Rock found at 2 places, lowest at 97.00 m." in said


def test_without_a_strip_there_is_nothing_to_draw():
    with pytest.raises(ValueError, match="no strip"):
        view(strips=())
