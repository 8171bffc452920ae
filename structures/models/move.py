"""Moves of a structure from stage to stage; a move back is a move as well and erases nothing."""

from __future__ import annotations

from typing import ClassVar

from django.conf import settings
from django.db import models
from django.db.models import F, Q

from structures.life.stages import STAGES
from structures.models.paper import Paper
from structures.models.register import Entry
from structures.models.structure import Structure
from structures.models.unchanging import Unchanging


class Move(Unchanging):
    """Who moved a structure, when, from where to where, on which papers.

    `evidence` names what was made elsewhere, by kind and digest. A move without an entry was taken
    over from before the district was kept here.
    """

    structure = models.ForeignKey(Structure, on_delete=models.PROTECT, related_name="moves")
    number = models.PositiveIntegerField()
    from_stage = models.CharField(max_length=12, choices=STAGES.items(), blank=True)
    to_stage = models.CharField(max_length=12, choices=STAGES.items())
    day = models.DateField()
    reason = models.TextField(blank=True)
    papers = models.ManyToManyField(Paper, blank=True, related_name="moves")
    evidence = models.JSONField(default=list)
    by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    at = models.DateTimeField(auto_now_add=True)
    entry = models.OneToOneField(Entry, null=True, on_delete=models.PROTECT, related_name="move")

    class Meta:
        ordering = ("structure_id", "number")
        constraints: ClassVar = (
            models.UniqueConstraint(fields=("structure", "number"), name="move_number_once"),
            models.CheckConstraint(
                condition=Q(to_stage__in=tuple(STAGES))
                & (Q(from_stage="") | Q(from_stage__in=tuple(STAGES))),
                name="move_between_known_stages",
            ),
            models.CheckConstraint(
                condition=~Q(from_stage=F("to_stage")), name="move_goes_somewhere"
            ),
        )

    def __str__(self) -> str:
        return f"{self.structure_id}: {self.from_stage or 'new'} to {self.to_stage}"
