"""Watersheds: the list, and one with its map, the bed of its streams and its sites."""

from __future__ import annotations

from django.shortcuts import get_object_or_404, render
from django.views.decorators.http import require_safe

from structures.drawing.long_profile import draw_profile
from structures.drawing.map import draw_map
from structures.life.stages import STAGES
from structures.queries.districts import visible_watersheds
from structures.queries.map import beds_of, outlines_of, runs_of, spots_of, well_spots_of
from structures.queries.sites import visible_sites
from structures.web.lists import sheet_of


@require_safe
def watersheds(request):
    context = {"page": sheet_of(request, visible_watersheds(request.user).order_by("code"))}
    return render(request, "structures/watersheds.html", context)


@require_safe
def watershed(request, code):
    found = get_object_or_404(visible_watersheds(request.user), code=code)
    sites = visible_sites(request.user).filter(watershed=found)
    spots = [*spots_of(sites), *well_spots_of(request.user, found)]
    shown = outlines_of([found]), spots, runs_of([found])
    context = {
        "watershed": found,
        "page": sheet_of(request, sites),
        "stages": STAGES,
        "uncharted": [one for one in found.streams.all() if one.course is None],
        "profiles": _profiles(request.user, found),
    }
    if any(shown):
        context["map_wide"] = draw_map(*shown)
        context["map_narrow"] = draw_map(*shown, name="map-narrow", narrow=True)
    return render(request, "structures/watershed.html", context)


def _profiles(user, found):
    """Drawings of the bed by stream, wide and narrow, with their figures."""
    drawn = []
    for place, bed in enumerate(beds_of(user, found), start=1):
        stream = bed.stream or found.name
        said = {"along_course": bed.along_course}
        wide = draw_profile(bed.reaches, stream, name=f"profile-{place}", **said)
        narrow = draw_profile(
            bed.reaches, stream, name=f"profile-narrow-{place}", narrow=True, **said
        )
        drawn.append({"stream": stream, "wide": wide, "narrow": narrow, "bed": bed})
    return drawn
