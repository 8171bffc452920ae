"""The head of every page, for its template."""

from __future__ import annotations

from django.utils.functional import SimpleLazyObject

from structures.queries.frame import frame_of


def frame(request):
    """Asked only by pages that show it: an answer without a page costs no query."""
    return {"frame": SimpleLazyObject(lambda: frame_of(request.user))}
