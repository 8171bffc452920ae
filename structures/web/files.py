"""Files received: what came, from whom, and what became of it."""

from __future__ import annotations

from django.shortcuts import get_object_or_404, render
from django.views.decorators.http import require_safe

from structures.queries.received import received_files
from structures.web.lists import sheet_of


@require_safe
def files(request):
    context = {"page": sheet_of(request, received_files(request.user))}
    return render(request, "structures/files.html", context)


@require_safe
def file(request, file_id):
    found = get_object_or_404(received_files(request.user), pk=file_id)
    return render(request, "structures/file.html", {"file": found})
