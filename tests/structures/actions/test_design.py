"""A design: the same inputs are the same design."""

from __future__ import annotations

from datetime import date

import pytest

from structures.actions.design import draw_design, settled_line
from structures.actions.rock import settle_rock_line
from structures.actions.settings import change_setting
from structures.actions.surveys import accept_survey
from structures.errors import Refused
from tests.factories import a_site, a_survey, an_engineer, pack_bytes

pytestmark = pytest.mark.django_db


@pytest.fixture
def engineer(survey):
    return survey.by


@pytest.fixture
def survey():
    site = a_site()
    return a_survey(site, an_engineer(site.watershed.district), wall={"key_m": 0.2})


def draw(survey, line=None, **wall):
    return draw_design(survey=survey, rock_line=line, wall=wall, by=survey.by)


def test_the_same_inputs_are_drawn_once(survey):
    first, again, other = draw(survey), draw(survey), draw(survey, thickness_m=1.2)
    assert (first, first.version, other.version) == (again, 1, 2)
    assert draw(survey, thickness_m=1.2) == other


def test_what_is_asked_goes_before_the_survey_and_the_survey_before_the_district(survey):
    district = survey.site.watershed.district
    for key, value in (("key_m", 0.3), ("thickness_m", 1.0), ("crest_below_bed_m", 0.4)):
        change_setting(
            key=key,
            value=value,
            district=district,
            reason="trial",
            by=survey.by,
            decided=("N. N.", "L-1", date(2026, 1, 1)),
        )
    assert draw(survey, thickness_m=1.2).wall == {
        "key_m": 0.2,
        "thickness_m": 1.2,
        "crest_below_bed_m": 0.4,
    }


def test_a_setting_out_of_its_range_draws_nothing(survey):
    with pytest.raises(Refused) as refused:
        draw(survey, thickness_m=3.0)
    assert refused.value.findings[0].field == "wall.thickness_m"
    assert not survey.designs.exists()


def test_a_settled_line_is_another_design(survey, engineer):
    before = draw(survey)
    line = settle_rock_line(
        survey_id=survey.pk,
        points=survey.pack["rock_line"],
        reason="as drawn",
        rests_on=[],
        by=engineer,
    )
    assert settled_line(survey, None) == line
    assert settled_line(survey, line.pk) == line
    after = draw(survey, line)
    assert (after.version, after.rock_line, before.rock_line) == (2, line, None)


def test_a_line_of_another_survey_is_refused(survey, engineer):
    line = settle_rock_line(
        survey_id=survey.pk,
        points=survey.pack["rock_line"],
        reason="as drawn",
        rests_on=[],
        by=engineer,
    )
    later = a_survey(survey.site, engineer)
    with pytest.raises(Refused, match="The rock line is of another survey"):
        draw(later, line)


def test_the_same_survey_handed_in_again_is_another_design(survey, engineer):
    data = pack_bytes(wall={"key_m": 0.2}) + b"\n"
    later = accept_survey(site_id=survey.site_id, name="s.json", data=data, by=engineer)
    assert (later.version, later.digest) == (2, survey.digest)
    assert draw(survey) != draw(later)
