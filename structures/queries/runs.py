from __future__ import annotations

from typing import TYPE_CHECKING

from structures.models.run import Run

if TYPE_CHECKING:
    from django.db.models import QuerySet


def runs_of_kind(kind: str) -> QuerySet[Run]:
    return Run.objects.filter(kind=kind)
