"""The register: who decided what and when, each entry bound to the one before it by its digest."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from structures.models.unchanging import Unchanging


class Chain(models.Model):
    """The end of one district's register; without a district that of the office.

    Whoever appends locks this row, so that two signatures cannot take one number.
    """

    district = models.OneToOneField(
        "structures.District", null=True, on_delete=models.PROTECT, related_name="chain"
    )
    length = models.PositiveIntegerField(default=0)
    digest = models.CharField(max_length=64, blank=True)

    class Meta:
        constraints: ClassVar = (
            models.UniqueConstraint(
                models.Value(1), condition=Q(district__isnull=True), name="chain_of_the_office_once"
            ),
            models.CheckConstraint(
                condition=Q(length=0, digest="") | (Q(length__gt=0) & ~Q(digest="")),
                name="chain_ends_in_its_last_entry",
            ),
        )

    def __str__(self) -> str:
        where = "the office" if self.district is None else self.district.code
        return f"register of {where}, {self.length} entries"


class Entry(Unchanging):
    """One decision, signature, settled line, hold point, bill or correction.

    `content` is what was decided on, frozen, and `content_digest` its digest; `digest` is that of
    the whole entry with the digest of the one before. `code` is what documents print.
    """

    chain = models.ForeignKey(Chain, on_delete=models.PROTECT, related_name="entries")
    number = models.PositiveIntegerField()
    at = models.DateTimeField()
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    # The name as it was that day: accounts are renamed, the register is not.
    by_name = models.CharField(max_length=200)
    act = models.CharField(max_length=40)
    structure = models.ForeignKey(
        "structures.Structure", null=True, on_delete=models.PROTECT, related_name="entries"
    )
    subject = models.CharField(max_length=160, blank=True)
    content = models.JSONField(default=dict)
    content_digest = models.CharField(max_length=64)
    previous_digest = models.CharField(max_length=64, blank=True)
    digest = models.CharField(max_length=64, unique=True)
    code = models.CharField(max_length=20, unique=True)
    corrects = models.ForeignKey(
        "self", null=True, on_delete=models.PROTECT, related_name="corrections"
    )

    class Meta:
        ordering = ("chain_id", "number")
        indexes = (models.Index(fields=("structure", "number"), name="entry_of_structure"),)
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("chain", "number"), name="entry_number_once"),
            models.CheckConstraint(condition=Q(number__gte=1), name="entry_counts_from_one"),
            models.CheckConstraint(
                condition=Q(number=1, previous_digest="")
                | (Q(number__gt=1) & ~Q(previous_digest="")),
                name="entry_hangs_on_the_one_before",
            ),
        )

    def __str__(self) -> str:
        return f"entry {self.number}, {self.act}"
