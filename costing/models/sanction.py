"""Sanctions and approvals of sums, and the lines that money comes from."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from costing.models.estimate import Estimate, money_field
from structures.models.unchanging import Unchanging


class MoneyLine(models.Model):
    """A sum that a funder gives to a district; the funder stands here as a code."""

    district = models.ForeignKey(
        "structures.District", on_delete=models.PROTECT, related_name="money_lines"
    )
    code = models.CharField(max_length=40)
    funder = models.CharField(max_length=40)
    currency = models.CharField(max_length=3)
    amount = money_field()
    valid_from = models.DateField()
    valid_to = models.DateField(null=True, blank=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("district_id", "code")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("district", "code"), name="money_line_once"),
            models.CheckConstraint(condition=Q(amount__gt=0), name="money_line_gives_something"),
            models.CheckConstraint(
                condition=Q(valid_to__isnull=True) | Q(valid_to__gte=F("valid_from")),
                name="money_line_ends_after_it_begins",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code}, {self.funder}"


class Sanction(Unchanging):
    """A technical sanction or an administrative approval of an amount; a revised one stands beside.

    One without an estimate or an entry was taken over from before the district was kept here.
    """

    class Kind(models.TextChoices):
        TECHNICAL = "technical", "technical sanction"
        ADMINISTRATIVE = "administrative", "administrative approval"

    structure = models.ForeignKey(
        "structures.Structure", on_delete=models.PROTECT, related_name="sanctions"
    )
    kind = models.CharField(max_length=14, choices=Kind)
    revision = models.PositiveSmallIntegerField(default=0)
    number = models.CharField(max_length=60)
    day = models.DateField()
    valid_to = models.DateField(null=True)
    currency = models.CharField(max_length=3)
    amount = money_field()
    estimate = models.ForeignKey(
        Estimate, null=True, on_delete=models.PROTECT, related_name="sanctions"
    )
    money_line = models.ForeignKey(
        MoneyLine, null=True, on_delete=models.PROTECT, related_name="approvals"
    )
    conditions = models.TextField(blank=True)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)
    entry = models.OneToOneField(
        "structures.Entry", null=True, on_delete=models.PROTECT, related_name="sanction"
    )

    class Meta:
        ordering = ("structure_id", "kind", "-revision")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("structure", "kind", "revision"), name="sanction_revision_once"
            ),
            models.UniqueConstraint(
                fields=("structure", "kind", "number"), name="sanction_number_once"
            ),
            models.CheckConstraint(condition=Q(amount__gt=0), name="sanction_is_of_something"),
            models.CheckConstraint(
                condition=Q(entry__isnull=True)
                | Q(kind="technical", estimate__isnull=False)
                | Q(kind="administrative", money_line__isnull=False),
                name="sanction_rests_on_its_paper",
            ),
        )

    def __str__(self) -> str:
        return f"{self.get_kind_display()} {self.number}"
