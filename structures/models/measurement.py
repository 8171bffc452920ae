"""The measurement book: work by strip and item, measured by one person and checked by another."""

from __future__ import annotations

import uuid
from decimal import Decimal
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from structures.models.structure import Structure
from structures.models.works import Strip

QUANTITY_DIGITS = 15  # SQLite keeps numbers of so many digits exactly


class MeasurementEntry(models.Model):
    """One item of one strip, or of the whole wall where no strip is named.

    What was measured is never edited: a mistake is mended by an entry that `corrects` it, with the
    difference as its quantity. Only the check is added to it.
    """

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="measurements")
    strip = models.ForeignKey(
        Strip, null=True, on_delete=models.PROTECT, related_name="measurements"
    )
    code = models.CharField(max_length=60)
    item = models.CharField(max_length=40)
    from_m = models.FloatField(null=True)
    to_m = models.FloatField(null=True)
    unit = models.CharField(max_length=10)
    quantity = models.DecimalField(max_digits=QUANTITY_DIGITS, decimal_places=2)
    working = models.TextField(blank=True)
    relies_on = models.JSONField(default=list)
    measured_on = models.DateField()
    covered_on = models.DateField(null=True)
    measured_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    entered_at = models.DateTimeField(auto_now_add=True)
    checked_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    checked_at = models.DateTimeField(null=True)
    sent_back_why = models.TextField(blank=True)
    corrects = models.ForeignKey(
        "self", null=True, on_delete=models.PROTECT, related_name="corrections"
    )

    class Meta:
        ordering = ("structure_id", "measured_on", "code")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "code"), name="measurement_code_once"),
            models.CheckConstraint(
                condition=Q(quantity__gt=Decimal(0)) | Q(corrects__isnull=False),
                name="measurement_is_positive_or_corrects",
            ),
            models.CheckConstraint(
                condition=Q(checked_by__isnull=True) | ~Q(checked_by=F("measured_by")),
                name="measurement_checked_by_another",
            ),
            models.CheckConstraint(
                condition=Q(checked_by__isnull=True, checked_at__isnull=True)
                | Q(checked_by__isnull=False, checked_at__isnull=False),
                name="measurement_check_has_its_time",
            ),
            models.CheckConstraint(
                condition=Q(from_m__isnull=True) | Q(to_m__isnull=False, to_m__gt=F("from_m")),
                name="measurement_goes_down",
            ),
        )

    def __str__(self) -> str:
        return self.code

    @property
    def accepted(self) -> bool:
        """Whether another person checked it and did not send it back."""
        return self.checked_by_id is not None and not self.sent_back_why
