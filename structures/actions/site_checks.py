"""What is doubted about a site's position and answers; kept with the site until it is decided."""

from __future__ import annotations

from bisect import bisect_left, bisect_right, insort
from dataclasses import dataclass
from operator import attrgetter
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.ground.place import distance_m, outside_m

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.models import Site

ACCURACY_MOST_M: Final = 30.0  # PL-03
SAME_PLACE_M: Final = 50.0  # PL-04
DEGREE_LEAST_M: Final = 110_000.0  # metres of latitude in a degree, rounded down: 110,574 or more
KM_M: Final = 1000.0  # exact


@dataclass(frozen=True, slots=True, order=True)
class Neighbour:
    """Another site as far as its position matters."""

    lat: float
    lon: float
    code: str


class Neighbourhood:
    """Sites in the order of their latitude, so that the near ones are found among thousands."""

    def __init__(self, sites: Iterable[Neighbour]) -> None:
        self._sites = sorted(sites)

    def add(self, site: Neighbour) -> None:
        insort(self._sites, site)

    def near(self, lat: float) -> list[Neighbour]:
        """Give the sites within the band of latitude in which one can be the same place."""
        reach = SAME_PLACE_M / DEGREE_LEAST_M
        first = bisect_left(self._sites, lat - reach, key=attrgetter("lat"))
        end = bisect_right(self._sites, lat + reach, key=attrgetter("lat"))
        return self._sites[first:end]


def site_findings(site: Site, others: Neighbourhood, where: str) -> tuple[Finding, ...]:
    """Judge a site by its watershed, its neighbours and what was not answered (PL-02 to PL-05)."""
    found = [
        *_outside(site, where),
        *_coarse(site, where),
        *_same_place(site, others, where),
    ]
    if not site.downstream_users.strip():
        what = f"Who uses water below {site.code} is blank."
        remedy = 'Write the list, or "none found within" so many km.'
        found.append(Finding(where, "downstream_users", what, remedy, "hold", "PL-05"))
    return tuple(found)


def _outside(site: Site, where: str) -> Iterable[Finding]:
    outline = site.watershed.outline
    if outline is None:
        return
    away_m = outside_m((site.lon, site.lat), outline)
    if away_m == 0.0:
        return
    what = f"{site.code} lies {away_m / KM_M:.1f} km outside {site.watershed.name}."
    remedy = "Check for latitude and longitude swapped, or choose the other watershed."
    swapped = (site.lat, site.lon)
    if abs(site.lon) <= 90.0 and outside_m(swapped, outline) == 0.0:
        remedy = (
            f"Swapped, latitude {site.lon:g} and longitude {site.lat:g} lie inside: is that meant?"
        )
    yield Finding(where, "lat", what, remedy, "hold", "PL-02")


def _coarse(site: Site, where: str) -> Iterable[Finding]:
    if site.accuracy_m is not None and site.accuracy_m > ACCURACY_MOST_M:
        what = f"Position of {site.code} is only good to {site.accuracy_m:g} m."
        remedy = "Take it again under open sky if you can."
        yield Finding(where, "accuracy_m", what, remedy, "warn", "PL-03")


def _same_place(site: Site, others: Neighbourhood, where: str) -> Iterable[Finding]:
    here = (site.lon, site.lat)
    away = [
        (distance_m(here, (other.lon, other.lat)), other.code)
        for other in others.near(site.lat)
        if other.code != site.code
    ]
    if away and min(away)[0] <= SAME_PLACE_M:
        nearest_m, code = min(away)
        what = f"{code} is {nearest_m:.0f} m away."
        remedy = "Same place? Join them, or write why both stay."
        yield Finding(where, "lat", what, remedy, "hold", "PL-04")
