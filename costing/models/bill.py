"""Bills: one line for one measurement, decided line by line."""

from __future__ import annotations

from decimal import Decimal
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from costing.models.contract import Contract
from costing.models.estimate import money_field
from costing.models.schedule import RATE_DIGITS
from structures.models.unchanging import Unchanging


class Bill(models.Model):
    """A running or final bill. `claimed` is the total that the bill itself says.

    `account` is the payable amount explained step by step, frozen when the bill is decided. A bill
    without a contract was taken over from before the district was kept here.
    """

    class Kind(models.TextChoices):
        RUNNING = "running", "running bill"
        FINAL = "final", "final bill"

    class State(models.TextChoices):
        DRAFT = "draft", "being written"
        HANDED_IN = "handed in", "handed in"
        DECIDED = "decided", "decided"

    structure = models.ForeignKey(
        "structures.Structure", on_delete=models.PROTECT, related_name="bills"
    )
    contract = models.ForeignKey(
        Contract, null=True, on_delete=models.PROTECT, related_name="bills"
    )
    number = models.CharField(max_length=60)
    kind = models.CharField(max_length=8, choices=Kind)
    state = models.CharField(max_length=10, choices=State, default=State.DRAFT)
    billed_on = models.DateField()
    currency = models.CharField(max_length=3)
    claimed = money_field()
    payable = money_field(null=True)
    account = models.JSONField(null=True)
    made_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+"
    )
    made_at = models.DateTimeField(auto_now_add=True)
    decided_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, null=True, on_delete=models.PROTECT, related_name="+"
    )
    decided_at = models.DateTimeField(null=True)
    paid_on = models.DateField(null=True)
    paid_reference = models.CharField(max_length=120, blank=True)
    entry = models.OneToOneField(
        "structures.Entry", null=True, on_delete=models.PROTECT, related_name="bill"
    )

    class Meta:
        ordering = ("structure_id", "billed_on", "number")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "number"), name="bill_number_once"),
            models.UniqueConstraint(
                fields=("structure",), condition=Q(kind="final"), name="bill_final_once"
            ),
            models.CheckConstraint(
                condition=Q(payable__isnull=True) | Q(payable__gte=Decimal(0)),
                name="bill_pays_nothing_back",
            ),
            models.CheckConstraint(
                condition=~Q(state="decided") | Q(payable__isnull=False, account__isnull=False),
                name="bill_decided_is_explained",
            ),
            models.CheckConstraint(
                condition=Q(decided_by__isnull=True) | ~Q(decided_by=models.F("made_by")),
                name="bill_decided_by_another",
            ),
        )

    def __str__(self) -> str:
        return self.number


class BillLine(models.Model):
    """One measurement at the contract's rate. While it is not refused no other line may take it."""

    class State(models.TextChoices):
        OPEN = "open", "not yet decided"
        PAID = "paid", "paid"
        HELD = "held", "held"
        REFUSED = "refused", "refused"

    bill = models.ForeignKey(Bill, on_delete=models.PROTECT, related_name="lines")
    order = models.PositiveSmallIntegerField()
    entry = models.ForeignKey(
        "structures.MeasurementEntry", on_delete=models.PROTECT, related_name="bill_lines"
    )
    quantity = models.DecimalField(max_digits=15, decimal_places=2)
    rate = models.DecimalField(max_digits=RATE_DIGITS, decimal_places=2)
    amount = money_field()
    state = models.CharField(max_length=8, choices=State, default=State.OPEN)
    findings = models.JSONField(default=list)
    why = models.TextField(blank=True)

    class Meta:
        ordering = ("bill_id", "order")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("bill", "order"), name="bill_line_once"),
            # Whoever presses at the same moment: one entry is never paid twice.
            models.UniqueConstraint(
                fields=("entry",), condition=~Q(state="refused"), name="bill_entry_once"
            ),
            models.CheckConstraint(condition=Q(rate__gt=0), name="bill_line_rate_is_positive"),
            models.CheckConstraint(
                condition=~Q(state__in=("held", "refused")) | ~Q(why=""),
                name="bill_line_kept_back_says_why",
            ),
        )

    def __str__(self) -> str:
        return f"line {self.order} of {self.bill_id}"


class LineDecision(Unchanging):
    """What was decided on a line after its bill: a hold released, paid by a later bill, refused."""

    line = models.ForeignKey(BillLine, on_delete=models.PROTECT, related_name="decisions")
    state = models.CharField(max_length=8, choices=BillLine.State)
    why = models.TextField()
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)
    # The bill that pays it, where a hold was released after its own bill was decided.
    paid_with = models.ForeignKey(
        Bill, null=True, on_delete=models.PROTECT, related_name="released_lines"
    )
    entry = models.OneToOneField(
        "structures.Entry", null=True, on_delete=models.PROTECT, related_name="+"
    )

    class Meta:
        ordering = ("line_id", "at")
        constraints: ClassVar = (
            models.CheckConstraint(condition=~Q(why=""), name="line_decision_says_why"),
        )

    def __str__(self) -> str:
        return f"{self.state}: {self.why}"
