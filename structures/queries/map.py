"""What the map and the long profiles show of the sites that a user may see."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures import access
from structures.drawing.long_profile import Reach
from structures.drawing.map import Outline, Spot
from structures.ground.place import distance_m
from structures.models import LongProfilePoint

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.models import Site, User, Watershed


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


def spots_of(sites: Iterable[Site]) -> list[Spot]:
    return [Spot(one.code, one.name, (one.lon, one.lat), one.structure.stage) for one in sites]


def reaches_of(user: User, watershed: Watershed) -> dict[str, list[Reach]]:
    """Levelled bed of a watershed's sites by stream, in order downstream.

    A site's place on the way is the sum of the straight distances from site to site; where a
    stream's sites were levelled to one bench mark, the higher bed lies upstream.
    """
    points: dict[int, list[tuple[float, float]]] = {}
    rows = LongProfilePoint.objects.filter(site__in=access.sites(user), site__watershed=watershed)
    for site_id, up_m, level_m in rows.values_list(
        "site_id", "distance_upstream_m", "bed_level_m"
    ).order_by("site_id", "distance_upstream_m"):
        points.setdefault(site_id, []).append((up_m, level_m))
    streams: dict[str, list[Site]] = {}
    for site in access.sites(user).filter(pk__in=points).select_related("stream"):
        if len(points[site.pk]) > 1:
            streams.setdefault(site.stream.name if site.stream else "", []).append(site)
    return {name: _in_order(sites, points) for name, sites in sorted(streams.items())}


def _in_order(sites: list[Site], points: dict[int, list[tuple[float, float]]]) -> list[Reach]:
    def bed_m(site: Site) -> float:
        return min(points[site.pk], key=lambda point: abs(point[0]))[1]

    reaches, at_m, before = [], 0.0, None
    for site in sorted(sites, key=bed_m, reverse=True):
        if before is not None:
            at_m += distance_m((before.lon, before.lat), (site.lon, site.lat))
        reaches.append(Reach(site.code, at_m, tuple(points[site.pk])))
        before = site
    return reaches
