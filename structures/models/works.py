"""The trench: strips, hold points, levels found, looks, day sheets, accidents, alarms."""

from __future__ import annotations

import uuid
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from structures.models.paper import Photo
from structures.models.structure import Structure
from structures.models.unchanging import Unchanging


def _person(*, null: bool = False) -> models.ForeignKey:
    return models.ForeignKey(
        settings.AUTH_USER_MODEL, null=null, on_delete=models.PROTECT, related_name="+"
    )


class Strip(models.Model):
    """A part of the wall by offset, dug and filled as one.

    `covered_unseen`, once set, stays: a trigger of the database holds it.
    """

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="strips")
    number = models.PositiveSmallIntegerField()
    from_m = models.FloatField()
    to_m = models.FloatField()
    drawn_rock_m = models.FloatField(null=True)
    drawn_rock_low_m = models.FloatField(null=True)
    opened_on = models.DateField(null=True)
    covered_on = models.DateField(null=True)
    covered_unseen = models.BooleanField(default=False)
    unseen_what = models.CharField(max_length=200, blank=True)
    halted = models.BooleanField(default=False)

    class Meta:
        ordering = ("structure_id", "number")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "number"), name="strip_number_once"),
            models.CheckConstraint(
                condition=Q(number__gte=1, to_m__gt=F("from_m")), name="strip_has_a_length"
            ),
            models.CheckConstraint(
                condition=Q(covered_on__isnull=True)
                | Q(opened_on__isnull=False, covered_on__gte=F("opened_on")),
                name="strip_is_opened_before_covered",
            ),
            models.CheckConstraint(
                condition=Q(covered_unseen=False) | (Q(covered_on__isnull=False)),
                name="strip_unseen_is_covered",
            ),
        )

    def __str__(self) -> str:
        return f"strip {self.number}"

    @property
    def stands(self) -> str:
        """Where the strip stands, in one word."""
        if self.covered_on is not None:
            return "covered"
        if self.halted:
            return "halted"
        return "open" if self.opened_on is not None else "not begun"


class HoldPoint(models.Model):
    """Inspect before going on: asked for by one person, seen by another.

    `hold` is H1 to H9, and H7.1, H7.2 … for the layers. After a "no" it is asked for again.
    """

    class Result(models.TextChoices):
        WAITING = "", "waiting to be seen"
        GO = "go", "go"
        NOTE = "go with note", "go with note"
        NO = "no", "no"

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    strip = models.ForeignKey(Strip, on_delete=models.PROTECT, related_name="holds")
    hold = models.CharField(max_length=6)
    attempt = models.PositiveSmallIntegerField(default=1)
    asked_at = models.DateTimeField()
    asked_by = _person()
    readings = models.JSONField(default=dict)
    photos = models.ManyToManyField(Photo, blank=True, related_name="holds")
    seen_at = models.DateTimeField(null=True)
    seen_by = _person(null=True)
    result = models.CharField(max_length=12, choices=Result, blank=True)
    note = models.TextField(blank=True)
    # Stored from before the district was kept here; today's rules speak beside it.
    findings = models.JSONField(default=list)

    class Meta:
        ordering = ("strip_id", "asked_at", "hold")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("strip", "hold", "attempt"), name="hold_asked_once"),
            models.CheckConstraint(
                condition=Q(seen_at__isnull=True, seen_by__isnull=True, result="")
                | (Q(seen_at__isnull=False, seen_by__isnull=False) & ~Q(result="")),
                name="hold_seen_has_a_result",
            ),
            models.CheckConstraint(
                condition=Q(seen_by__isnull=True) | ~Q(seen_by=F("asked_by")),
                name="hold_seen_by_another",
            ),
        )

    def __str__(self) -> str:
        return f"{self.hold} of strip {self.strip_id}"


