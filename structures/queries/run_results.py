"""What a run found, for those who may know it: a priced one only for those who may see money."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from structures import access
from structures.access import Act
from structures.models import Run
from structures.queries.runs import site_of_run
from structures.queries.survey_reading import READ

if TYPE_CHECKING:
    from structures.models import User


def result_of(run: Run, user: User) -> dict[str, Any] | None:
    """Give the result; None where there is none, or none that the user may see."""
    code = site_of_run(run)
    if code is not None:
        act = Act.SEE if run.kind == READ else Act.SEE_MONEY
        if not access.sites(user, act).filter(code=code).exists():
            return None
    return Run.objects.values_list("result", flat=True).get(pk=run.pk)
