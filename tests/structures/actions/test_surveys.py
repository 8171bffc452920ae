"""A survey taken in: looked at whole, kept as the next version, its tests as rows."""

from __future__ import annotations

import json

import pytest

from structures.actions.surveys import accept_survey, preview_survey
from structures.actions.watersheds import bulk_enter_profiles
from structures.errors import Refused
from structures.intake.survey_pack import read_pack, read_pack_bytes
from structures.models import Role, Sounding, Survey, Upload
from structures.queries.surveys import pack_of, surveys_of, visible_soundings, visible_surveys
from tests.factories import (
    FIXTURES,
    a_district,
    a_site,
    a_survey,
    a_user,
    a_watershed,
    an_engineer,
    pack_bytes,
)

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return a_site()


@pytest.fixture
def engineer(site):
    return an_engineer(site.watershed.district)


def test_a_preview_keeps_nothing(site, engineer):
    read = preview_survey(site_id=site.pk, name="s.json", data=pack_bytes(), by=engineer)
    assert (read.pack.site.code, read.rows) == ("EX-A", 12)
    assert not Survey.objects.exists()
    assert not Upload.objects.exists()


def test_versions_count_up_a_site(site, engineer):
    first = a_survey(site, engineer)
    second = a_survey(site, engineer, works={"pump_hours": 480})
    assert [first.version, second.version] == [1, 2]
    assert first.digest != second.digest
    assert (second.left_toe_m, second.right_toe_m, second.by) == (30.0, 50.0, engineer)


def test_the_digest_is_that_of_the_meaning_not_of_the_file(site, engineer):
    first = a_survey(site, engineer)
    spaced = json.dumps(json.loads(pack_bytes()), indent=4).encode()
    again = accept_survey(site_id=site.pk, name="s.json", data=spaced, by=engineer)
    assert first.digest == again.digest
    assert first.upload.sha256 != again.upload.sha256


@pytest.mark.parametrize("name", ["OD-01.json", "BI-03.xlsx"])
def test_a_kept_survey_reads_back_as_the_pack_that_came(site, engineer, name):
    """Oracle: the pack read from the file itself, findings and notes included."""
    path = FIXTURES / "packs" / name
    came = read_pack(path)
    place = a_site(site.watershed, came.site.code)
    survey = accept_survey(site_id=place.pk, name=name, data=path.read_bytes(), by=engineer)
    survey.refresh_from_db()
    kept = pack_of(survey)
    assert kept == came
    assert (kept.findings, kept.notes) == (came.findings, came.notes)
    assert repr(kept) == repr(came)


def test_tests_and_readings_stand_as_rows(site, engineer):
    """Oracle: the pack read from the file itself."""
    path = FIXTURES / "packs" / "OD-01.json"
    came = read_pack(path)
    place = a_site(site.watershed, "OD-01")
    survey = accept_survey(site_id=place.pk, name="s.json", data=path.read_bytes(), by=engineer)
    assert [(p.offset_m, p.level_m) for p in survey.ground.all()] == [
        (p.offset_m, p.level_m) for p in came.ground
    ]
    assert [(t.offset_m, t.method, t.met_rock) for t in survey.rock_tests.all()] == [
        (t.offset_m, t.method, t.met_rock) for t in came.rock
    ]
    assert [(p.depth_m, p.refused) for p in survey.probes.all()] == [
        (p.depth_m, p.refused) for p in came.probes
    ]
    rows = list(visible_soundings(engineer))
    assert [(row.label, row.readings.count()) for row in rows] == [
        (one.label, len(one.readings)) for one in came.soundings
    ]
    assert len(rows) == Sounding.objects.count() > 0
    assert [(row.label, row.picks.count()) for row in survey.refraction.all()] == [
        (one.label, len(one.picks)) for one in came.refraction
    ]


