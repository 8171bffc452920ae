"""Files received: whole, under their digest, with what became of them."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q


class Upload(models.Model):
    """One file as it came. Its bytes lie under their digest; the name is never a path.

    The rows are null until the file has been read. A refused file adds nothing; one that was taken
    back added something once, and nothing any more.
    """

    class Kind(models.TextChoices):
        SURVEY = "survey", "survey pack"
        SITES = "sites", "list of sites"
        WATERSHEDS = "watersheds", "outlines and streams"
        PROFILES = "profiles", "long profiles"
        RATES = "rates", "rate schedule"
        READINGS = "readings", "readings of wells"
        RAIN = "rain", "rain"

    class Outcome(models.TextChoices):
        RECEIVED = "received", "received, not read to the end"
        KEPT = "kept", "kept"
        REFUSED = "refused", "refused"
        BACK = "back", "taken back"

    district = models.ForeignKey(
        "structures.District", on_delete=models.PROTECT, related_name="uploads"
    )
    watershed = models.ForeignKey(
        "structures.Watershed", null=True, on_delete=models.PROTECT, related_name="uploads"
    )
    kind = models.CharField(max_length=12, choices=Kind)
    name = models.CharField(max_length=200)
    size = models.PositiveBigIntegerField()
    sha256 = models.CharField(max_length=64)
    by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="uploads"
    )
    at = models.DateTimeField(auto_now_add=True)
    outcome = models.CharField(max_length=8, choices=Outcome, default=Outcome.RECEIVED)
    rows_in = models.PositiveIntegerField(null=True)
    rows_kept = models.PositiveIntegerField(null=True)
    rows_held = models.PositiveIntegerField(null=True)
    rows_refused = models.PositiveIntegerField(null=True)
    findings = models.JSONField(default=list)

    class Meta:
        ordering = ("-at", "-pk")
        constraints: ClassVar = (
            # The same bytes are kept once in a district, even when two hands send them at once.
            models.UniqueConstraint(
                fields=("district", "kind", "sha256"),
                condition=Q(outcome="kept"),
                name="upload_kept_once",
            ),
            models.CheckConstraint(
                condition=Q(rows_in__isnull=True)
                | Q(rows_in=F("rows_kept") + F("rows_held") + F("rows_refused")),
                name="upload_rows_add_up",
            ),
            models.CheckConstraint(
                # Each by name: a sum with a null in it is null, and a null passes a check.
                condition=~Q(outcome="kept")
                | Q(
                    rows_in__isnull=False,
                    rows_kept__isnull=False,
                    rows_held__isnull=False,
                    rows_refused__isnull=False,
                ),
                name="upload_kept_was_counted",
            ),
        )

    def __str__(self) -> str:
        return f"{self.name} ({self.get_kind_display()})"
