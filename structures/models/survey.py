"""Surveys as handed in, their tests as rows, and the rock lines that engineers settled on them."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from structures.models.inbox import Upload
from structures.models.site import Site
from structures.models.unchanging import Unchanging


class Survey(Unchanging):
    """One version of a site's survey. `pack` is its canonical JSON form and `digest` its SHA-256.

    `findings` is what the reader doubted but kept; `notes` what a pack has no place for.
    """

    site = models.ForeignKey(Site, on_delete=models.PROTECT, related_name="surveys")
    version = models.PositiveIntegerField()
    upload = models.OneToOneField(Upload, on_delete=models.PROTECT, related_name="survey")
    pack = models.JSONField()
    digest = models.CharField(max_length=64)
    left_toe_m = models.FloatField()
    right_toe_m = models.FloatField()
    findings = models.JSONField(default=list)
    notes = models.JSONField(default=list)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("site_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("site", "version"), name="survey_version_once"),
            models.CheckConstraint(condition=Q(version__gte=1), name="survey_counts_from_one"),
            models.CheckConstraint(
                condition=Q(left_toe_m__lt=F("right_toe_m")), name="survey_toes_in_order"
            ),
        )

    def __str__(self) -> str:
        return f"survey {self.version} of {self.site.code}"


class GroundPoint(Unchanging):
    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="ground")
    offset_m = models.FloatField()
    level_m = models.FloatField()
    note = models.TextField(blank=True)

    class Meta:
        ordering = ("survey_id", "offset_m")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("survey", "offset_m"), name="ground_point_once"),
        )

    def __str__(self) -> str:
        return f"{self.offset_m:g} m: {self.level_m:g} m"


class RockTest(Unchanging):
    """What was seen or proved; not met says only that rock lies below the depth."""

    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="rock_tests")
    offset_m = models.FloatField()
    depth_m = models.FloatField()
    method = models.CharField(max_length=10)
    met_rock = models.BooleanField()
    what = models.CharField(max_length=10)

    class Meta:
        ordering = ("survey_id", "offset_m", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(condition=Q(depth_m__gte=0.0), name="rock_test_goes_down"),
            models.CheckConstraint(
                condition=Q(method__in=("outcrop", "pit", "bore"), what__in=("sheet", "weathered")),
                name="rock_test_is_known",
            ),
        )

    def __str__(self) -> str:
        return f"{self.method} at {self.offset_m:g} m"


class Probe(Unchanging):
    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="probes")
    offset_m = models.FloatField()
    depth_m = models.FloatField()
    refused = models.BooleanField()
    why_stopped = models.TextField(blank=True)

    class Meta:
        ordering = ("survey_id", "offset_m", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(condition=Q(depth_m__gte=0.0), name="probe_goes_down"),
        )

    def __str__(self) -> str:
        return f"probe at {self.offset_m:g} m"


class Sounding(Unchanging):
    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="soundings")
    order = models.PositiveSmallIntegerField()
    label = models.TextField()
    offset_m = models.FloatField()
    array = models.CharField(max_length=12)

    class Meta:
        ordering = ("survey_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("survey", "order"), name="sounding_once"),
            models.CheckConstraint(
                condition=Q(array__in=("schlumberger", "wenner")), name="sounding_array_is_known"
            ),
        )

    def __str__(self) -> str:
        return f"sounding {self.label} at {self.offset_m:g} m"


class SoundingReading(Unchanging):
    sounding = models.ForeignKey(Sounding, on_delete=models.PROTECT, related_name="readings")
    order = models.PositiveSmallIntegerField()
    ab2_m = models.FloatField()
    mn2_m = models.FloatField()
    apparent_resistivity_ohm_m = models.FloatField()
    sd_percent = models.FloatField()

    class Meta:
        ordering = ("sounding_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("sounding", "order"), name="sounding_reading_once"),
            models.CheckConstraint(
                condition=Q(
                    mn2_m__gt=0.0, ab2_m__gt=F("mn2_m"), apparent_resistivity_ohm_m__gt=0.0
                ),
                name="sounding_reading_can_be",
            ),
        )

    def __str__(self) -> str:
        return f"AB/2 {self.ab2_m:g} m: {self.apparent_resistivity_ohm_m:g} ohm m"


class RefractionLine(Unchanging):
    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="refraction")
    order = models.PositiveSmallIntegerField()
    label = models.TextField()
    offset_m = models.FloatField()

    class Meta:
        ordering = ("survey_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("survey", "order"), name="refraction_line_once"),
        )

    def __str__(self) -> str:
        return f"spread {self.label} at {self.offset_m:g} m"


class RefractionPick(Unchanging):
    line = models.ForeignKey(RefractionLine, on_delete=models.PROTECT, related_name="picks")
    order = models.PositiveSmallIntegerField()
    shot_m = models.FloatField()
    geophone_m = models.FloatField()
    time_ms = models.FloatField()

    class Meta:
        ordering = ("line_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("line", "order"), name="refraction_pick_once"),
            models.CheckConstraint(
                condition=Q(time_ms__gte=0.0), name="refraction_pick_after_the_shot"
            ),
        )

    def __str__(self) -> str:
        return f"{self.shot_m:g} to {self.geophone_m:g} m: {self.time_ms:g} ms"


class RockLine(Unchanging):
    """The line that an engineer settled on a survey: its points, why, and on which tests.

    `points` is the `rock_line` of a pack; `rests_on` names tests as `names_of_tests` gives them.
    """

    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="rock_lines")
    version = models.PositiveIntegerField()
    points = models.JSONField()
    digest = models.CharField(max_length=64)
    reason = models.TextField()
    rests_on = models.JSONField(default=list)
    findings = models.JSONField(default=list)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("survey_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("survey", "version"), name="rock_line_version_once"),
            models.CheckConstraint(condition=Q(version__gte=1), name="rock_line_counts_from_one"),
            models.CheckConstraint(condition=~Q(reason=""), name="rock_line_has_a_reason"),
        )

    def __str__(self) -> str:
        return f"rock line {self.version} on {self.survey}"