def test_a_survey_of_another_site_is_refused(site, engineer):
    with pytest.raises(Refused) as refused:
        accept_survey(site_id=site.pk, name="survey.json", data=pack_bytes("EX-B"), by=engineer)
    assert refused.value.sentence() == (
        "survey.json, site.code: This survey is of EX-B, the site is EX-A. "
        "Hand it in at EX-B, or mend site.code."
    )


def test_the_bed_is_compared_with_the_long_profile(site, engineer):
    """Source: XS-06, 0.3 m. The bed of worked example A lies at 100.00 m; the profile at 100.31."""
    rows = "code,distance_upstream_m,bed_level_m\nEX-A,-100,99.91\nEX-A,100,100.71\n"
    district = site.watershed.district
    bulk_enter_profiles(district_id=district.pk, name="p.csv", data=rows.encode(), by=engineer)
    read = preview_survey(site_id=site.pk, name="s.json", data=pack_bytes(), by=engineer)
    (found,) = [one for one in read.findings if one.rule == "XS-06"]
    assert found.sentence() == (
        "s.json, ground.level_m: Bed is 100.00 m on the cross line and 100.31 m on the long line. "
        "Which benchmark was used?"
    )
    assert found.level == "warn"


def test_a_profile_within_the_limit_raises_nothing(site, engineer):
    rows = "code,distance_upstream_m,bed_level_m\nEX-A,-100,99.89\nEX-A,100,100.69\n"
    district = site.watershed.district
    bulk_enter_profiles(district_id=district.pk, name="p.csv", data=rows.encode(), by=engineer)
    read = preview_survey(site_id=site.pk, name="s.json", data=pack_bytes(), by=engineer)
    assert [one for one in read.findings if one.rule == "XS-06"] == []


@pytest.mark.parametrize("role", [Role.DISTRICT, Role.PROGRAMME, Role.AUDITOR, Role.ADMIN])
def test_only_field_staff_and_engineers_hand_surveys_in(site, role):
    user = a_user(role, site.watershed.district)
    for act in (preview_survey, accept_survey):
        with pytest.raises(Refused, match="Ask somebody posted here as engineer or field staff"):
            act(site_id=site.pk, name="s.json", data=pack_bytes(), by=user)


def test_surveys_are_seen_where_one_serves(site, engineer, django_assert_num_queries):
    a_survey(site, engineer)
    a_survey(site, engineer, works={"pump_hours": 480})
    foreign = a_user(Role.ENGINEER, a_district("ZZ"))
    assert visible_surveys(foreign).count() == 0
    assert surveys_of(foreign, "EX-A").count() == 0
    with django_assert_num_queries(1):
        assert [
            (one.version, one.site.code, one.by.username, one.upload.name)
            for one in surveys_of(engineer, "EX-A")
        ] == [
            (2, "EX-A", engineer.username, "survey.json"),
            (1, "EX-A", engineer.username, "survey.json"),
        ]


def test_line_and_wall_change_the_pack_and_add_their_own_doubts(site, engineer):
    survey = a_survey(site, engineer)
    line = [{"offset_m": 0.0, "level_m": 103.0}, {"offset_m": 80.0, "level_m": 103.0}]
    with pytest.raises(Refused, match="above the ground"):
        pack_of(survey, points=line)
    pack = pack_of(survey, wall={"thickness_m": 1.2})
    assert pack.wall.thickness_m == 1.2
    assert pack.wall.key_m == read_pack_bytes("s.json", pack_bytes()).wall.key_m
    with pytest.raises(Refused) as refused:
        pack_of(survey, wall={"thicknes_m": 1.2})
    assert refused.value.findings[0].remedy == "Was thickness_m meant?"


def test_a_watershed_out_of_the_posting_is_out_of_reach(site):
    other = a_watershed(site.watershed.district, "TA")
    narrow = an_engineer(site.watershed.district, watersheds=[other])
    with pytest.raises(Refused, match="You may not hand in a survey here"):
        a_survey(site, narrow)
