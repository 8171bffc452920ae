"""Every page that shows money, on one screen."""

from __future__ import annotations

from django.urls import path

from costing.web import front

app_name = "costing"

urlpatterns = [
    path("", front.front, name="front"),
    path("survey-pack.schema.json", front.pack_schema, name="pack-schema"),
    path("appraisals/<uuid:run_id>/", front.appraisal, name="appraisal"),
    path("appraisals/<uuid:run_id>/cancel", front.cancel, name="cancel"),
    path("appraisals/<uuid:run_id>/<str:name>", front.document, name="document"),
]
