"""A rock line settled: by whom, why, on which tests, and never against what was proved."""

from __future__ import annotations

import pytest

from structures.actions.rock import settle_rock_line
from structures.errors import Refused
from structures.models import RockLine, Role
from structures.queries.sites import newest_rock_line
from structures.queries.surveys import names_of_tests, pack_of, visible_rock_lines
from tests.factories import a_district, a_site, a_survey, a_user, an_engineer

pytestmark = pytest.mark.django_db

PROBED = {
    "rock": [{"offset_m": 30.0, "depth_m": 4.0, "method": "bore", "met_rock": True}],
    "probes": [{"offset_m": 40.0, "depth_m": 4.5, "refused": False}],
    "rock_line": None,
}
LINE = [
    {"offset_m": 0.0, "level_m": 103.0},
    {"offset_m": 40.0, "level_m": 95.0},
    {"offset_m": 80.0, "level_m": 103.0},
]


@pytest.fixture
def site():
    return a_site()


@pytest.fixture
def engineer(site):
    return an_engineer(site.watershed.district)


@pytest.fixture
def survey(site, engineer):
    return a_survey(site, engineer, **PROBED)


def settle(survey, by, **changes):
    values = {"points": LINE, "reason": "two bores", "rests_on": ["bore@30"], **changes}
    return settle_rock_line(survey_id=survey.pk, by=by, **values)


def test_lines_count_up_a_survey_and_keep_who_and_why(survey, engineer):
    first = settle(survey, engineer)
    second = settle(survey, engineer, reason="  the pit agrees ", rests_on=["bore@30", "probe@40"])
    assert (first.version, first.reason, first.by) == (1, "two bores", engineer)
    assert (second.version, second.reason) == (2, "the pit agrees")
    assert second.rests_on == ["bore@30", "probe@40"]
    assert newest_rock_line(survey) == second
    pack = pack_of(survey, points=second.points)
    assert [(p.offset_m, p.level_m) for p in pack.rock_line] == [(0, 103), (40, 95), (80, 103)]


def test_of_two_who_settle_the_second_is_told_of_the_first(survey, engineer):
    settle(survey, engineer, seen_version=0)
    with pytest.raises(Refused) as refused:
        settle(survey, engineer, seen_version=0)
    assert refused.value.sentence() == (
        f"rock line: Line 1 was settled by {engineer.username} since you opened this. "
        "Open it again, look at that line, and settle yours where you differ."
    )
    assert settle(survey, engineer, seen_version=1).version == 2


def test_the_tests_of_a_survey_have_names(survey):
    assert names_of_tests(pack_of(survey)) == ("bore@30", "probe@40")


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        ({"reason": "  "}, "reason: The reason is missing. Write why the rock is so."),
        (
            {"rests_on": []},
            (
                "rests on: It is not said on which tests the line rests. "
                "Name at least one of: bore@30, probe@40."
            ),
        ),
        (
            {"rests_on": ["bore@31"]},
            "rests on: This survey has no test bore@31. Known: bore@30, probe@40.",
        ),
        ({"points": LINE[:1]}, "rock line: A rock line has 2 points or more."),
        ({"points": LINE[::-1]}, ""),
        ({"points": [*LINE[:2], {"offset_m": 90.0, "level_m": 103.0}]}, ""),
        ({"points": [LINE[0], {"offset_m": 40.0, "level_m": 101.0}, LINE[2]]}, ""),
    ],
)
def test_a_line_that_cannot_be_is_refused(survey, engineer, changes, sentence):
    with pytest.raises(Refused) as refused:
        settle(survey, engineer, **changes)
    assert refused.value.sentence().startswith(sentence)
    assert not RockLine.objects.exists()


def test_rock_above_the_foot_of_a_probe_is_refused(survey, engineer):
    """Source: RK-03, 0.05 m. The probe at 40 m went 4.50 m down from 100.00 m, to 95.50 m."""
    high = [LINE[0], {"offset_m": 40.0, "level_m": 95.56}, LINE[2]]
    with pytest.raises(Refused) as refused:
        settle(survey, engineer, points=high)
    assert refused.value.findings[0].rule == "RK-03"
    assert "went down to 95.50 m" in refused.value.sentence()
    just = [LINE[0], {"offset_m": 40.0, "level_m": 95.54}, LINE[2]]
    assert settle(survey, engineer, points=just).version == 1


def test_a_survey_without_tests_may_rest_on_the_eye_alone(site, engineer):
    survey = a_survey(site, engineer)
    line = settle(survey, engineer, rests_on=[], points=survey.pack["rock_line"])
    assert line.rests_on == []


def test_a_line_on_an_older_survey_is_refused_with_the_newer_one_named(site, engineer, survey):
    a_survey(site, engineer)
    with pytest.raises(Refused) as refused:
        settle(survey, engineer)
    assert refused.value.sentence() == (
        f"rock line: Survey 2 came in from {engineer.username} since; this line is drawn on "
        "survey 1. Look at survey 2 and settle the line on it."
    )


@pytest.mark.parametrize("role", [role for role in Role.values if role != Role.ENGINEER])
def test_only_engineers_settle_lines(survey, role):
    with pytest.raises(Refused, match="Ask somebody posted here as engineer"):
        settle(survey, a_user(role, survey.site.watershed.district))


def test_lines_are_seen_where_one_serves(survey, engineer):
    settle(survey, engineer)
    assert visible_rock_lines(engineer).count() == 1
    assert visible_rock_lines(an_engineer(a_district("ZZ"))).count() == 0
