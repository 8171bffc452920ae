"""Kinds of run that exist only in the copy of the program that a fault test works with."""

from __future__ import annotations

from django.apps import AppConfig


class TrialConfig(AppConfig):
    name = "trial"

    def ready(self):
        import trial.bodies  # noqa: F401, PLC0415 -- registers kinds of run once models exist
