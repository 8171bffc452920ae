"""Reading a survey by a run: started with it, found again, made anew when what counts changes."""

from __future__ import annotations

from datetime import date

import pytest

from structures.actions.rock import settle_rock_line
from structures.actions.settings import change_setting
from structures.actions.survey_reading import start_reading
from structures.models import Role, Run
from structures.queries.survey_reading import READ, reading_of, reading_params
from structures.runs.queue import execute
from tests import factories as make

pytestmark = pytest.mark.django_db


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


@pytest.fixture
def survey():
    site = make.a_site()
    return make.a_survey(site, make.an_engineer(site.watershed.district))


def read(survey):
    run = reading_of(survey)
    execute(str(run.pk))
    return Run.objects.get(pk=run.pk)


def test_a_survey_is_read_without_a_price(survey):
    """Oracle: handbook example A, face and length of the wall."""
    run = read(survey)
    appraisal = run.result["appraisal"]
    assert (run.kind, run.subject, run.state) == (READ, "site EX-A", "done")
    assert appraisal["wall"]["face_area_m2"] == pytest.approx(155.333333, abs=5e-7)
    assert appraisal["wall"]["length_m"] == pytest.approx(53.333333, abs=5e-7)
    assert appraisal["estimate"] is None
    assert run.result["figures"]["wide"].startswith("<svg")


def test_a_settled_line_and_a_changed_default_ask_for_another_reading(survey):
    engineer = survey.by
    before = reading_of(survey)
    ground = survey.pack["ground"]
    points = [{"offset_m": one["offset_m"], "level_m": one["level_m"] - 1.0} for one in ground]
    settle_rock_line(survey_id=survey.pk, points=points, reason="seen", rests_on=[], by=engineer)
    settled = reading_of(survey)
    assert settled.pk != before.pk
    assert read(survey).result["estimated"] == []  # this survey has no test to estimate from
    change_setting(
        key="lift_m",
        value=1.2,
        district=survey.site.watershed.district,
        reason="benches",
        by=make.a_user(Role.DISTRICT, survey.site.watershed.district),
    )
    assert reading_of(survey) is None
    assert reading_params(survey)["wall"]["lift_m"] == 1.2


def test_a_reading_is_made_with_the_practice_of_its_district(survey):
    """Oracle: handbook 12; example A goes 4.15 m down to the bottom of the key."""
    district = survey.site.watershed.district
    assert "trench-deep" not in [
        one["code"] for one in read(survey).result["appraisal"]["cautions"]
    ]
    change_setting(
        key="licensed_depth_m",
        value=4.0,
        district=district,
        reason="the local code",
        decided=("A. Rao", "L-1", date(2026, 3, 1)),
        by=make.a_user(Role.ADMIN, district),
    )
    assert reading_of(survey) is None
    start_reading(survey=survey, by=survey.by)
    told = {one["code"]: one["text"] for one in read(survey).result["appraisal"]["cautions"]}
    assert "over 4 m" in told["trench-deep"]
    assert (
        "Decided by A. Rao, licence L-1, on 2026-03-01: the local code." in told["default-changed"]
    )
