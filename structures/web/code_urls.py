"""Addresses of one-time codes: the second step, setting it up, taking a lost one away."""

from __future__ import annotations

from django.urls import path

from structures.web import people, second_step

urlpatterns = [
    path("second-step/", second_step.second_step, name="second-step"),
    path("one-time-codes/", second_step.one_time_codes, name="one-time-codes"),
    path("one-time-codes/begin/", second_step.begin, name="begin-codes"),
    path("one-time-codes/set-up/", second_step.set_up, name="set-up-codes"),
    path("one-time-codes/list/", second_step.renew_list, name="renew-list"),
    path("factor-resets/", second_step.resets, name="factor-resets"),
    path("factor-resets/<int:reset_id>/", second_step.agree, name="agree-reset"),
    path("people/<int:user_id>/second-factor/", people.ask_factor_reset, name="ask-reset"),
]
