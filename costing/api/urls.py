"""Addresses of the API that speak money, those below a site among them."""

from __future__ import annotations

from django.urls import path
from rest_framework.routers import SimpleRouter

from costing.api import viewsets

router = SimpleRouter(trailing_slash=False)
router.register("rate-schedules", viewsets.RateSchedules, "rate-schedules")
router.register("estimates", viewsets.Estimates, "estimates")
router.register("bills", viewsets.Bills, "bills")

urlpatterns = [
    path(
        "sites/<str:code>/estimates",
        viewsets.SiteEstimates.as_view({"get": "list", "post": "create"}),
        name="site-estimates",
    ),
    path("structures/<str:code>/missing", viewsets.Missing.as_view(), name="structure-missing"),
    *router.urls,
]
