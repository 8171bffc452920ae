"""Questions and answers on the records of a structure, oldest first."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures import access
from structures.models import Question

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import User


def visible_questions(user: User) -> QuerySet[Question]:
    found = Question.objects.filter(structure__site__in=access.sites(user))
    return (
        found.select_related("by", "structure__site")
        .prefetch_related("answers__by")
        .order_by("at", "pk")
    )


def questions_of(user: User, code: str) -> QuerySet[Question]:
    return visible_questions(user).filter(structure__site__code=code)
