"""Papers of a structure and the photos and scans that belong to them."""

from __future__ import annotations

import uuid
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from structures.models.structure import Structure
from structures.models.unchanging import Unchanging
from structures.validators import validate_latitude, validate_longitude


class Photo(Unchanging):
    """A photo, or the scan of a signed sheet; its bytes lie under their digest.

    The identifier is made where the photo was taken, so that sending it twice adds nothing. Place
    and time are kept as the device said them, or not at all.
    """

    class Form(models.TextChoices):
        JPEG = "image/jpeg"
        PNG = "image/png"
        WEBP = "image/webp"
        PDF = "application/pdf"

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    site = models.ForeignKey("structures.Site", on_delete=models.PROTECT, related_name="photos")
    sha256 = models.CharField(max_length=64)
    size = models.PositiveIntegerField()
    form = models.CharField(max_length=20, choices=Form)
    what = models.CharField(max_length=200, blank=True)
    taken_at = models.DateTimeField(null=True)
    lat = models.FloatField(null=True, validators=[validate_latitude])
    lon = models.FloatField(null=True, validators=[validate_longitude])
    accuracy_m = models.FloatField(null=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    received_at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("site_id", "-received_at")
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(lat__isnull=True, lon__isnull=True)
                | Q(lat__range=(-90.0, 90.0), lon__range=(-180.0, 180.0)),
                name="photo_lies_on_the_globe",
            ),
        )

    def __str__(self) -> str:
        return self.what or f"photo {self.id}"


class Paper(Unchanging):
    """One filled form, of a kind of `life.papers`; a change is a new version beside the old.

    `about` tells papers of one kind apart: the settlement that was heard, the strip, the season.
    """

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="papers")
    kind = models.CharField(max_length=30)
    about = models.CharField(max_length=120, blank=True)
    version = models.PositiveIntegerField()
    content = models.JSONField()
    findings = models.JSONField(default=list)
    digest = models.CharField(max_length=64)
    photos = models.ManyToManyField(Photo, blank=True, related_name="papers")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "kind", "about", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("structure", "kind", "about", "version"), name="paper_version_once"
            ),
            models.CheckConstraint(condition=Q(version__gte=1), name="paper_counts_from_one"),
        )

    def __str__(self) -> str:
        return f"{self.kind} {self.about}".strip()


class Question(Unchanging):
    """A question on a record of a structure; `about` names the record in words."""

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="questions")
    about = models.CharField(max_length=120)
    text = models.TextField()
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "at", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(condition=~Q(text=""), name="question_asks_something"),
        )

    def __str__(self) -> str:
        return f"question on {self.about}"


class Answer(Unchanging):
    question = models.ForeignKey(Question, on_delete=models.PROTECT, related_name="answers")
    text = models.TextField()
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("question_id", "at", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(condition=~Q(text=""), name="answer_says_something"),
        )

    def __str__(self) -> str:
        return f"answer {self.pk} to question {self.question_id}"
