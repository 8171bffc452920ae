"""Where clay comes from, and what the tests of it said."""

from __future__ import annotations

import uuid
from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from structures.models.paper import Photo
from structures.models.site import Site
from structures.models.structure import Structure
from structures.models.unchanging import Unchanging
from structures.validators import validate_latitude, validate_longitude


class ClaySource(models.Model):
    """A borrow pit; what is proven there, how far it is, and how far from a tank's bund."""

    site = models.ForeignKey(Site, on_delete=models.PROTECT, related_name="clay_sources")
    name = models.CharField(max_length=120)
    lat = models.FloatField(null=True, validators=[validate_latitude])
    lon = models.FloatField(null=True, validators=[validate_longitude])
    proven_m3 = models.FloatField(null=True)
    distance_km = models.FloatField(null=True)
    from_bund_m = models.FloatField(null=True)
    consent = models.ForeignKey(Photo, null=True, on_delete=models.PROTECT, related_name="+")
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("site_id", "name")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("site", "name"), name="clay_source_named_once"),
            models.CheckConstraint(
                condition=(Q(proven_m3__isnull=True) | Q(proven_m3__gte=0.0))
                & (Q(distance_km__isnull=True) | Q(distance_km__gte=0.0))
                & (Q(from_bund_m__isnull=True) | Q(from_bund_m__gte=0.0)),
                name="clay_source_is_not_negative",
            ),
        )

    def __str__(self) -> str:
        return self.name


class ClayTest(Unchanging):
    """One set of tests on a source or in the wall; what was not tested is null, never zero."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="clay_tests")
    source = models.ForeignKey(
        ClaySource, null=True, on_delete=models.PROTECT, related_name="tests"
    )
    strip = models.ForeignKey(
        "structures.Strip", null=True, on_delete=models.PROTECT, related_name="clay_tests"
    )
    layer = models.PositiveSmallIntegerField(null=True)
    day = models.DateField()
    liquid_limit_percent = models.FloatField(null=True)
    plastic_limit_percent = models.FloatField(null=True)
    fines_percent = models.FloatField(null=True)
    water_content_percent = models.FloatField(null=True)
    free_swell_percent = models.FloatField(null=True)
    permeability_m_per_s = models.FloatField(null=True)
    crumb_reaction = models.BooleanField(null=True)
    hand_roll_holds = models.BooleanField(null=True)
    note = models.TextField(blank=True)
    findings = models.JSONField(default=list)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-day", "-at")

    def __str__(self) -> str:
        return f"clay test of {self.day}"