class FoundLevel(Unchanging):
    """Rock as it was seen in the open trench."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    strip = models.ForeignKey(Strip, on_delete=models.PROTECT, related_name="found")
    offset_m = models.FloatField()
    level_m = models.FloatField()
    measured_on = models.DateField()
    by = _person()
    at = models.DateTimeField(auto_now_add=True)
    corrects = models.ForeignKey(
        "self", null=True, on_delete=models.PROTECT, related_name="corrections"
    )

    class Meta:
        ordering = ("strip_id", "offset_m", "at")

    def __str__(self) -> str:
        return f"rock at {self.level_m:g} m, offset {self.offset_m:g} m"


class TrenchLook(Unchanging):
    """The look at an open trench before anybody goes in; `findings` is what the rules said."""

    class Result(models.TextChoices):
        NONE_FOUND = "no stop found", "no stop found"
        STOP = "stop", "stop: nobody goes in"
        NOT_LOOKED = "not looked", "not looked"

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="looks")
    strip = models.ForeignKey(Strip, null=True, on_delete=models.PROTECT, related_name="looks")
    day = models.DateField()
    looked_at = models.TimeField()
    by = _person()
    depth_m = models.FloatField(null=True)
    slope_as_cut = models.FloatField(null=True)
    spoil_back_m = models.FloatField(null=True)
    ladder_within_m = models.FloatField(null=True)
    sides = models.CharField(max_length=200, blank=True)
    crack = models.BooleanField(null=True)
    water = models.CharField(max_length=200, blank=True)
    rain_since_last = models.BooleanField(null=True)
    weather = models.CharField(max_length=120, blank=True)
    result = models.CharField(max_length=14, choices=Result)
    findings = models.JSONField(default=list)
    received_at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-day", "-looked_at")
        indexes = (models.Index(fields=("structure", "day"), name="look_of_the_day"),)

    def __str__(self) -> str:
        return f"look of {self.day}: {self.result}"


class DaySheet(Unchanging):
    """What a day at the trench was; a later sheet of the same day stands beside the first."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="day_sheets")
    day = models.DateField()
    people = models.PositiveSmallIntegerField(null=True)
    machines = models.CharField(max_length=200, blank=True)
    pump_hours = models.FloatField(null=True)
    weather = models.CharField(max_length=120, blank=True)
    done = models.TextField(blank=True)
    by = _person()
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-day", "-at")
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(pump_hours__isnull=True) | Q(pump_hours__gte=0.0),
                name="day_sheet_pumps_forwards",
            ),
        )

    def __str__(self) -> str:
        return f"day sheet of {self.day}"


class Incident(Unchanging):
    """An accident or a near one; never hidden by a later stage, mended only by a later row."""

    class Kind(models.TextChoices):
        HURT = "hurt", "somebody was hurt"
        NEAR = "near", "nearly"
        COLLAPSE = "collapse", "the trench caved in"
        FLOOD = "flood", "water came in"
        OTHER = "other", "other"

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="incidents")
    strip = models.ForeignKey(Strip, null=True, on_delete=models.PROTECT, related_name="incidents")
    day = models.DateField()
    kind = models.CharField(max_length=8, choices=Kind)
    hurt = models.PositiveSmallIntegerField(null=True)
    what = models.TextField()
    done = models.TextField(blank=True)
    adds_to = models.ForeignKey(
        "self", null=True, on_delete=models.PROTECT, related_name="additions"
    )
    by = _person()
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-day", "-at")
        constraints: ClassVar = (
            models.CheckConstraint(condition=~Q(what=""), name="incident_is_told"),
        )

    def __str__(self) -> str:
        return f"{self.get_kind_display()}, {self.day}"


class Alarm(models.Model):
    """A forecast of rain or a stream alarm; while it is set nobody digs on."""

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="alarms")
    why = models.CharField(max_length=300)
    set_by = _person()
    set_at = models.DateTimeField()
    lifted_by = _person(null=True)
    lifted_at = models.DateTimeField(null=True)
    lifted_why = models.CharField(max_length=300, blank=True)

    class Meta:
        ordering = ("structure_id", "-set_at")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("structure",), condition=Q(lifted_at__isnull=True), name="alarm_set_once"
            ),
            models.CheckConstraint(
                condition=Q(lifted_at__isnull=True, lifted_by__isnull=True)
                | Q(lifted_at__isnull=False, lifted_by__isnull=False, lifted_at__gte=F("set_at")),
                name="alarm_is_lifted_by_somebody",
            ),
        )

    def __str__(self) -> str:
        return self.why
