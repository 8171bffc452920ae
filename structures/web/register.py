"""The register: of the reader's districts, of one structure, and one entry by the code on paper."""

from __future__ import annotations

from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_safe

from structures.life.short_code import read_code
from structures.queries.districts import visible_districts
from structures.queries.photos import visible_photos
from structures.queries.register import (
    corrections_of,
    entries_of,
    entry_by_code,
    newest_entries,
    with_acts,
)
from structures.queries.structures import midnight_of, moves_before, visible_structures
from structures.web.lists import sheet_of

DASH = "\N{EN DASH}"


@require_safe
def register(request):
    """All entries the reader may see, newest first; a code in the search line opens its entry."""
    text = request.GET.get("q", "").strip()
    if read_code(text):
        found = entry_by_code(request.user, text)
        if found is not None:
            return redirect("structures:entry-by-code", found.code)
    district = request.GET.get("district", "")
    entries = newest_entries(request.user)
    if district:
        here = get_object_or_404(visible_districts(request.user), code=district)
        entries = entries.filter(chain__district=here)
    if text:
        entries = with_acts(entries, text)
    context = {
        "page": sheet_of(request, entries),
        "text": text,
        "district": district,
        "districts": visible_districts(request.user),
    }
    return render(request, "structures/register.html", context)


@require_safe
def thread(request, code):
    """Everything of one structure from the first photo to the last payment, oldest first."""
    structure = get_object_or_404(visible_structures(request.user), site__code=code)
    entries = [(one.at, "entry", one) for one in entries_of(request.user, code)]
    photos = [
        (one.received_at, "photo", one)
        for one in visible_photos(request.user).filter(site=structure.site)
    ]
    moves = [(midnight_of(one), "move", one) for one in moves_before(structure)]
    lines = sorted(entries + photos + moves, key=lambda line: line[0])
    context = {"site": structure.site, "structure": structure, "page": sheet_of(request, lines)}
    return render(request, "structures/thread.html", context)


@require_safe
def entry(request, code):
    found = entry_by_code(request.user, code)
    if found is None:
        raise Http404(_("No entry with this code is shown to you."))
    context = {
        "entry": found,
        "content": lines_of(found.content),
        "corrections": corrections_of(request.user, found),
        "site": None if found.structure is None else found.structure.site,
    }
    return render(request, "structures/register_entry.html", context)


def lines_of(content, lead=""):
    """Give the content of an entry as lines: the way to a value in words, and the value."""
    lines = []
    items = content.items() if isinstance(content, dict) else enumerate(content, start=1)
    for key, value in items:
        name = f"{lead}{str(key).replace('_', ' ')}"
        if isinstance(value, dict | list) and value:
            lines += lines_of(value, f"{name}, ")
        else:
            lines.append((name, DASH if value in (None, "", [], {}) else value))
    return lines
