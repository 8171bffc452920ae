"""Readings of wells as they were sent, and the repairs that stand beside them."""

from __future__ import annotations

import uuid
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q, Value
from django.db.models.functions import Coalesce

from structures.models.inbox import Upload
from structures.models.paper import Photo
from structures.models.wells import MeasuringPoint, Well

NO_DEPTH = -1000.0  # stands for "no depth" where two readings are told apart


class Reading(models.Model):
    """One reading. What was sent is never edited; what counts in its place stands in a repair.

    `depth_m` is below the mark, for a dry well the depth of its bottom, and null where the state
    has none. `level_m` follows from the mark that was valid that day and is computed again when
    marks change. A held or left-out reading is in no comparison.
    """

    class State(models.TextChoices):
        STATIC = "static", "static"
        PUMPING = "pumping", "pumping"
        RECOVERING = "recovering", "recovering"
        NOT_KNOWN = "not known", "not known"
        OBSTRUCTED = "obstructed", "obstructed"
        FLOWING = "flowing", "flowing"
        FLOODED = "flooded", "flooded"

    WITHOUT_DEPTH: ClassVar = (State.OBSTRUCTED, State.FLOWING, State.FLOODED)

    class Standing(models.TextChoices):
        TAKEN = "taken", "taken"
        REPAIRED = "repaired", "repaired"
        HELD = "held", "held"
        LEFT_OUT = "left out", "left out"

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    well = models.ForeignKey(Well, on_delete=models.PROTECT, related_name="readings")
    mark = models.ForeignKey(
        MeasuringPoint, null=True, on_delete=models.PROTECT, related_name="readings"
    )
    read_at = models.DateTimeField()
    state = models.CharField(max_length=10, choices=State)
    dry = models.BooleanField(default=False)
    depth_m = models.FloatField(null=True)
    level_m = models.FloatField(null=True)
    standing = models.CharField(max_length=8, choices=Standing, default=Standing.TAKEN)
    rules = models.JSONField(default=list)
    read_by = models.CharField(max_length=60, blank=True)
    note = models.CharField(max_length=300, blank=True)
    upload = models.ForeignKey(Upload, null=True, on_delete=models.PROTECT, related_name="readings")
    row = models.PositiveIntegerField(null=True)
    photo = models.ForeignKey(Photo, null=True, on_delete=models.PROTECT, related_name="+")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    received_at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("well_id", "read_at")
        indexes = (models.Index(fields=("well", "read_at"), name="reading_of_well"),)
        constraints: ClassVar = (
            # The same value of the same moment is the same reading, however often it is sent.
            models.UniqueConstraint(
                F("well"),
                F("read_at"),
                F("state"),
                F("dry"),
                Coalesce(F("depth_m"), Value(NO_DEPTH)),
                name="reading_kept_once",
            ),
            models.CheckConstraint(
                condition=Q(depth_m__isnull=False)
                | Q(state__in=("obstructed", "flowing", "flooded")),
                name="reading_has_a_depth_or_says_why",
            ),
            models.CheckConstraint(
                condition=Q(dry=False) | Q(depth_m__isnull=False),
                name="reading_dry_names_the_bottom",
            ),
        )

    def __str__(self) -> str:
        return f"{self.well_id}, {self.read_at:%Y-%m-%d %H:%M}"


class Repair(models.Model):
    """A doubt about a reading: the raw value, what is suggested by which rule, what was decided.

    Without a decision the raw value stands, marked. A decision is reversed by a later repair.
    """

    class Decision(models.TextChoices):
        OPEN = "", "not decided"
        SUGGESTED = "suggested", "take what is suggested"
        RAW = "raw", "keep what was sent"
        OTHER = "other", "take another value"
        LEAVE_OUT = "leave out", "leave the reading out"

    reading = models.ForeignKey(Reading, on_delete=models.PROTECT, related_name="repairs")
    field = models.CharField(max_length=20)
    rule = models.CharField(max_length=8)
    raw = models.CharField(max_length=60)
    suggested = models.CharField(max_length=60, blank=True)
    told = models.TextField(blank=True)
    decision = models.CharField(max_length=10, choices=Decision, blank=True)
    value = models.CharField(max_length=60, blank=True)
    why = models.TextField(blank=True)
    decided_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    decided_at = models.DateTimeField(null=True)
    reverses = models.OneToOneField(
        "self", null=True, on_delete=models.PROTECT, related_name="reversed_by"
    )
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("reading_id", "at", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(decision="", decided_by__isnull=True)
                | (~Q(decision="") & ~Q(why="") & Q(decided_by__isnull=False)),
                name="repair_decided_by_somebody",
            ),
            models.UniqueConstraint(
                fields=("reading", "field", "rule"),
                condition=Q(decision=""),
                name="repair_open_once",
            ),
        )

    def __str__(self) -> str:
        return f"{self.rule} on {self.field}"


class ColumnChoice(models.Model):
    """What somebody said the columns of their files mean: asked once, remembered for the sender."""

    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.CASCADE, related_name="+")
    district = models.ForeignKey(
        "structures.District", on_delete=models.CASCADE, related_name="column_choices"
    )
    heading_digest = models.CharField(max_length=64)
    choices = models.JSONField()
    at = models.DateTimeField(auto_now=True)

    class Meta:
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("by", "district", "heading_digest"), name="columns_chosen_once"
            ),
        )

    def __str__(self) -> str:
        return f"columns of {self.by_id}"


class WaterSample(models.Model):
    """What a laboratory measured in raw water, and by which method. It says nothing of drinking."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    well = models.ForeignKey(Well, on_delete=models.PROTECT, related_name="samples")
    taken_on = models.DateField()
    laboratory = models.CharField(max_length=120)
    results = models.JSONField()  # [{"what", "value", "unit", "method", "below"}]
    note = models.TextField(blank=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("well_id", "-taken_on")

    def __str__(self) -> str:
        return f"sample of {self.taken_on}"
