"""What is done by time, and what an administrator must have tried."""

from __future__ import annotations

from django.db import models


class Job(models.Model):
    """A piece of work done once a day by whichever worker claims the day first."""

    name = models.CharField(primary_key=True, max_length=40)
    last_done_on = models.DateField(null=True)

    def __str__(self) -> str:
        return f"{self.name}, last done on {self.last_done_on}"


class RestoreTrial(models.Model):
    """A backup was restored somewhere to see whether it can be; the result in one sentence."""

    at = models.DateTimeField(auto_now_add=True)
    backup_made_at = models.DateTimeField(null=True)
    digest = models.CharField(max_length=64)
    rows = models.PositiveBigIntegerField(null=True)
    files = models.PositiveIntegerField(null=True)
    whole = models.BooleanField()
    told = models.TextField()

    class Meta:
        ordering = ("-at",)

    def __str__(self) -> str:
        return f"restore tried at {self.at:%Y-%m-%d %H:%M}"
