"""Estimates as they were computed: inputs by their digest, figures, lines. Written once."""

from __future__ import annotations

from decimal import Decimal
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q
from django.db.models.expressions import CombinedExpression

from costing.models.schedule import RATE_DIGITS, RateSchedule
from structures.models.unchanging import Unchanging

MONEY_DIGITS = 15  # SQLite keeps numbers of so many digits exactly; amounts to 1e13
HALF_CENT = Decimal("0.005")


def _sum() -> CombinedExpression:
    return F("subtotal") + F("contingency") + F("overhead")


def money_field(*, null: bool = False) -> models.DecimalField:
    return models.DecimalField(max_digits=MONEY_DIGITS, decimal_places=2, null=null)


class Estimate(Unchanging):
    """One priced wall. `input_digest` is that of survey, rock line, wall, rates, settings, method.

    Where a line is not known the sums are those of the known ones, `complete` is false and
    `sanction` null. `result` is the whole answer as the interface gives it.
    """

    site = models.ForeignKey("structures.Site", on_delete=models.PROTECT, related_name="estimates")
    version = models.PositiveIntegerField()
    design = models.ForeignKey(
        "structures.Design", on_delete=models.PROTECT, related_name="estimates"
    )
    survey = models.ForeignKey(
        "structures.Survey", on_delete=models.PROTECT, related_name="estimates"
    )
    rock_line = models.ForeignKey(
        "structures.RockLine", null=True, on_delete=models.PROTECT, related_name="estimates"
    )
    wall = models.JSONField(default=dict)
    schedule = models.ForeignKey(RateSchedule, on_delete=models.PROTECT, related_name="estimates")
    run = models.OneToOneField("structures.Run", on_delete=models.PROTECT, related_name="estimate")
    input_digest = models.CharField(max_length=64)
    method = models.CharField(max_length=40)
    complete = models.BooleanField()
    currency = models.CharField(max_length=3)
    subtotal = money_field()
    contingency = money_field()
    overhead = money_field()
    total = money_field()
    sanction = money_field(null=True)
    p10 = money_field(null=True)
    p50 = money_field(null=True)
    p90 = money_field(null=True)
    open_flank_share = models.FloatField(null=True)
    result = models.JSONField()
    asked_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    frozen_at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("site_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("site", "version"), name="estimate_version_once"),
            models.CheckConstraint(
                condition=Q(subtotal__gte=0, contingency__gte=0, overhead__gte=0),
                name="estimate_sums_not_negative",
            ),
            models.CheckConstraint(
                # Within half a hundredth: SQLite adds its decimals as binary numbers.
                condition=Q(total__gt=_sum() - HALF_CENT, total__lt=_sum() + HALF_CENT),
                name="estimate_adds_up",
            ),
            models.CheckConstraint(
                condition=Q(sanction__isnull=True) | Q(sanction__gte=F("total")),
                name="estimate_sanction_covers_total",
            ),
            models.CheckConstraint(
                condition=~Q(complete=True) | Q(sanction__isnull=False),
                name="estimate_complete_has_sanction",
            ),
            models.CheckConstraint(
                condition=Q(p10__isnull=True, p50__isnull=True, p90__isnull=True)
                | Q(
                    p10__isnull=False,
                    p50__isnull=False,
                    p90__isnull=False,
                    p10__lte=F("p50"),
                    p50__lte=F("p90"),
                ),
                name="estimate_percentiles_in_order",
            ),
            models.CheckConstraint(
                condition=Q(open_flank_share__isnull=True) | Q(open_flank_share__range=(0.0, 1.0)),
                name="estimate_open_share_is_a_share",
            ),
        )

    def __str__(self) -> str:
        return f"estimate {self.version} of {self.site.code}"


class EstimateLine(Unchanging):
    """Quantity times rate; the amount is null exactly where one of them is not known."""

    estimate = models.ForeignKey(Estimate, on_delete=models.PROTECT, related_name="lines")
    order = models.PositiveSmallIntegerField()
    item = models.CharField(max_length=40)
    from_m = models.FloatField(null=True)
    to_m = models.FloatField(null=True)
    unit = models.CharField(max_length=10)
    quantity = models.DecimalField(max_digits=MONEY_DIGITS, decimal_places=2, null=True)
    rate = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=2, null=True)
    amount = money_field(null=True)

    class Meta:
        ordering = ("estimate_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("estimate", "order"), name="estimate_line_once"),
            models.CheckConstraint(
                condition=Q(amount__isnull=False, quantity__isnull=False, rate__isnull=False)
                | (Q(amount__isnull=True) & (Q(quantity__isnull=True) | Q(rate__isnull=True))),
                name="estimate_line_known_or_not",
            ),
            models.CheckConstraint(
                condition=Q(rate__isnull=True) | Q(rate__gt=0), name="estimate_line_rate_positive"
            ),
            models.CheckConstraint(
                condition=Q(from_m__isnull=True) | Q(to_m__isnull=False, to_m__gt=F("from_m")),
                name="estimate_line_goes_down",
            ),
        )

    def __str__(self) -> str:
        return f"{self.item}: {self.quantity} {self.unit}"
