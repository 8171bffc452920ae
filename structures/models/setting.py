"""Defaults of the handbook that an office has changed, with who answers for it."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q
from simple_history.models import HistoricalRecords

from structures.validators import validate_setting


class Setting(models.Model):
    """The value that counts in place of a default, in one district or (without one) everywhere.

    `owner` says who decides: E a licensed engineer, whose name, licence number and day stand here,
    D the district office, P the programme manager. `source` is the mark of the default.
    """

    class Owner(models.TextChoices):
        ENGINEER = "E", "licensed engineer"
        DISTRICT = "D", "district office"
        PROGRAMME = "P", "programme manager"

    key = models.CharField(max_length=60)
    district = models.ForeignKey(
        "structures.District",
        null=True,
        blank=True,
        on_delete=models.PROTECT,
        related_name="settings",
    )
    value = models.FloatField()
    source = models.CharField(max_length=10)
    owner = models.CharField(max_length=1, choices=Owner)
    reason = models.TextField()
    decided_by = models.CharField(max_length=120, blank=True)
    licence_number = models.CharField(max_length=60, blank=True)
    decided_on = models.DateField(null=True, blank=True)
    changed_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    changed_at = models.DateTimeField(auto_now=True)
    history = HistoricalRecords()

    class Meta:
        ordering = ("key",)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("key", "district"), name="setting_once_a_district"),
            models.UniqueConstraint(
                fields=("key",), condition=Q(district__isnull=True), name="setting_once_everywhere"
            ),
            models.CheckConstraint(condition=~Q(reason=""), name="setting_has_a_reason"),
            models.CheckConstraint(
                condition=~Q(owner="E")
                | (~Q(decided_by="") & ~Q(licence_number="") & Q(decided_on__isnull=False)),
                name="setting_of_an_engineer_is_signed",
            ),
        )

    def __str__(self) -> str:
        return f"{self.key} = {self.value:g}"

    def clean(self) -> None:
        validate_setting(self.key, self.value)
