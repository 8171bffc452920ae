"""Every page that shows money, on one screen."""

from __future__ import annotations

from django.urls import path

from costing.web import decisions, estimates, front, money_lines, moves, schedules

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
    path("decisions/", decisions.decisions, name="decisions"),
    path("decisions/<str:code>/", decisions.decision, name="decision"),
    path("decisions/<str:code>/acts/<str:act>/", decisions.decide, name="decide"),
    path("sanctions/<int:pk>/", decisions.sanction_order, name="sanction-order"),
    path("money-lines/", money_lines.money_lines, name="money-lines"),
    path("money-lines/<int:pk>/", money_lines.money_line, name="money-line"),
    path("sites/<str:code>/moves/<str:to>/", moves.move, name="move"),
    path("rates/", schedules.rates, name="rates"),
    path("rates/new/", schedules.new_schedule, name="new-schedule"),
    path("rates/<int:pk>/", schedules.schedule, name="schedule"),
    path(
        "rates/<int:pk>/against/<int:other>/", schedules.schedule_against, name="schedule-against"
    ),
]
