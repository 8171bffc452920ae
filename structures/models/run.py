from __future__ import annotations

import math
import uuid
from typing import ClassVar, Final

from django.conf import settings
from django.db import models
from django.db.models import Q
from django.utils import timezone

PACE_FROM: Final = 0.1  # of a run; before it the start-up says nothing of the pace


class Run(models.Model):
    """One background job. This row is the truth; a message on the queue carries only its number."""

    class State(models.TextChoices):
        QUEUED = "queued"
        RUNNING = "running"
        DONE = "done"
        FAILED = "failed"
        CANCELLED = "cancelled"

    GOING: ClassVar = (State.QUEUED, State.RUNNING)

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    kind = models.CharField(max_length=60)
    subject = models.CharField(max_length=120, blank=True)
    params = models.JSONField(default=dict)
    digest = models.CharField(max_length=64)
    version = models.CharField(max_length=40)
    state = models.CharField(max_length=10, choices=State, default=State.QUEUED)
    progress = models.FloatField(default=0.0)
    message = models.TextField(blank=True)
    result = models.JSONField(null=True)
    asked_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.SET_NULL, related_name="runs"
    )
    cancel_asked = models.BooleanField(default=False)
    attempts = models.PositiveSmallIntegerField(default=0)
    # Raised by every claim: a write that carries an older number comes from a worker long given up.
    fence = models.PositiveIntegerField(default=0)
    lease_until = models.DateTimeField(null=True)
    created_at = models.DateTimeField(auto_now_add=True)
    sent_at = models.DateTimeField(null=True)
    started_at = models.DateTimeField(null=True)
    finished_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ("-created_at",)
        indexes = (
            models.Index(fields=("state", "sent_at"), name="run_waiting"),
            models.Index(fields=("subject", "-created_at"), name="run_subject"),
        )
        constraints = (
            models.CheckConstraint(
                condition=Q(progress__gte=0.0, progress__lte=1.0), name="run_progress_is_a_share"
            ),
            models.CheckConstraint(
                condition=~Q(state="done") | Q(result__isnull=False), name="run_done_has_result"
            ),
            models.CheckConstraint(
                condition=~Q(state="running") | Q(lease_until__isnull=False),
                name="run_running_has_lease",
            ),
            # The same inputs by the same method are computed once.
            models.UniqueConstraint(
                fields=("kind", "digest", "version"),
                condition=Q(state__in=("queued", "running", "done")),
                name="run_computed_once",
            ),
        )

    def __str__(self) -> str:
        return f"{self.kind} {self.subject} ({self.state})"

    @property
    def going(self) -> bool:
        return self.state in self.GOING

    @property
    def seconds_left(self) -> int | None:
        """What is left at the pace so far; None before there is a pace, and once it has ended."""
        if self.state != self.State.RUNNING or self.progress < PACE_FROM:
            return None
        spent = (timezone.now() - self.started_at).total_seconds()
        return math.ceil(spent * (1.0 - self.progress) / self.progress)


class WorkerPulse(models.Model):
    """When a worker last showed that it lives."""

    name = models.CharField(max_length=120, unique=True)
    seen_at = models.DateTimeField()

    def __str__(self) -> str:
        return f"{self.name} seen {self.seen_at:%Y-%m-%d %H:%M:%S}"
