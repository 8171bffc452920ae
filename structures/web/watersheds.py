"""Watersheds: the list, and one with its map, the bed of its streams and its sites."""

from __future__ import annotations

from django.shortcuts import get_object_or_404, render
from django.views.decorators.http import require_safe

from structures.drawing.long_profile import draw_profile
from structures.drawing.map import draw_map
from structures.life.stages import STAGES
from structures.queries.districts import visible_watersheds
from structures.queries.map import outlines_of, reaches_of, spots_of
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
    outlines, spots = outlines_of([found]), spots_of(sites)
    context = {
        "watershed": found,
        "page": sheet_of(request, sites),
        "stages": STAGES,
        "profiles": _profiles(request.user, found),
    }
    if outlines or spots:
        context["map_wide"] = draw_map(outlines, spots)
        context["map_narrow"] = draw_map(outlines, spots, name="map-narrow", narrow=True)
    return render(request, "structures/watershed.html", context)


def _profiles(user, found):
    """Drawings of the bed by stream, wide and narrow, with their figures."""
    drawn = []
    for place, (stream, reaches) in enumerate(reaches_of(user, found).items(), start=1):
        name = stream or found.name
        wide = draw_profile(reaches, name, name=f"profile-{place}")
        narrow = draw_profile(reaches, name, name=f"profile-narrow-{place}", narrow=True)
        drawn.append({"stream": name, "wide": wide, "narrow": narrow, "reaches": reaches})
    return drawn
