"""Surveys in the browser: looked at before anything is kept, side by side, sounding by sounding."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from structures.actions.surveys import accept_survey
from structures.models import Role, Run, Survey, Upload
from structures.queries.survey_reading import reading_of
from structures.runs.queue import execute
from tests import factories as make

pytestmark = pytest.mark.django_db
PACK = Path("fixtures/packs/OD-01.json")


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


@pytest.fixture
def site():
    return make.a_site()


@pytest.fixture
def engineer(site):
    return make.an_engineer(site.watershed.district)


@pytest.fixture
def office(client, engineer):
    client.force_login(engineer)
    return client


def words(answer):
    return " ".join(answer.content.decode().split())


def hand_in(client, site, data):
    files = {"pack": SimpleUploadedFile("survey.json", data)}
    return client.post(f"/sites/{site.code}/surveys/new/", files)


def looked_at(answer):
    return answer.context["looked_at"]


def read(survey):
    execute(str(reading_of(survey).pk))
    return Run.objects.get(pk=reading_of(survey).pk)


def test_a_survey_is_shown_back_before_it_is_kept(office, site):
    page = hand_in(office, site, make.pack_bytes())
    assert page.status_code == 200
    assert "Nothing is kept yet." in words(page)
    assert "<dt>points of the ground</dt> <dd> 6 </dd>" in words(page)
    assert (Survey.objects.count(), Upload.objects.count(), Run.objects.count()) == (0, 0, 0)
    answer = office.post(f"/sites/{site.code}/surveys/new/", {"looked_at": looked_at(page)})
    assert answer.url == f"/sites/{site.code}/"
    assert (Survey.objects.count(), Run.objects.count()) == (1, 1)


def test_what_blocks_a_survey_is_listed_and_nothing_is_kept(office, site):
    page = hand_in(office, site, b'{"pack": 1, "site": {"code": "EX-A"}, "ground": []}')
    assert page.status_code == 422
    for said in ("toes", "ground", "Nothing was kept"):
        assert said in words(page)
    assert Survey.objects.count() == 0
    assert hand_in(office, site, make.pack_bytes("EX-B", "b")).status_code == 422
    assert "No survey pack was chosen" in words(office.post(f"/sites/{site.code}/surveys/new/", {}))


def test_a_look_serves_its_own_hand_and_site_only(client, site, engineer):
    client.force_login(engineer)
    seen = looked_at(hand_in(client, site, make.pack_bytes()))
    other = make.a_site(site.watershed, "EX-B")
    assert client.post(f"/sites/{other.code}/surveys/new/", {"looked_at": seen}).status_code == 422
    client.force_login(make.an_engineer(site.watershed.district))
    assert client.post(f"/sites/{site.code}/surveys/new/", {"looked_at": seen}).status_code == 422
    assert (
        client.post(f"/sites/{site.code}/surveys/new/", {"looked_at": "made up"}).status_code == 422
    )
    assert Survey.objects.count() == 0


def test_who_only_reads_hands_nothing_in(client, site):
    client.force_login(make.a_user(Role.AUDITOR, site.watershed.district))
    assert hand_in(client, site, make.pack_bytes()).status_code == 422
    assert "not hand one in" in words(client.get(f"/sites/{site.code}/surveys/new/"))


def test_a_survey_shows_what_was_handed_in_and_what_follows(office, site, engineer):
    """Oracle: handbook example A, face 155.33 m2."""
    survey = make.a_survey(site, engineer)
    waiting = office.get(f"/sites/{site.code}/surveys/1/")
    assert "Waiting for a worker" in words(waiting)
    read(survey)
    page = words(office.get(f"/sites/{site.code}/surveys/1/"))
    assert "155.33" in page
    assert "survey.json" in page


def test_a_failed_reading_can_be_asked_for_again(office, site, engineer):
    survey = make.a_survey(site, engineer)
    Run.objects.update(state=Run.State.FAILED, message="The worker stopped.")
    assert "The worker stopped." in words(office.get(f"/sites/{site.code}/surveys/1/"))
    assert office.post(f"/sites/{site.code}/surveys/1/").status_code == 302
    assert reading_of(survey).state == Run.State.QUEUED


def test_two_versions_stand_side_by_side(office, site, engineer):
    """Oracle: clay of handbook example A, 139.80 m3; a fifth of a metre of key more in the second."""
    read(make.a_survey(site, engineer))
    document = json.loads(make.pack_bytes())
    wall = {**document["wall"], "key_m": 0.35}
    ground = [*document["ground"][:-1], {"offset_m": 80.0, "level_m": 104.5}]
    read(make.a_survey(site, engineer, wall=wall, ground=ground))
    page = words(office.get(f"/sites/{site.code}/surveys/2/against/1/"))
    for said in ("139.80", "level_m 104.5", "wall, key_m", "Survey 1", "Survey 2"):
        assert said in page
    assert page.count('class="dw dw-narrow"') == 2
    assert office.get(f"/sites/{site.code}/surveys/1/against/1/").status_code == 404


@pytest.fixture
def sounded(site, engineer):
    """The first site of the demo district: two soundings, eleven probes, two outcrops."""
    sounded = make.a_site(site.watershed, "OD-01")
    data = PACK.read_bytes()
    return accept_survey(site_id=sounded.pk, name=PACK.name, data=data, by=engineer)


def test_refraction_lines_are_told_with_depth_or_reason(office, site, engineer):
    """Four arrivals of one velocity show no second layer, so the line says why it gives none."""
    picks = [{"shot_m": 0, "geophone_m": x, "time_ms": 2.0 * x} for x in (5, 10, 15, 20)]
    line = {"line": "R7", "offset_m": 30.0, "picks": picks}
    found = read(make.a_survey(site, engineer, refraction=[line])).result["figures"]["refraction"]
    assert found[0]["words"].startswith("no depth of rock")
    for path in ("", "surveys/1/"):
        page = words(office.get(f"/sites/{site.code}/{path}"))
        assert f"<dt>R7</dt> <dd> {found[0]['words']} </dd>" in page


def test_one_sounding_stands_on_log_axes_once_it_is_read(office, sounded):
    waiting = words(office.get("/sites/OD-01/surveys/1/soundings/1/"))
    assert "It has not been read yet." in waiting
    said = read(sounded).result["soundings"][0]
    page = words(office.get("/sites/OD-01/surveys/1/soundings/1/"))
    assert f"Rock at {said['rock_depth_m']:.1f} m below ground" in page
    assert "Other layers that fit within the noise" in page
    assert [page.count(f"dw {one}") for one in ("dw-wide", "dw-narrow")] == [1, 1]
    assert office.get("/sites/OD-01/surveys/1/soundings/9/").status_code == 404
