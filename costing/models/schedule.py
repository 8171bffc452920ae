"""Rate schedules of a district: versions with their dated rates and where each rate comes from."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from costing.validators import validate_days, validate_priced_item, validate_rate
from structures.intake.defaults import MONEY
from structures.models.unchanging import Unchanging
from structures.validators import validate_currency

RATE_DIGITS = 14  # a rate to 1e8 with its hundredths, and room for what an index makes of it
KINDS = ("labour", "material", "machinery", "carriage", "water")


def _accepted(key: str) -> Q:
    return Q(**{f"{key}__range": (MONEY[key].low, MONEY[key].high)})


class RateSchedule(Unchanging):
    """One version of a schedule; `digest` is that of its rates, percentages, currency and days."""

    district = models.ForeignKey(
        "structures.District", on_delete=models.PROTECT, related_name="schedules"
    )
    code = models.CharField(max_length=120)
    version = models.PositiveIntegerField()
    currency = models.CharField(max_length=3, validators=[validate_currency])
    valid_from = models.DateField(null=True)
    valid_to = models.DateField(null=True)
    contingency_percent = models.DecimalField(max_digits=8, decimal_places=4)
    overhead_percent = models.DecimalField(max_digits=8, decimal_places=4)
    upload = models.OneToOneField(
        "structures.Upload", on_delete=models.PROTECT, related_name="rate_schedule"
    )
    digest = models.CharField(max_length=64)
    findings = models.JSONField(default=list)
    notes = models.JSONField(default=list)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("district_id", "code", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(
                fields=("district", "code", "version"), name="schedule_version_once"
            ),
            models.CheckConstraint(condition=Q(version__gte=1), name="schedule_counts_from_one"),
            models.CheckConstraint(
                condition=Q(valid_from__isnull=True)
                | Q(valid_to__isnull=True)
                | Q(valid_to__gte=F("valid_from")),
                name="schedule_ends_after_it_begins",
            ),
            models.CheckConstraint(
                condition=_accepted("contingency_percent") & _accepted("overhead_percent"),
                name="schedule_percentages_accepted",
            ),
        )

    def __str__(self) -> str:
        return f"{self.code} version {self.version}"

    def clean(self) -> None:
        validate_days(self.valid_from, self.valid_to)


class Rate(Unchanging):
    """Price of one unit; `from_m` is the depth at which the lift begins that it serves."""

    schedule = models.ForeignKey(RateSchedule, on_delete=models.PROTECT, related_name="rates")
    order = models.PositiveSmallIntegerField()
    item = models.CharField(max_length=40)
    from_m = models.FloatField(null=True)
    unit = models.CharField(max_length=10)
    rate = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=2, validators=[validate_rate])
    description = models.TextField(blank=True)

    class Meta:
        ordering = ("schedule_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("schedule", "item", "from_m"), name="rate_once_a_lift"),
            models.UniqueConstraint(
                fields=("schedule", "item"),
                condition=Q(from_m__isnull=True),
                name="rate_once_an_item",
            ),
            models.CheckConstraint(condition=Q(rate__gt=0), name="rate_is_above_zero"),
            models.CheckConstraint(
                condition=Q(from_m__isnull=True) | Q(from_m__gte=0.0), name="rate_lift_goes_down"
            ),
        )

    def __str__(self) -> str:
        return f"{self.item}: {self.rate} a {self.unit}"

    def clean(self) -> None:
        validate_priced_item(self.item, self.unit)


class RateComponent(Unchanging):
    """One part of a rate: how much of it goes into one unit, and its own rate."""

    rate = models.ForeignKey(Rate, on_delete=models.PROTECT, related_name="components")
    order = models.PositiveSmallIntegerField()
    words = models.CharField(max_length=200)
    kind = models.CharField(max_length=10, choices=[(kind, kind) for kind in KINDS])
    quantity = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=6)
    unit_rate = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=2)

    class Meta:
        ordering = ("rate_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("rate", "order"), name="rate_component_once"),
            models.CheckConstraint(
                condition=Q(quantity__gte=0, unit_rate__gte=0, kind__in=KINDS),
                name="rate_component_can_be",
            ),
        )

    def __str__(self) -> str:
        return f"{self.quantity} of {self.words}"
