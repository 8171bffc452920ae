"""The second step of signing in: who has one, and the two people who take a lost one away."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q


class SecondFactor(models.Model):
    """A person's source of one-time codes; it counts from the first code that it gave."""

    user = models.OneToOneField(
        settings.AUTH_USER_MODEL, on_delete=models.CASCADE, related_name="second_factor"
    )
    # Readable, because each code is computed from it; it never leaves by a page, API or register.
    secret = models.CharField(max_length=64)
    made_at = models.DateTimeField()
    confirmed_at = models.DateTimeField(null=True)
    # Number of the half minute whose code was taken last: no code counts twice.
    last_step = models.PositiveBigIntegerField(default=0)

    def __str__(self) -> str:
        return f"second factor of {self.user_id}"


class RecoveryCode(models.Model):
    """One code on the printed list, kept hashed; it stands in for the telephone once."""

    factor = models.ForeignKey(
        SecondFactor, on_delete=models.CASCADE, related_name="recovery_codes"
    )
    code_hash = models.CharField(max_length=64)
    used_at = models.DateTimeField(null=True)

    class Meta:
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("factor", "code_hash"), name="recovery_code_once"),
        )

    def __str__(self) -> str:
        return f"recovery code {self.pk}"


class FactorReset(models.Model):
    """An administrator asks that a lost second factor be taken away; an approver agrees."""

    user = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="factor_resets"
    )
    reason = models.TextField()
    asked_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    asked_at = models.DateTimeField()
    agreed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    agreed_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ("-asked_at",)
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("user",), condition=Q(agreed_by=None), name="factor_reset_open_once"
            ),
            models.CheckConstraint(
                condition=~Q(user=F("asked_by"))
                & (Q(agreed_by=None) | (~Q(agreed_by=F("asked_by")) & ~Q(agreed_by=F("user")))),
                name="factor_reset_by_two_others",
            ),
            models.CheckConstraint(condition=~Q(reason=""), name="factor_reset_says_why"),
        )

    def __str__(self) -> str:
        return f"reset of {self.user_id}"
