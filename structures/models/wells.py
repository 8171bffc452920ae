"""Wells and observation pipes with their measuring points, and the verdicts on a wall."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q
from simple_history.models import HistoricalRecords

from structures.models.paper import Photo
from structures.models.register import Entry
from structures.models.site import Site
from structures.models.structure import Structure
from structures.models.unchanging import Unchanging
from structures.models.watershed import CODE, Watershed
from structures.validators import validate_latitude, validate_longitude


class Well(models.Model):
    """A well or pipe whose level is read. The owner stands here as initials only.

    `upstream_of_wall_m` is its distance up the stream from its site's wall, minus downstream.
    """

    class Role(models.TextChoices):
        UPSTREAM = "upstream", "upstream of the wall"
        DOWNSTREAM = "downstream", "downstream of the wall"
        CONTROL = "control", "control well"
        OTHER = "other", "other"

    class Kind(models.TextChoices):
        DUG = "dug", "dug well"
        BORED = "bored", "bored well"
        PIPE = "pipe", "observation pipe"

    watershed = models.ForeignKey(Watershed, on_delete=models.PROTECT, related_name="wells")
    site = models.ForeignKey(Site, null=True, on_delete=models.PROTECT, related_name="wells")
    code = models.CharField(max_length=40, unique=True, validators=[CODE])
    name = models.CharField(max_length=120, blank=True)
    other_names = models.JSONField(default=list, blank=True)
    role = models.CharField(max_length=10, choices=Role)
    kind = models.CharField(max_length=5, choices=Kind)
    lat = models.FloatField(null=True, blank=True, validators=[validate_latitude])
    lon = models.FloatField(null=True, blank=True, validators=[validate_longitude])
    diameter_m = models.FloatField(null=True, blank=True)
    ground_level_m = models.FloatField(null=True, blank=True)
    bottom_below_ground_m = models.FloatField(null=True, blank=True)
    bottom_sounded_on = models.DateField(null=True, blank=True)
    upstream_of_wall_m = models.FloatField(null=True, blank=True)
    owner_initials = models.CharField(max_length=10, blank=True)
    owner_consents = models.BooleanField(null=True)
    used_for = models.CharField(max_length=120, blank=True)
    pump = models.CharField(max_length=120, blank=True)
    existed_from = models.DateField(null=True, blank=True)
    ended_on = models.DateField(null=True, blank=True)
    findings = models.JSONField(default=list, blank=True)
    changed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    changed_at = models.DateTimeField(auto_now=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("code",)
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(role__in=("upstream", "downstream", "control", "other")),
                name="well_role_is_known",
            ),
            models.CheckConstraint(
                condition=Q(bottom_below_ground_m__isnull=True) | Q(bottom_below_ground_m__gt=0.0),
                name="well_goes_down",
            ),
            models.CheckConstraint(
                condition=Q(diameter_m__isnull=True) | Q(diameter_m__gt=0.0),
                name="well_has_a_width",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code} {self.name}".strip()


class MeasuringPoint(models.Model):
    """The mark that depths are read from, its level, and the days on which it counts."""

    well = models.ForeignKey(Well, on_delete=models.PROTECT, related_name="marks")
    mark = models.CharField(max_length=20)
    what = models.CharField(max_length=200)
    height_above_ground_m = models.FloatField(null=True)
    level_m = models.FloatField(null=True)
    valid_from = models.DateField()
    valid_to = models.DateField(null=True, blank=True)
    why_changed = models.CharField(max_length=300, blank=True)
    witness = models.CharField(max_length=120, blank=True)
    photo = models.ForeignKey(Photo, null=True, on_delete=models.PROTECT, related_name="+")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    entered_on = models.DateField()
    findings = models.JSONField(default=list, blank=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("well_id", "valid_from")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("well", "mark"), name="mark_named_once"),
            models.UniqueConstraint(fields=("well", "valid_from"), name="mark_begins_once"),
            models.UniqueConstraint(
                fields=("well",), condition=Q(valid_to__isnull=True), name="mark_in_use_once"
            ),
            models.CheckConstraint(
                condition=Q(valid_to__isnull=True) | Q(valid_to__gte=F("valid_from")),
                name="mark_ends_after_it_begins",
            ),
        )

    def __str__(self) -> str:
        return f"{self.mark}, {self.what}"


class Verdict(Unchanging):
    """What a wall does, for one water year: proposed by an engineer, reviewed by another person."""

    class Word(models.TextChoices):
        NOT_KNOWN = "not known", "not known"
        DOES_NOT_HOLD = "does not hold", "does not hold"
        IN_PART = "holds in part", "holds in part"
        HOLDS = "holds", "holds"

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="verdicts")
    water_year = models.PositiveSmallIntegerField()  # the year in which it begins
    version = models.PositiveIntegerField()
    word = models.CharField(max_length=14, choices=Word, default=Word.NOT_KNOWN)
    evidence = models.JSONField(default=dict)
    not_known = models.JSONField(default=list)
    rule = models.CharField(max_length=20, blank=True)
    proposed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    reviewed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    given_on = models.DateField()
    entry = models.OneToOneField(Entry, null=True, on_delete=models.PROTECT, related_name="verdict")

    class Meta:
        ordering = ("structure_id", "-water_year", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("structure", "water_year", "version"), name="verdict_version_once"
            ),
            models.CheckConstraint(
                condition=Q(reviewed_by__isnull=True) | ~Q(reviewed_by=F("proposed_by")),
                name="verdict_reviewed_by_another",
            ),
        )

    def __str__(self) -> str:
        return f"{self.word}, water year {self.water_year}"


class Complaint(Unchanging):
    """What people say of a wall; `from_whom` is a kind of person, not a name."""

    site = models.ForeignKey(Site, on_delete=models.PROTECT, related_name="complaints")
    code = models.CharField(max_length=40, unique=True, validators=[CODE])
    received_on = models.DateField()
    from_whom = models.CharField(max_length=120)
    well = models.ForeignKey(Well, null=True, on_delete=models.PROTECT, related_name="complaints")
    text = models.TextField()
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("site_id", "-received_on")

    def __str__(self) -> str:
        return self.code


class ComplaintAnswer(Unchanging):
    complaint = models.ForeignKey(Complaint, on_delete=models.PROTECT, related_name="answers")
    text = models.TextField()
    evidence = models.JSONField(default=dict)
    closes = models.BooleanField(default=False)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)
    entry = models.OneToOneField(Entry, null=True, on_delete=models.PROTECT, related_name="+")

    class Meta:
        ordering = ("complaint_id", "at")

    def __str__(self) -> str:
        return f"answer {self.pk} to {self.complaint_id}"
