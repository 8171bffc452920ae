"""Every page that shows money, on one screen."""

from __future__ import annotations

from django.urls import path

from costing.web import estimates, front, schedules

app_name = "costing"

urlpatterns = [
    path("", front.front, name="front"),
    path("survey-pack.schema.json", front.pack_schema, name="pack-schema"),
    path("appraisals/<uuid:run_id>/", front.appraisal, name="appraisal"),
    path("appraisals/<uuid:run_id>/cancel", front.cancel, name="cancel"),
    path("appraisals/<uuid:run_id>/<str:name>", front.document, name="document"),
    path("sites/<str:code>/estimates/", estimates.estimates, name="estimates"),
    path("estimates/<int:pk>/", estimates.estimate, name="estimate"),
    path(
        "estimates/<int:pk>/against/<int:other>/",
        estimates.estimate_against,
        name="estimate-against",
    ),
    path("estimates/<int:pk>/<str:name>", estimates.estimate_document, name="estimate-document"),
    path("rates/", schedules.rates, name="rates"),
    path("rates/new/", schedules.new_schedule, name="new-schedule"),
    path("rates/<int:pk>/", schedules.schedule, name="schedule"),
    path(
        "rates/<int:pk>/against/<int:other>/", schedules.schedule_against, name="schedule-against"
    ),
]
