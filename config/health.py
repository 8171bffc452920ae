"""/healthz: this process lives. /readyz: database, queue and a worker answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib.auth.decorators import login_not_required
from django.http import JsonResponse
from django.views.decorators.cache import never_cache
from django.views.decorators.http import require_safe

from structures.runs.health import WELL, readiness

if TYPE_CHECKING:
    from django.http import HttpRequest


@login_not_required
@require_safe
@never_cache
def healthz(request: HttpRequest) -> JsonResponse:  # noqa: ARG001 -- the framework's form
    return JsonResponse({"process": WELL})


@login_not_required
@require_safe
@never_cache
def readyz(request: HttpRequest) -> JsonResponse:  # noqa: ARG001 -- the framework's form
    parts = readiness()
    whole = all(answer == WELL for answer in parts.values())
    return JsonResponse(parts, status=200 if whole else 503)
