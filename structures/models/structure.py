"""The structure that a site becomes, and the walls designed for it."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import Q

from structures.life.stages import NOTED, STAGES
from structures.models.site import Site
from structures.models.survey import RockLine, Survey


class Structure(models.Model):
    """What stands, is built or is thought of at a site: its stage and since when."""

    site = models.OneToOneField(Site, on_delete=models.PROTECT, related_name="structure")
    stage = models.CharField(max_length=12, choices=STAGES.items(), default=NOTED)
    since = models.DateField()

    class Meta:
        ordering = ("site_id",)
        constraints: ClassVar = (
            models.CheckConstraint(
                condition=Q(stage__in=tuple(STAGES)), name="structure_stage_is_known"
            ),
        )

    def __str__(self) -> str:
        return f"{self.site.code}, {self.stage}"


class Design(models.Model):
    """A wall: one survey, the settled rock line if there is one, and the settings of the wall.

    `wall` holds what differs from the defaults; `digest` is that of all inputs. Frozen once
    something was decided or priced on it.
    """

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="designs")
    version = models.PositiveIntegerField()
    survey = models.ForeignKey(Survey, on_delete=models.PROTECT, related_name="designs")
    rock_line = models.ForeignKey(
        RockLine, null=True, on_delete=models.PROTECT, related_name="designs"
    )
    wall = models.JSONField(default=dict)
    digest = models.CharField(max_length=64)
    frozen = models.BooleanField(default=False)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)

    class Meta:
        ordering = ("structure_id", "-version")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "version"), name="design_version_once"),
            models.UniqueConstraint(fields=("structure", "digest"), name="design_drawn_once"),
            models.CheckConstraint(condition=Q(version__gte=1), name="design_counts_from_one"),
        )

    def __str__(self) -> str:
        return f"design {self.version} of {self.structure.site.code}"
