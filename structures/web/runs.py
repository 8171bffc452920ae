"""Background work: mine and that on my sites, one run with its progress, cancel."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_POST, require_safe

from structures.queries.runs import site_of_run, visible_runs
from structures.runs.book import ask_cancel
from structures.web.lists import sheet_of

if TYPE_CHECKING:
    from uuid import UUID

    from django.http import HttpRequest, HttpResponse


@require_safe
def runs(request: HttpRequest) -> HttpResponse:
    return render(
        request, "structures/runs.html", {"page": sheet_of(request, visible_runs(request.user))}
    )


@require_safe
def run(request: HttpRequest, run_id: UUID) -> HttpResponse:
    found = get_object_or_404(visible_runs(request.user), pk=run_id)
    return render(request, "structures/run.html", {"run": found, "code": site_of_run(found)})


@require_POST
def cancel(request: HttpRequest, run_id: UUID) -> HttpResponse:
    found = get_object_or_404(visible_runs(request.user), pk=run_id)
    if found.asked_by_id == request.user.pk:
        ask_cancel(found.pk)
    return redirect("structures:run", found.pk)
