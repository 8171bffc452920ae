"""Distances, areas and outlines on the ellipsoid."""

from __future__ import annotations

import json
import math
from pathlib import Path

import mpmath
import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.ground.place import distance_m, on_grid, outside_m, read_outline

A_M = 6378137.0  # WGS 84, semi-major axis by definition
FLATTENING = 1 / 298.257223563  # WGS 84, by definition
E2 = FLATTENING * (2 - FLATTENING)
SQUARE = [[67.4, 15.7], [67.46, 15.7], [67.46, 15.75], [67.4, 15.75], [67.4, 15.7]]


def polygon(*rings):
    return {"type": "Polygon", "coordinates": list(rings)}


def test_a_degree_along_the_equator():
    """Oracle: the equator is a circle of the semi-major axis."""
    assert distance_m((0.0, 0.0), (1.0, 0.0)) == pytest.approx(A_M * math.pi / 180, rel=1e-9)


def test_the_quarter_meridian():
    """Oracle: meridian arc a (1 - e2) integral of (1 - e2 sin2 phi)^-1.5, by mpmath."""
    arc = mpmath.quad(lambda phi: (1 - E2 * mpmath.sin(phi) ** 2) ** -1.5, [0, mpmath.pi / 2])
    assert distance_m((77.0, 0.0), (77.0, 90.0)) == pytest.approx(A_M * (1 - E2) * float(arc))


def test_an_eighth_of_the_earth():
    """Oracle: area of the ellipsoid 2 pi a2 (1 + (1 - e2)/e atanh e), an eighth of it."""
    e = math.sqrt(E2)
    whole_m2 = 2 * math.pi * A_M**2 * (1 + (1 - E2) / e * math.atanh(e))
    found = read_outline(polygon([[0, 0], [90, 0], [0, 90], [0, 0]]), "eighth")
    assert found.area_km2 == pytest.approx(whole_m2 / 8 / 1e6, rel=1e-9)


def test_the_grid_keeps_distances_from_its_origin():
    """Oracle: the geodesic itself; equidistant means just this."""
    origin, other = (77.45, 15.75), (77.52, 15.81)
    ((east_m, north_m),) = on_grid([other], origin)
    assert math.hypot(east_m, north_m) == pytest.approx(distance_m(origin, other), rel=1e-9)
    assert east_m > 0
    assert north_m > 0


def test_outside_counts_from_the_nearest_edge():
    """Oracle: due east of the square's east side at its middle, along the parallel, some metres."""
    assert outside_m((67.43, 15.72), polygon(SQUARE)) == 0.0
    away = (67.47, 15.725)
    straight_m = distance_m(away, (67.46, 15.725))
    assert outside_m(away, polygon(SQUARE)) == pytest.approx(straight_m, rel=1e-4)


def test_an_open_clockwise_outline_is_closed_and_turned_openly():
    text = Path("tests/structures/ground/open_clockwise.geojson").read_text()
    found = read_outline(json.loads(text)["geometry"], "block 4")
    (ring,) = found.geometry["coordinates"]
    assert ring[0] == ring[-1]
    assert [list(point) for point in ring] == SQUARE
    assert found.mended == (
        "The outline was not closed; its first point was added at the end.",
        "The outline was turned clockwise; it now runs counter-clockwise.",
    )


@given(st.integers(0, 3), st.booleans())
def test_the_area_is_the_same_wherever_the_ring_begins_and_whichever_way_it_runs(start, back):
    ring = SQUARE[:-1][start:] + SQUARE[:-1][:start]
    turned = ring[::-1] if back else ring
    assert read_outline(polygon(turned), "x").area_km2 == pytest.approx(
        read_outline(polygon(SQUARE), "x").area_km2, rel=1e-12
    )


def test_a_hole_is_not_counted():
    hole = [[67.42, 15.71], [67.44, 15.71], [67.44, 15.73], [67.42, 15.73], [67.42, 15.71]]
    whole, inner = (read_outline(polygon(ring), "x").area_km2 for ring in (SQUARE, hole))
    assert read_outline(polygon(SQUARE, hole), "x").area_km2 == pytest.approx(whole - inner)


@pytest.mark.parametrize(
    ("geometry", "sentence"),
    [
        (
            polygon([[771230.5, 1725410.2], [774980.1, 1725300.7], [774550.0, 1729120.9]]),
            (
                "block 3: These are not longitude and latitude. The first point that cannot be one "
                "is 771230, 1.72541e+06. Save it in WGS 84 degrees, longitude first."
            ),
        ),
        (
            polygon([[0, 0], [1, 1], [1, 0], [0, 1], [0, 0]]),
            (
                "block 3: The outline crosses or touches itself (self-intersection at 0.5, 0.5). "
                "Draw it there again."
            ),
        ),
        ({"type": "Point", "coordinates": [0, 0]}, "block 3: This is no polygon."),
        (polygon(), "block 3: The polygon has no points."),
        (polygon([[0, 0], [1, 1]]), "block 3: An outline has three points or more."),
        (polygon([[0, 0], [1, "north"], [1, 0]]), "block 3: A point is not two numbers."),
        (polygon([[0, 0], [1, float("nan")], [1, 0]]), "block 3: A point is not two numbers."),
        (polygon([[0, 0], [True, 0], [1, 0]]), "block 3: A point is not two numbers."),
        ("here", "block 3: This is no polygon."),
    ],
)
def test_what_is_no_outline_is_refused_with_its_place(geometry, sentence):
    with pytest.raises(Refused) as refused:
        read_outline(geometry, "block 3")
    assert refused.value.sentence().startswith(sentence)
