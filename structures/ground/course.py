"""The course of a stream: its line on the map, and how far along it a site lies.

Positions are longitude and latitude on WGS 84, in degrees, longitude first (RFC 7946).
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, NamedTuple

from shapely import line_merge
from shapely.geometry import LineString, MultiLineString, Point

from structures.errors import Refused
from structures.ground.place import on_grid, read_point

if TYPE_CHECKING:
    from collections.abc import Sequence

COURSE_LEAST: Final = 2  # RFC 7946 3.1.4: a line has two positions or more
COURSE_MOST: Final = 20_000  # project choice, as for an outline
KINDS: Final = ("LineString", "MultiLineString")

Line = list[tuple[float, float]]


class Foot(NamedTuple):
    """The point of a course nearest to a site: how far along the course, how far from the site."""

    along_m: float
    off_m: float


def read_course(geometry: object, where: str) -> dict[str, Any]:
    """Read a GeoJSON line or several; heights are left out, a point given twice running is kept once.

    Source: RFC 7946 3.1.4 and 3.1.5.

    Parameters
    ----------
    geometry
        A GeoJSON geometry of type LineString or MultiLineString.
    where
        The place that a refusal names.

    Raises
    ------
    Refused
        If it is no line of longitudes and latitudes.
    """
    kind = geometry.get("type") if isinstance(geometry, dict) else None
    if kind not in KINDS:
        raise Refused(
            "This is no line.", where=where, remedy="Send a GeoJSON LineString or MultiLineString."
        )
    given = geometry.get("coordinates")
    pieces = [given] if kind == "LineString" else given
    if not isinstance(pieces, list) or not pieces or not all(isinstance(p, list) for p in pieces):
        raise Refused("The line has no points.", where=where, remedy="Draw it again.")
    if sum(len(piece) for piece in pieces) > COURSE_MOST:
        raise Refused(
            f"The line has more than {COURSE_MOST} points.", where=where, remedy="Thin it out."
        )
    lines = [_line(piece, where) for piece in pieces]
    if kind == "LineString":
        return {"type": kind, "coordinates": lines[0]}
    return {"type": kind, "coordinates": lines}


def lines_of(course: dict[str, Any]) -> list[Line]:
    """Give a kept course as its lines, each a list of positions."""
    lines = course["coordinates"]
    lines = [lines] if course["type"] == "LineString" else lines
    return [[(lon, lat) for lon, lat in line] for line in lines]


def feet_on(course: dict[str, Any], positions: Sequence[tuple[float, float]]) -> list[Foot] | None:
    """Give the foot of each position on a course; None where its lines do not join to one.

    Source: nearest point of the line on an azimuthal equidistant grid about the middle of the
    course (Snyder 1987, chapter 25, by PROJ): lengths good to 1 in 10,000 within some 100 km.

    Parameters
    ----------
    course
        A kept course; `along_m` counts from the end at which it is drawn to begin.
    positions
        Longitude and latitude of each, shape (n,).
    """
    lines = lines_of(course)
    lons, lats = zip(*(point for line in lines for point in line), strict=True)
    middle = ((min(lons) + max(lons)) / 2.0, (min(lats) + max(lats)) / 2.0)
    line = line_merge(MultiLineString([on_grid(one, middle) for one in lines]))
    if not isinstance(line, LineString):
        return None
    places = [Point(one) for one in on_grid(positions, middle)] if positions else []
    return [Foot(float(line.project(one)), float(line.distance(one))) for one in places]


def _line(piece: list[Any], where: str) -> list[list[float]]:
    points: list[list[float]] = []
    for given in piece:
        point = list(read_point(given, where))
        if not points or points[-1] != point:
            points.append(point)
    if len(points) < COURSE_LEAST:
        raise Refused(
            "A line has two different points or more.", where=where, remedy="Draw it again."
        )
    return points
