"""When a stream first ran in each year: what the dry-season clock is set by."""

from __future__ import annotations

from typing import ClassVar

from django.db import models

from structures.models.watershed import Stream


class FirstRun(models.Model):
    stream = models.ForeignKey(Stream, on_delete=models.PROTECT, related_name="first_runs")
    year = models.PositiveSmallIntegerField()
    first_run_on = models.DateField()

    class Meta:
        ordering = ("stream_id", "year")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("stream", "year"), name="first_run_once_a_year"),
        )

    def __str__(self) -> str:
        return f"{self.first_run_on}"
