"""Having a survey read: soundings, rock line, wall and drawing, by a worker."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.access import Act, insist
from structures.queries.runs import site_subject
from structures.queries.survey_reading import READ, reading_params
from structures.runs.queue import start_run

if TYPE_CHECKING:
    from structures.models import Run, Survey, User


def start_reading(*, survey: Survey, by: User) -> Run:
    """Have a survey read as it counts today; the same inputs give the reading there is.

    Raises
    ------
    Refused
        If the user may not hand in surveys there.
    """
    insist(by, Act.ACCEPT_SURVEY, survey)
    return start_run(
        kind=READ,
        params=reading_params(survey),
        subject=site_subject(survey.site.code),
        asked_by=by,
    )
