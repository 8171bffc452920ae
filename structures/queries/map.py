"""What the map and the long profiles show of the sites that a user may see."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, NamedTuple

from structures import access
from structures.drawing.long_profile import Reach
from structures.drawing.map import Outline, Run, Spot
from structures.drawing.map_marks import WELL
from structures.ground.course import Foot, feet_on, lines_of
from structures.ground.place import distance_m
from structures.models import LongProfilePoint, Stream, Well

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.models import Site, User, Watershed

OFF_MOST_M: Final = 500.0  # [A] farther from its stream's course a site is not on that line

Points = dict[int, list[tuple[float, float]]]  # levelled points of each site, by its key


class Bed(NamedTuple):
    """The levelled bed of a stream's sites, in order downstream.

    `along_course` says how the way was measured; `why` why it was not along the course.
    """

    stream: str
    reaches: list[Reach]
    along_course: bool
    why: str = ""


def outlines_of(watersheds: Iterable[Watershed]) -> list[Outline]:
    """Outlines of the watersheds that have one."""
    return [
        Outline(
            one.code,
            one.name,
            tuple(tuple((lon, lat) for lon, lat in ring) for ring in one.outline["coordinates"]),
        )
        for one in watersheds
        if one.outline is not None
    ]


def runs_of(watersheds: Iterable[Watershed]) -> list[Run]:
    """Courses of the streams that have one; the watersheds bring their streams with them."""
    return [
        Run(stream.name, tuple(tuple(line) for line in lines_of(stream.course)))
        for one in watersheds
        for stream in one.streams.all()
        if stream.course is not None
    ]


def spots_of(sites: Iterable[Site]) -> list[Spot]:
    return [Spot(one.code, one.name, (one.lon, one.lat), one.structure.stage) for one in sites]


def well_spots_of(user: User, watershed: Watershed) -> list[Spot]:
    """Wells of a watershed that have a position, by their role."""
    found = Well.objects.filter(watershed=watershed, lat__isnull=False, lon__isnull=False)
    return [
        Spot(one.code, one.name, (one.lon, one.lat), f"{WELL} {one.role}")
        for one in found.filter(watershed__in=access.watersheds(user))
    ]


def beds_of(user: User, watershed: Watershed) -> list[Bed]:
    """Levelled bed of a watershed's sites by stream, in order downstream.

    A site's place on the way is its foot on the stream's course. Where there is no such course, the
    way is the sum of the straight distances from site to site; where a stream's sites were levelled
    to one bench mark, the higher bed lies upstream.
    """
    points: Points = {}
    rows = LongProfilePoint.objects.filter(site__in=access.sites(user), site__watershed=watershed)
    for site_id, up_m, level_m in rows.values_list(
        "site_id", "distance_upstream_m", "bed_level_m"
    ).order_by("site_id", "distance_upstream_m"):
        points.setdefault(site_id, []).append((up_m, level_m))
    streams: dict[str, list[Site]] = {}
    for site in access.sites(user).filter(pk__in=points).select_related("stream"):
        if len(points[site.pk]) > 1:
            streams.setdefault(site.stream.name if site.stream else "", []).append(site)
    return [_bed(name, sites, points) for name, sites in sorted(streams.items())]


def _bed(name: str, sites: list[Site], points: Points) -> Bed:
    stream = sites[0].stream
    if stream is None or stream.course is None:
        return Bed(name, _straight(sites, points), along_course=False)
    feet = feet_on(stream.course, [(site.lon, site.lat) for site in sites])
    why = _why_not(stream, sites, feet)
    if feet is None or why:
        return Bed(name, _straight(sites, points), along_course=False, why=why)
    return Bed(name, _along(sites, points, feet), along_course=True)


def _why_not(stream: Stream, sites: list[Site], feet: list[Foot] | None) -> str:
    """Say why a course cannot measure the way from site to site; blank where it can."""
    if feet is None:
        return f"The lines of {stream.name} do not join to one course."
    off_m, code = max((foot.off_m, site.code) for foot, site in zip(feet, sites, strict=True))
    if off_m <= OFF_MOST_M:
        return ""
    return f"{code} lies {off_m:.0f} m from the course of {stream.name}."


def _bed_m(site: Site, points: Points) -> float:
    return min(points[site.pk], key=lambda point: abs(point[0]))[1]


def _along(sites: list[Site], points: Points, feet: list[Foot]) -> list[Reach]:
    """Places along the course; it may have been drawn upwards, so the beds say which way is down."""
    ways = [foot.along_m for foot in feet]
    beds = [_bed_m(site, points) for site in sites]
    middle = sum(ways) / len(ways)
    if sum((way - middle) * bed for way, bed in zip(ways, beds, strict=True)) > 0.0:
        ways = [-way for way in ways]
    first = min(ways)
    placed = sorted(zip(ways, (site.code for site in sites), sites, strict=True))
    return [Reach(code, way - first, tuple(points[site.pk])) for way, code, site in placed]


def _straight(sites: list[Site], points: Points) -> list[Reach]:
    reaches, at_m, before = [], 0.0, None
    for site in sorted(sites, key=lambda one: _bed_m(one, points), reverse=True):
        if before is not None:
            at_m += distance_m((before.lon, before.lat), (site.lon, site.lat))
        reaches.append(Reach(site.code, at_m, tuple(points[site.pk])))
        before = site
    return reaches
