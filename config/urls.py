"""Every address: the two of health, the pages of both apps, and the API under /api/v1/."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib.auth.decorators import login_not_required
from django.urls import include, path, re_path
from django.views.defaults import server_error

from config import health
from structures.api.problems import broken, nowhere

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

API = "api/v1/"

urlpatterns = [
    path("healthz", health.healthz, name="healthz"),
    path("readyz", health.readyz, name="readyz"),
    path(API, include("structures.api.urls")),
    path(API, include("costing.api.urls")),
    re_path(rf"^{API}", login_not_required(nowhere)),
    path("", include("costing.web.urls")),
    path("", include("structures.web.urls")),
]


def handler500(request: HttpRequest) -> HttpResponse:
    """A device is told of a defect in the words of a problem, a person on a page."""
    return broken(request) if request.path.startswith(f"/{API}") else server_error(request)
