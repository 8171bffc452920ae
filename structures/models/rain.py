"""Rain gauges and what they caught; a day that was not read is no dry day."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from structures.models.inbox import Upload
from structures.models.watershed import CODE, District
from structures.validators import validate_latitude, validate_longitude


class Gauge(models.Model):
    """A rain gauge; its weight for a watershed stands with the watershed, by the same code."""

    district = models.ForeignKey(District, on_delete=models.PROTECT, related_name="gauges")
    code = models.CharField(max_length=40, validators=[CODE])
    name = models.CharField(max_length=120, blank=True)
    lat = models.FloatField(null=True, blank=True, validators=[validate_latitude])
    lon = models.FloatField(null=True, blank=True, validators=[validate_longitude])

    class Meta:
        ordering = ("code",)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("district", "code"), name="gauge_once"),
        )

    def __str__(self) -> str:
        return self.code


class RainDay(models.Model):
    """Rain of a day, or of the days up to it where `days` is more than one. Null: not read."""

    gauge = models.ForeignKey(Gauge, on_delete=models.PROTECT, related_name="days")
    day = models.DateField()
    rain_mm = models.FloatField(null=True)
    trace = models.BooleanField(default=False)
    days = models.PositiveSmallIntegerField(default=1)
    remark = models.CharField(max_length=200, blank=True)
    rules = models.JSONField(default=list)
    upload = models.ForeignKey(Upload, null=True, on_delete=models.PROTECT, related_name="+")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")

    class Meta:
        ordering = ("gauge_id", "day")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("gauge", "day"), name="rain_day_once"),
            models.CheckConstraint(
                condition=Q(rain_mm__isnull=True) | Q(rain_mm__gte=0.0), name="rain_falls"
            ),
            models.CheckConstraint(condition=Q(days__gte=1), name="rain_of_a_day_or_more"),
        )

    def __str__(self) -> str:
        return f"{self.day}: {self.rain_mm} mm"


class RainMonth(models.Model):
    """Rain of a month where only months are known; `month` is its first day."""

    gauge = models.ForeignKey(Gauge, on_delete=models.PROTECT, related_name="months")
    month = models.DateField()
    rain_mm = models.FloatField(null=True)
    upload = models.ForeignKey(Upload, null=True, on_delete=models.PROTECT, related_name="+")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")

    class Meta:
        ordering = ("gauge_id", "month")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("gauge", "month"), name="rain_month_once"),
            models.CheckConstraint(
                condition=Q(rain_mm__isnull=True) | Q(rain_mm__gte=0.0), name="rain_month_falls"
            ),
            models.CheckConstraint(condition=Q(month__day=1), name="rain_month_by_its_first_day"),
        )

    def __str__(self) -> str:
        return f"{self.month:%Y-%m}: {self.rain_mm} mm"
