"""Check values of handbook 9, and sections drawn at random for laws."""

import json
from pathlib import Path

import numpy as np
import pytest
from hypothesis import strategies as st

from structures.water.section_area import Bands

WATER = json.loads(
    (Path(__file__).parents[2] / "oracles" / "water.json").read_text(encoding="utf-8")
)


def printed(text):
    """A printed value within half a unit of its last digit, or 1e-6 of it, whichever is larger."""
    decimals = len(text.partition(".")[2])
    return pytest.approx(float(text), rel=1e-6, abs=0.5 * 10.0**-decimals)


def vee(slope, depth_m):
    """Open valley of two even sides in rock, ground level over it."""
    half = slope * depth_m
    return Bands([half, half], [depth_m, 0.0], [0.0, depth_m], [depth_m] * 2, [depth_m] * 2)


@st.composite
def bands(draw):
    """Pieces between two lines, levels to the centimetre, the upper one over the lower."""
    count = draw(st.integers(1, 6))
    centimetres = st.lists(st.integers(0, 1000), min_size=count + 1, max_size=count + 1)
    lower = np.array(draw(centimetres)) / 100.0
    upper = lower + np.array(draw(centimetres)) / 100.0
    widths = np.array(draw(st.lists(st.integers(1, 200), min_size=count, max_size=count))) / 10.0
    return Bands(widths, lower[:-1], lower[1:], upper[:-1], upper[1:])


def steps(band, count=20_001):
    """Heights of the lower and the upper line on fine steps across all pieces, and the steps."""
    along = (np.arange(count) + 0.5) / count
    lower = band.lower_left_m[:, None] * (1 - along) + band.lower_right_m[:, None] * along
    upper = band.upper_left_m[:, None] * (1 - along) + band.upper_right_m[:, None] * along
    return lower, upper, np.broadcast_to((band.width_m / count)[:, None], lower.shape)
