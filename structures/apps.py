"""The app that speaks metres."""

from __future__ import annotations

from django.apps import AppConfig


class StructuresConfig(AppConfig):
    name = "structures"
