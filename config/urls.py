"""Every address: the two of health, then the pages of both apps."""

from __future__ import annotations

from django.urls import include, path

from config import health

urlpatterns = [
    path("healthz", health.healthz, name="healthz"),
    path("readyz", health.readyz, name="readyz"),
    path("", include("costing.web.urls")),
    path("", include("structures.web.urls")),
]
