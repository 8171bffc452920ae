"""Contracts as they were signed; the contractor stands here as a code and has no account."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from costing.models.estimate import money_field
from costing.models.schedule import RATE_DIGITS
from structures.models.unchanging import Unchanging


class Contract(Unchanging):
    """A contract or muster. Terms that it does not state are null: none is assumed.

    A variation is a new version that `replaces` the one before.
    """

    structure = models.ForeignKey(
        "structures.Structure", on_delete=models.PROTECT, related_name="contracts"
    )
    version = models.PositiveSmallIntegerField(default=1)
    number = models.CharField(max_length=60)
    contractor = models.CharField(max_length=40)
    signed_on = models.DateField()
    starts_on = models.DateField()
    ends_on = models.DateField(null=True)
    currency = models.CharField(max_length=3)
    safety_terms = models.TextField(blank=True)
    authority_paper = models.ForeignKey(
        "structures.Photo", null=True, on_delete=models.PROTECT, related_name="+"
    )
    signed_sheet = models.ForeignKey(
        "structures.Photo", null=True, on_delete=models.PROTECT, related_name="+"
    )
    signatories = models.TextField(blank=True)
    retention_percent = models.DecimalField(max_digits=5, decimal_places=2, null=True)
    advance = money_field(null=True)
    advance_recovery_percent = models.DecimalField(max_digits=5, decimal_places=2, null=True)
    deductions = models.JSONField(default=list)  # [{"what", "percent" | "amount"}], as stated
    price_index = models.JSONField(null=True)  # {"fixed", "parts": [{"what", "share", "base"}]}
    why_varied = models.TextField(blank=True)
    replaces = models.OneToOneField(
        "self", null=True, on_delete=models.PROTECT, related_name="replaced_by"
    )
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)
    entry = models.OneToOneField(
        "structures.Entry", null=True, on_delete=models.PROTECT, related_name="contract"
    )

    class Meta:
        ordering = ("structure_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "version"), name="contract_version_once"),
            models.CheckConstraint(
                condition=Q(ends_on__isnull=True) | Q(ends_on__gte=F("starts_on")),
                name="contract_ends_after_it_begins",
            ),
            models.CheckConstraint(
                condition=Q(retention_percent__isnull=True) | Q(retention_percent__range=(0, 100)),
                name="contract_retention_is_a_share",
            ),
            models.CheckConstraint(
                condition=(Q(version=1) & Q(replaces__isnull=True))
                | (Q(version__gt=1) & Q(replaces__isnull=False) & ~Q(why_varied="")),
                name="contract_variation_says_why",
            ),
        )

    def __str__(self) -> str:
        return f"contract {self.number}"


class ContractRate(Unchanging):
    contract = models.ForeignKey(Contract, on_delete=models.PROTECT, related_name="rates")
    item = models.CharField(max_length=40)
    from_m = models.FloatField(null=True)
    unit = models.CharField(max_length=10)
    rate = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=2)
    quantity = models.DecimalField(max_digits=15, decimal_places=2, null=True)

    class Meta:
        ordering = ("contract_id", "item", "from_m")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("contract", "item", "from_m"), name="contract_lift_rate_once"
            ),
            models.UniqueConstraint(
                fields=("contract", "item"),
                condition=Q(from_m__isnull=True),
                name="contract_rate_once",
            ),
            models.CheckConstraint(condition=Q(rate__gt=0), name="contract_rate_is_positive"),
        )

    def __str__(self) -> str:
        return f"{self.item}: {self.rate} a {self.unit}"
