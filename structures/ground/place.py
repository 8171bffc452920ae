"""Where a site lies: distances in metres, outlines of watersheds.

Positions are longitude and latitude on WGS 84, in degrees, longitude first (RFC 7946).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING, Any, Final

from pyproj import Geod, Transformer
from shapely import is_valid_reason, transform
from shapely.geometry import Point, Polygon, shape
from shapely.geometry.polygon import orient

from structures.errors import Refused
from structures.ground.angle import HALVES, LATITUDE_MOST, LONGITUDE_MOST

if TYPE_CHECKING:
    from collections.abc import Sequence

ELLIPSOID: Final = Geod(ellps="WGS84")
RING_LEAST: Final = 4  # RFC 7946 3.1.6: a ring has four positions or more
RING_MOST: Final = 20_000  # project choice; an outline of a stream's watershed has some hundreds
SQUARE_KM_M2: Final = 1e6
NOT_DEGREES: Final = "These are not longitude and latitude."


@dataclass(frozen=True, slots=True)
class Outline:
    """A watershed's outline: GeoJSON polygon, closed and turned as RFC 7946 asks; what was mended."""

    geometry: dict[str, Any]
    area_km2: float
    mended: tuple[str, ...] = ()


def distance_m(one: tuple[float, float], other: tuple[float, float]) -> float:
    """Length of the shortest line between two positions, each longitude and latitude.

    Source: geodesic on the ellipsoid WGS 84 (Karney 2013, by PROJ).
    """
    return float(ELLIPSOID.inv(*one, *other)[2])


def on_grid(
    positions: Sequence[tuple[float, float]], origin: tuple[float, float]
) -> list[tuple[float, float]]:
    """Give positions as metres east and north of an origin.

    Source: azimuthal equidistant projection (Snyder 1987, chapter 25, by PROJ); distances and
    directions from the origin are true, others good to 1 in 10,000 within some 100 km.
    """
    east, north = _grid(origin).transform(*zip(*positions, strict=True))
    return list(zip(east, north, strict=True))


def outside_m(position: tuple[float, float], outline: dict[str, Any]) -> float:
    """How far a position lies outside an outline, in metres; 0 inside.

    Source: distance from the origin of the grid to the nearest point of the polygon.
    """
    polygon = shape(outline)
    if polygon.covers(Point(position)):  # most sites; a grid of its own costs far more
        return 0.0
    local = transform(polygon, _grid(position).transform, interleaved=False)
    return float(local.distance(Point(0.0, 0.0)))


def read_outline(geometry: object, where: str) -> Outline:
    """Read a GeoJSON polygon; an open ring is closed and a clockwise one turned, and said.

    Source: RFC 7946 3.1.6; area on the ellipsoid WGS 84 (Karney 2013, by PROJ).

    Parameters
    ----------
    geometry
        A GeoJSON geometry of type Polygon.
    where
        The place that a refusal names.

    Raises
    ------
    Refused
        If it is no polygon of longitudes and latitudes, or crosses itself.
    """
    rings = _rings(geometry, where)
    mended = []
    for ring in rings:
        if ring[0] != ring[-1]:
            ring.append(ring[0])
            mended.append("The outline was not closed; its first point was added at the end.")
        if len(ring) < RING_LEAST:
            raise Refused(
                "An outline has three points or more.", where=where, remedy="Draw it again."
            )
    polygon = Polygon(rings[0], rings[1:])
    if not polygon.is_valid or polygon.is_empty:
        raise Refused(
            f"The outline crosses or touches itself ({_valid_words(polygon)}).",
            where=where,
            remedy="Draw it there again.",
        )
    turned = orient(polygon)
    if list(turned.exterior.coords) != list(polygon.exterior.coords):
        mended.append("The outline was turned clockwise; it now runs counter-clockwise.")
    area_m2, _ = ELLIPSOID.geometry_area_perimeter(turned)
    coordinates = [[list(point) for point in turned.exterior.coords]]
    coordinates += [[list(point) for point in ring.coords] for ring in turned.interiors]
    return Outline(
        {"type": "Polygon", "coordinates": coordinates},
        abs(area_m2) / SQUARE_KM_M2,
        tuple(dict.fromkeys(mended)),
    )


def _rings(geometry: object, where: str) -> list[list[tuple[float, float]]]:
    """Give the rings of a polygon as bare positions; what stands above the ground is left out."""
    if not isinstance(geometry, dict) or geometry.get("type") != "Polygon":
        raise Refused("This is no polygon.", where=where, remedy="Send one GeoJSON polygon.")
    rings = geometry.get("coordinates")
    if not isinstance(rings, list) or not rings or not all(isinstance(one, list) for one in rings):
        raise Refused("The polygon has no points.", where=where, remedy="Draw it again.")
    if sum(len(ring) for ring in rings) > RING_MOST:
        raise Refused(
            f"The outline has more than {RING_MOST} points.", where=where, remedy="Thin it out."
        )
    return [[read_point(point, where) for point in ring] for ring in rings]


def read_point(point: object, where: str) -> tuple[float, float]:
    """Read one position of a shape: longitude and latitude; a height is left out.

    Raises
    ------
    Refused
        If it is no longitude and latitude.
    """
    numbers = point[:2] if isinstance(point, list) else []
    plain = [
        float(number)
        for number in numbers
        if isinstance(number, int | float) and not isinstance(number, bool)
    ]
    if len(plain) != len(HALVES) or not all(math.isfinite(number) for number in plain):
        raise Refused("A point is not two numbers.", where=where, remedy="Draw it again.")
    lon, lat = plain
    if abs(lon) > LONGITUDE_MOST or abs(lat) > LATITUDE_MOST:
        raise Refused(
            f"{NOT_DEGREES} The first point that cannot be one is {lon:g}, {lat:g}.",
            where=where,
            remedy="Save it in WGS 84 degrees, longitude first.",
        )
    return lon, lat


def _valid_words(polygon: Polygon) -> str:
    """Give shapely's reason with its place, as longitude and latitude."""
    words, _, place = is_valid_reason(polygon).partition("[")
    return f"{words.strip().lower()} at {', '.join(place.rstrip(']').split())}" if place else words


@lru_cache(maxsize=64)
def _grid(origin: tuple[float, float]) -> Transformer:
    lon, lat = origin
    local = f"+proj=aeqd +lon_0={lon!r} +lat_0={lat!r} +datum=WGS84 +units=m"
    return Transformer.from_crs("OGC:CRS84", local, always_xy=True)
