"""People who sign in, what they serve as, and where."""

from __future__ import annotations

from typing import ClassVar

from django.contrib.auth.models import AbstractUser
from django.db import models
from django.db.models import F, Q
from django.utils.crypto import salted_hmac
from simple_history.models import HistoricalRecords


class Role(models.TextChoices):
    FIELD = "field", "field staff"
    ENGINEER = "engineer", "engineer"
    DISTRICT = "district", "district officer"
    PROGRAMME = "programme", "programme manager"
    AUDITOR = "auditor", "auditor"
    ADMIN = "admin", "administrator"


class User(AbstractUser):
    """A person with an account; where and as what they serve stands in their postings."""

    licence_number = models.CharField(max_length=60, blank=True)
    account_ends_on = models.DateField(null=True, blank=True)
    must_change = models.BooleanField(default=False)
    # Part of what a session is checked against: raising it ends every session of this person.
    sessions_round = models.PositiveIntegerField(default=0)

    def _get_session_auth_hash(self, secret: str | None = None) -> str:
        """Django's hook for both the current secret and those it falls back to."""
        value = f"{self.password}:{self.sessions_round}"
        return salted_hmac(
            "underbund.session", value, secret=secret, algorithm="sha256"
        ).hexdigest()


class Posting(models.Model):
    """A person serves in a role in a district, or in named watersheds of it, for some time.

    Without named watersheds the whole district is meant. Only an administrator may have no
    district: that one keeps people and settings everywhere and sees no site by it. One that was
    `delegated_by` somebody who serves so has a last day and is taken back by ending it.
    """

    user = models.ForeignKey("structures.User", on_delete=models.PROTECT, related_name="postings")
    role = models.CharField(max_length=10, choices=Role)
    district = models.ForeignKey(
        "structures.District",
        null=True,
        blank=True,
        on_delete=models.PROTECT,
        related_name="postings",
    )
    watersheds = models.ManyToManyField("structures.Watershed", blank=True, related_name="postings")
    valid_from = models.DateField()
    valid_to = models.DateField(null=True, blank=True)
    delegated_by = models.ForeignKey(
        "structures.User",
        null=True,
        blank=True,
        on_delete=models.PROTECT,
        related_name="delegations",
    )
    history = HistoricalRecords(m2m_fields=[watersheds])

    class Meta:
        ordering = ("user_id", "valid_from", "pk")
        constraints: ClassVar = (
            models.CheckConstraint(condition=Q(role__in=Role.values), name="posting_role_is_known"),
            models.CheckConstraint(
                condition=Q(valid_to__isnull=True) | Q(valid_to__gte=F("valid_from")),
                name="posting_ends_after_it_begins",
            ),
            models.CheckConstraint(
                condition=Q(district__isnull=False) | Q(role=Role.ADMIN),
                name="posting_without_district_is_admin",
            ),
            models.CheckConstraint(
                condition=Q(delegated_by__isnull=True)
                | (Q(valid_to__isnull=False) & ~Q(delegated_by=F("user"))),
                name="posting_delegated_ends",
            ),
        )

    def __str__(self) -> str:
        where = "everywhere" if self.district is None else self.district.code
        return f"{self.user.username}, {self.get_role_display()}, {where}"


class SignInWord(models.Model):
    """The one-time word by which a person comes in and sets a password; a new one replaces it."""

    user = models.OneToOneField(
        "structures.User", on_delete=models.CASCADE, related_name="sign_in_word"
    )
    word_hash = models.CharField(max_length=128)
    made_by = models.ForeignKey(
        "structures.User", null=True, on_delete=models.PROTECT, related_name="+"
    )
    made_at = models.DateTimeField()
    expires_at = models.DateTimeField()
    used_at = models.DateTimeField(null=True)

    class Meta:
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(expires_at__gt=F("made_at")), name="word_lasts_some_time"
            ),
        )

    def __str__(self) -> str:
        return f"word of {self.user.username}, until {self.expires_at:%Y-%m-%d %H:%M}"
