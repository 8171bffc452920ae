"""Every page that shows money, on one screen."""

from __future__ import annotations

from django.urls import path

from costing.web import (
    bills,
    contracts,
    decisions,
    estimates,
    front,
    money_lines,
    moves,
    notices,
    options,
    schedules,
)

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
    path("notices/", notices.notices, name="notices"),
    path("decisions/", decisions.decisions, name="decisions"),
    path("decisions/<str:code>/", decisions.decision, name="decision"),
    path("decisions/<str:code>/acts/<str:act>/", decisions.decide, name="decide"),
    path("sanctions/<int:pk>/", decisions.sanction_order, name="sanction-order"),
    path("money-lines/", money_lines.money_lines, name="money-lines"),
    path("money-lines/<int:pk>/", money_lines.money_line, name="money-line"),
    path("sites/<str:code>/moves/<str:to>/", moves.move, name="move"),
    path("sites/<str:code>/contract/", contracts.contract, name="contract"),
    path("sites/<str:code>/contract/new/", contracts.new_contract, name="new-contract"),
    path("contracts/<int:pk>/", contracts.contract_version, name="contract-version"),
    path("sites/<str:code>/bills/", bills.bills, name="bills"),
    path("sites/<str:code>/bills/new/", bills.new_bill, name="new-bill"),
    path("bills/<int:pk>/", bills.bill, name="bill"),
    path("bills/<int:pk>/acts/<str:act>/", bills.bill_act, name="bill-act"),
    path("bills/lines/<int:line>/", bills.held_line, name="held-line"),
    path("sites/<str:code>/forecast/", options.forecast, name="forecast"),
    path("options/<int:pk>/", options.option, name="option"),
    path("rates/", schedules.rates, name="rates"),
    path("rates/new/", schedules.new_schedule, name="new-schedule"),
    path("rates/<int:pk>/", schedules.schedule, name="schedule"),
    path(
        "rates/<int:pk>/against/<int:other>/", schedules.schedule_against, name="schedule-against"
    ),
]
