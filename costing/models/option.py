"""Forecasts of what a wall will cost with the rock as found, and the papers that ask what to do."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from costing.models.estimate import money_field
from structures.models.unchanging import Unchanging


class Forecast(Unchanging):
    """The exact total at the line re-conditioned on the rock seen so far, and what is still to pay.

    The excesses are null where there is no sum to compare with.
    """

    structure = models.ForeignKey(
        "structures.Structure", on_delete=models.PROTECT, related_name="forecasts"
    )
    run = models.OneToOneField("structures.Run", on_delete=models.PROTECT, related_name="forecast")
    input_digest = models.CharField(max_length=64)
    method = models.CharField(max_length=40)
    currency = models.CharField(max_length=3)
    total = money_field()
    p10 = money_field(null=True)
    p90 = money_field(null=True)
    measured_value = money_field(null=True)
    to_complete = money_field(null=True)
    technical_excess_percent = models.FloatField(null=True)
    administrative_excess_percent = models.FloatField(null=True)
    asks_for_paper = models.BooleanField()
    result = models.JSONField()
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-at")

    def __str__(self) -> str:
        return f"forecast {self.pk} of {self.structure_id}"


class OptionPaper(models.Model):
    """Four costed ways on: go on, step, shift, close. Open until one is decided with a reason."""

    class Way(models.TextChoices):
        GO_ON = "go on", "go on"
        STEP = "step", "step"
        SHIFT = "shift", "shift"
        CLOSE = "close", "close"

    structure = models.ForeignKey(
        "structures.Structure", on_delete=models.PROTECT, related_name="option_papers"
    )
    version = models.PositiveSmallIntegerField()
    forecast = models.ForeignKey(
        Forecast, null=True, on_delete=models.PROTECT, related_name="option_papers"
    )
    strips = models.ManyToManyField("structures.Strip", related_name="option_papers")
    cause = models.TextField()
    ways = models.JSONField()
    digest = models.CharField(max_length=64)
    opened_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    opened_at = models.DateTimeField(auto_now_add=True)
    way = models.CharField(max_length=6, choices=Way, blank=True)
    why = models.TextField(blank=True)
    decided_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    decided_at = models.DateTimeField(null=True)
    entry = models.OneToOneField(
        "structures.Entry", null=True, on_delete=models.PROTECT, related_name="option_paper"
    )

    class Meta:
        ordering = ("structure_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("structure", "version"), name="option_paper_version_once"
            ),
            models.UniqueConstraint(
                fields=("structure",), condition=Q(way=""), name="option_paper_open_once"
            ),
            models.CheckConstraint(
                condition=Q(way="", decided_by__isnull=True, decided_at__isnull=True)
                | (~Q(way="") & ~Q(why="") & Q(decided_by__isnull=False, decided_at__isnull=False)),
                name="option_paper_decided_by_somebody",
            ),
        )

    def __str__(self) -> str:
        return f"option paper {self.version} of {self.structure_id}"
