"""A candidate site and the bed along its stream."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q
from simple_history.models import HistoricalRecords

from structures.models.watershed import CODE, Stream, Watershed
from structures.validators import validate_latitude, validate_longitude


class Site(models.Model):
    """A place where a wall could stand; its code is never used twice.

    `downstream_users` blank means "not answered"; "none found" is an answer. `revision` counts
    the edits: who changes a site says which one they saw.
    """

    watershed = models.ForeignKey(Watershed, on_delete=models.PROTECT, related_name="sites")
    stream = models.ForeignKey(
        Stream, null=True, blank=True, on_delete=models.PROTECT, related_name="sites"
    )
    code = models.CharField(max_length=40, unique=True, validators=[CODE])
    name = models.CharField(max_length=120, blank=True)
    lat = models.FloatField(validators=[validate_latitude])
    lon = models.FloatField(validators=[validate_longitude])
    accuracy_m = models.FloatField(null=True, blank=True)
    benchmark = models.CharField(max_length=300, blank=True)
    benchmark_level_m = models.FloatField(null=True, blank=True)
    bed_level_m = models.FloatField(null=True, blank=True)
    bed_slope = models.FloatField(null=True, blank=True)
    catchment_km2 = models.FloatField(null=True, blank=True)
    water_level_m = models.FloatField(null=True, blank=True)
    village_upstream = models.CharField(max_length=120, blank=True)
    village_downstream = models.CharField(max_length=120, blank=True)
    downstream_users = models.TextField(blank=True)
    findings = models.JSONField(default=list, blank=True)
    revision = models.PositiveIntegerField(default=1)
    changed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    changed_at = models.DateTimeField(auto_now=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("code",)
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(lat__range=(-90.0, 90.0), lon__range=(-180.0, 180.0)),
                name="site_lies_on_the_globe",
            ),
            models.CheckConstraint(
                condition=Q(accuracy_m__isnull=True) | Q(accuracy_m__gt=0.0),
                name="site_accuracy_is_positive",
            ),
            models.CheckConstraint(
                condition=Q(bed_slope__isnull=True) | Q(bed_slope__gt=0.0, bed_slope__lte=0.5),
                name="site_bed_falls_downstream",
            ),
            models.CheckConstraint(
                condition=Q(catchment_km2__isnull=True) | Q(catchment_km2__gt=0.0),
                name="site_catchment_is_positive",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code} {self.name}".strip()


class LongProfilePoint(models.Model):
    """Level of the bed along the stream; distance upstream of the site, minus downstream."""

    site = models.ForeignKey(Site, on_delete=models.PROTECT, related_name="long_profile")
    distance_upstream_m = models.FloatField()
    bed_level_m = models.FloatField()

    class Meta:
        ordering = ("site_id", "distance_upstream_m")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("site", "distance_upstream_m"), name="profile_point_once"
            ),
        )

    def __str__(self) -> str:
        return f"{self.distance_upstream_m:g} m: {self.bed_level_m:g} m"
