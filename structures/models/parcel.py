"""What phones send when they find signal: each record once, whatever is sent twice."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q


class PhoneRecord(models.Model):
    """One record as a phone made it, under the identifier that the phone gave it.

    Three times are kept because the phone's clock is not trusted: when it says the record was made,
    when it says it was sent, and when it came.
    """

    class Outcome(models.TextChoices):
        KEPT = "kept", "kept"
        HELD = "held", "held"
        REFUSED = "refused", "refused"

    id = models.UUIDField(primary_key=True, editable=False)
    site = models.ForeignKey(
        "structures.Site", on_delete=models.PROTECT, related_name="phone_records"
    )
    kind = models.CharField(max_length=30)
    content = models.JSONField()
    digest = models.CharField(max_length=64)
    made_at = models.DateTimeField(null=True)
    sent_at = models.DateTimeField(null=True)
    received_at = models.DateTimeField(auto_now_add=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    outcome = models.CharField(max_length=8, choices=Outcome)
    findings = models.JSONField(default=list)

    class Meta:
        ordering = ("-received_at",)
        indexes = (models.Index(fields=("site", "-received_at"), name="phone_record_of_site"),)

    def __str__(self) -> str:
        return f"{self.kind} {self.id}"


class Clash(models.Model):
    """The same identifier with other content: both are kept, an engineer decides which counts."""

    record = models.ForeignKey(PhoneRecord, on_delete=models.PROTECT, related_name="clashes")
    content = models.JSONField()
    digest = models.CharField(max_length=64)
    made_at = models.DateTimeField(null=True)
    received_at = models.DateTimeField(auto_now_add=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    counts = models.CharField(
        max_length=6, blank=True, choices=[("first", "the first"), ("second", "the second")]
    )
    decided_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    decided_at = models.DateTimeField(null=True)
    why = models.TextField(blank=True)

    class Meta:
        ordering = ("-received_at",)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("record", "digest"), name="clash_kept_once"),
            models.CheckConstraint(
                condition=Q(counts="", decided_by__isnull=True)
                | (~Q(counts="") & Q(decided_by__isnull=False) & ~Q(why="")),
                name="clash_decided_by_somebody",
            ),
        )

    def __str__(self) -> str:
        return f"second form of {self.record_id}"


class DailyMail(models.Model):
    """That a person was written to on a day; there is never a second one."""

    user = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.CASCADE, related_name="+")
    day = models.DateField()
    lines = models.PositiveSmallIntegerField()
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("user", "day"), name="daily_mail_once"),
        )

    def __str__(self) -> str:
        return f"mail of {self.day}"
