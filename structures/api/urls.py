"""Addresses of the API that speak of sites, surveys, runs and devices."""

from __future__ import annotations

from django.urls import path
from rest_framework.routers import SimpleRouter

from structures.api import devices, schema, viewsets, wells, works

router = SimpleRouter(trailing_slash=False)
router.register("watersheds", viewsets.Watersheds, "watersheds")
router.register("sites", viewsets.Sites, "sites")
router.register("surveys", viewsets.Surveys, "surveys")
router.register("soundings", viewsets.Soundings, "soundings")
router.register("structures", viewsets.Structures, "structures")
router.register("strips", works.Strips, "strips")
router.register("wells", wells.Wells, "wells")
router.register("levels", wells.Levels, "levels")
router.register("uploads", viewsets.Uploads, "uploads")
router.register("runs", viewsets.Runs, "runs")

urlpatterns = [
    path("schema", schema.Schema.as_view(), name="schema"),
    path("docs", schema.Docs.as_view(), name="docs"),
    path("survey-pack.schema.json", schema.PackSchema.as_view(), name="pack-schema"),
    path("sign-in", devices.SignIn.as_view(), name="sign-in"),
    path("sign-out", devices.SignOut.as_view(), name="sign-out"),
    path(
        "sites/<str:code>/surveys",
        viewsets.SiteSurveys.as_view({"get": "list", "post": "create"}),
        name="site-surveys",
    ),
    path("parcels", works.Parcels.as_view(), name="parcels"),
    path("photos", works.Photos.as_view(), name="photos"),
    *router.urls,
]
