"""Questions and answers on the records of a structure; both stay, each with its name."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.db import transaction

from structures.access import Act, insist
from structures.errors import Refused
from structures.models import Answer, Question, Structure

if TYPE_CHECKING:
    from structures.models import User

ABOUT_MOST = 120  # characters that name the record


@transaction.atomic
def ask(*, structure_id: int, about: str, text: str, by: User) -> Question:
    """Ask something about a record of a structure.

    Raises
    ------
    Refused
        If the question is empty, or the user may not ask here.
    """
    structure = Structure.objects.select_for_update().get(pk=structure_id)
    insist(by, Act.ASK, structure)
    if not text.strip():
        raise Refused("The question is empty.", where="text", remedy="Write what you ask.")
    record = about.strip()[:ABOUT_MOST] or "this structure"
    return Question.objects.create(structure=structure, about=record, text=text.strip(), by=by)


@transaction.atomic
def answer(*, question_id: int, text: str, by: User) -> Answer:
    """Answer a question; a second answer stands beside the first.

    Raises
    ------
    Refused
        If the answer is empty, or the user may not answer here.
    """
    question = Question.objects.select_related("structure").get(pk=question_id)
    insist(by, Act.ASK, question.structure)
    if not text.strip():
        raise Refused("The answer is empty.", where="text", remedy="Write the answer.")
    return Answer.objects.create(question=question, text=text.strip(), by=by)
