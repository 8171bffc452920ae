"""What devices sign in by, and what they sent once."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from knox.models import AbstractAuthToken


class DeviceToken(AbstractAuthToken):
    """A device's token, kept hashed.

    `session_hash` is what a session of the account is checked against: a new password, or signing
    out everywhere, ends tokens and sessions alike.
    """

    session_hash = models.CharField(max_length=64)

    def __str__(self) -> str:
        return f"token of {self.user} until {self.expiry}"


class SentWrite(models.Model):
    """One write that a device named by a key of its own, and what it was answered."""

    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.CASCADE, related_name="+")
    key = models.CharField(max_length=200)
    digest = models.CharField(max_length=64)
    status = models.PositiveSmallIntegerField(null=True)
    body = models.JSONField(null=True)
    headers = models.JSONField(default=dict)
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        constraints: ClassVar = (
            # Of two that come at once with one key, the second waits for the first.
            models.UniqueConstraint(fields=("by", "key"), name="sent_write_once"),
        )

    def __str__(self) -> str:
        return f"{self.key} answered {self.status}"
