"""What a survey says once a worker has read it: the run, and what it was given to read."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from structures.intake.practice import practice_document
from structures.models import RockLine, Run, Survey
from structures.queries.runs import runs_of_kind
from structures.queries.settings import counted_in
from structures.queries.sites import newest_rock_line
from structures.queries.surveys import pack_of

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.intake.pack import SurveyPack

READ: Final = "survey.read"


def reading_params(survey: Survey) -> dict[str, Any]:
    """What a reading depends on: survey, line settled on it, and the settings that count there."""
    line = newest_rock_line(survey)
    counted = counted_in(survey.site.watershed.district)
    return {
        "survey": survey.pk,
        "rock_line": None if line is None else line.pk,
        "wall": {**counted.wall, **survey.pack.get("wall", {})},
        "draws": counted.draws,
        "practice": practice_document(counted.practice),
    }


def reading_of(survey: Survey) -> Run | None:
    """The newest run that reads the survey as it counts today; None where none was started."""
    params = reading_params(survey)
    runs = runs_of_kind(READ).filter(params__survey=survey.pk).order_by("-created_at")
    return next((run for run in runs if run.params == params), None)


def read_inputs(params: Mapping[str, Any]) -> tuple[Survey, SurveyPack]:
    """Give the survey of a run, and its pack with the line and the wall of the run."""
    survey = Survey.objects.select_related("site__watershed__district").get(pk=params["survey"])
    points = None
    if params["rock_line"] is not None:
        points = RockLine.objects.get(pk=params["rock_line"]).points
    return survey, pack_of(survey, points=points, wall=params["wall"])
