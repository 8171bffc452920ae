"""The district, its watersheds, their streams and rain gauges."""

from __future__ import annotations

from typing import ClassVar

from django.core.validators import RegexValidator
from django.db import models
from django.db.models import Q
from simple_history.models import HistoricalRecords

from structures.intake.fields import CODE_PATTERN
from structures.validators import (
    validate_course,
    validate_currency,
    validate_outline,
    validate_zone,
)

CODE = RegexValidator(CODE_PATTERN, "Up to 40 letters, digits, - _ or . without blanks.")


class District(models.Model):
    """One office with its zone, currency and water year.

    `as_of` is the day that counts as today in an invented district; a real one has none.
    """

    code = models.CharField(max_length=40, unique=True, validators=[CODE])
    name = models.CharField(max_length=120)
    zone = models.CharField(max_length=60, default="UTC", validators=[validate_zone])
    currency = models.CharField(max_length=3, validators=[validate_currency])
    water_year_month = models.PositiveSmallIntegerField(default=6)
    water_year_day = models.PositiveSmallIntegerField(default=1)
    invented = models.BooleanField(default=False)
    as_of = models.DateField(null=True, blank=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("code",)
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(water_year_month__range=(1, 12), water_year_day__range=(1, 31)),
                name="district_water_year_is_a_day",
            ),
            models.CheckConstraint(
                condition=Q(as_of__isnull=True) | Q(invented=True),
                name="district_only_invented_stands_still",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code} {self.name}"


class Watershed(models.Model):
    """A watershed with its outline (GeoJSON polygon, WGS84, longitude first) and its area."""

    district = models.ForeignKey(District, on_delete=models.PROTECT, related_name="watersheds")
    code = models.CharField(max_length=40, unique=True, validators=[CODE])
    name = models.CharField(max_length=120)
    outline = models.JSONField(null=True, blank=True, validators=[validate_outline])
    area_km2 = models.FloatField(null=True, blank=True)
    findings = models.JSONField(default=list, blank=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("code",)
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(area_km2__isnull=True) | Q(area_km2__gt=0.0),
                name="watershed_area_is_positive",
            ),
            models.CheckConstraint(
                condition=Q(outline__isnull=True, area_km2__isnull=True)
                | Q(outline__isnull=False, area_km2__isnull=False),
                name="watershed_area_goes_with_outline",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code} {self.name}"


class Stream(models.Model):
    """A stream of a watershed; its course is a GeoJSON line, WGS84, where one was handed in."""

    watershed = models.ForeignKey(Watershed, on_delete=models.PROTECT, related_name="streams")
    name = models.CharField(max_length=120)
    course = models.JSONField(null=True, blank=True, validators=[validate_course])

    class Meta:
        ordering = ("name",)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("watershed", "name"), name="stream_named_once"),
        )

    def __str__(self) -> str:
        return self.name


class GaugeWeight(models.Model):
    """How much a rain gauge counts for a watershed; the weights of one add up to one."""

    watershed = models.ForeignKey(Watershed, on_delete=models.PROTECT, related_name="gauges")
    gauge = models.CharField(max_length=40, validators=[CODE])
    weight = models.FloatField(default=1.0)

    class Meta:
        ordering = ("gauge",)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("watershed", "gauge"), name="gauge_weighed_once"),
            models.CheckConstraint(
                condition=Q(weight__gt=0.0, weight__lte=1.0), name="gauge_weight_is_a_share"
            ),
        )

    def __str__(self) -> str:
        return f"{self.gauge} {self.weight:g}"
