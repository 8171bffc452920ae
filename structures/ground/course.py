"""The course of a stream: its line on the map, and how far along it a site lies.

Positions are longitude and latitude on WGS 84, in degrees, longitude first (RFC 7946).
"""

from __future__ import annotations

from typing import Any, Final

from structures.errors import Refused
from structures.ground.place import read_point

COURSE_LEAST: Final = 2  # RFC 7946 3.1.4: a line has two positions or more
COURSE_MOST: Final = 20_000  # project choice, as for an outline
KINDS: Final = ("LineString", "MultiLineString")

Line = list[tuple[float, float]]


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
