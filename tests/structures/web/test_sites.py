"""Sites in the browser: list, map and search as one filter, the sheet, the edit, the rock line."""

from __future__ import annotations

import re

import pytest

from structures.models import Role, Run, Site
from structures.queries.survey_reading import reading_of
from structures.runs.queue import execute
from tests import factories as make

pytestmark = pytest.mark.django_db
QUERIES_MOST = 45  # a sheet asks the database less often than this


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


@pytest.fixture
def site():
    return make.a_site(village_upstream="Nolkurava")


@pytest.fixture
def engineer(site):
    return make.an_engineer(site.watershed.district)


@pytest.fixture
def office(client, engineer):
    client.force_login(engineer)
    return client


def words(answer):
    return " ".join(answer.content.decode().split())


def read(survey):
    execute(str(reading_of(survey).pk))
    return Run.objects.get(pk=reading_of(survey).pk)


@pytest.mark.parametrize(
    ("filters", "found"),
    [
        ("", True),
        ("?q=EX-A", True),
        ("?q=nolku", True),
        ("?q=ford", True),
        ("?q=elsewhere", False),
        ("?stage=noted", True),
        ("?stage=judged", False),
        ("?watershed=OD", True),
        ("?watershed=not-there", True),
        ("?page=99", True),
    ],
)
def test_list_and_map_show_what_one_filter_finds(office, site, filters, found):
    page = office.get(f"/sites/{filters}")
    assert page.status_code == 200
    assert (f"/sites/{site.code}/" in words(page)) == found
    assert (">EX-A</text>" in words(page)) == found


def test_a_site_without_a_survey_says_what_is_not_known(office, site):
    page = words(office.get(f"/sites/{site.code}/"))
    assert "No survey was handed in." in page
    assert f"/sites/{site.code}/surveys/new/" in page


def test_a_sheet_shows_progress_and_then_the_read_figures(office, site, engineer):
    """Oracle: handbook example A, length 53.33 m, face 155.33 m2."""
    survey = make.a_survey(site, engineer)
    waiting = words(office.get(f"/sites/{site.code}/"))
    assert "Waiting for a worker" in waiting
    read(survey)
    page = words(office.get(f"/sites/{site.code}/"))
    for printed in ("53.33", "155.33", "1,297.92", "As drawn, yes"):
        assert printed in page
    assert page.count('class="dw dw-wide"') == 1


def test_the_sheet_asks_the_database_a_bounded_number_of_times(
    office, site, engineer, django_assert_max_num_queries
):
    read(make.a_survey(site, engineer))
    with django_assert_max_num_queries(QUERIES_MOST):
        office.get(f"/sites/{site.code}/")


def test_who_may_not_see_a_site_learns_nothing_of_it(client, site):
    stranger = make.an_engineer(make.a_district("ZZ", name="elsewhere"))
    client.force_login(stranger)
    for path in ("", "edit/", "rock/", "try/", "surveys/new/", "surveys/1/"):
        answer = client.get(f"/sites/{site.code}/{path}")
        assert answer.status_code == 404
        assert site.name not in answer.content.decode()
    assert site.code not in words(client.get("/sites/?q=EX"))


def test_without_an_account_the_way_leads_to_the_sign_in(client, site):
    assert client.get(f"/sites/{site.code}/").url.startswith("/sign-in/")


def form_of(site, **changes):
    values = {
        "revision": site.revision,
        "name": site.name,
        "lat": str(site.lat),
        "lon": str(site.lon),
        "downstream_users": site.downstream_users,
    }
    return {**values, **changes}


def test_an_edit_is_kept_as_it_is_typed_in_the_field(office, site):
    """A decimal comma and degrees with minutes are read; a blank is "not known"."""
    sent = form_of(site, bed_level_m="423,40", lat="15°45'36\"N", accuracy_m="")
    assert office.post(f"/sites/{site.code}/edit/", sent).url == f"/sites/{site.code}/"
    kept = Site.objects.get(pk=site.pk)
    assert (kept.bed_level_m, kept.accuracy_m, kept.revision) == (423.4, None, 2)
    assert kept.lat == pytest.approx(15.76, abs=1e-9)  # 15 + 45/60 + 36/3600


def test_of_two_editors_the_second_is_told_by_whom_and_loses_nothing(office, site):
    other = make.an_engineer(site.watershed.district, login="other-hand")
    Site.objects.filter(pk=site.pk).update(revision=2, changed_by=other)
    page = office.post(f"/sites/{site.code}/edit/", form_of(site, name="new name"))
    assert page.status_code == 422
    assert "was changed by other-hand" in words(page)
    assert 'value="new name"' in words(page)
    assert Site.objects.get(pk=site.pk).name == "the ford"


def test_a_wrong_value_is_told_at_its_field(office, site):
    page = office.post(f"/sites/{site.code}/edit/", form_of(site, bed_level_m="deep", lon="200"))
    assert page.status_code == 422
    assert 'href="#id_bed_level_m"' in words(page)
    assert 'href="#id_lon"' in words(page)
    assert Site.objects.get(pk=site.pk).revision == 1


def estimated_survey(site, engineer):
    """Example A without its line, with rock met in two pits: 98.00 at 20 m and at 60 m."""
    rock = [
        {"offset_m": x, "depth_m": 4.0, "method": "pit", "met_rock": True, "what": "sheet"}
        for x in (20.0, 40.0, 60.0)
    ]
    return make.a_survey(site, engineer, rock_line=None, rock=rock)


def test_the_estimated_line_is_settled_as_it_is(office, site, engineer):
    survey = estimated_survey(site, engineer)
    estimated = read(survey).result["estimated"]
    assert "Settle as estimated" in words(office.get(f"/sites/{site.code}/rock/"))
    sent = {"line": "estimated", "reason": "pits agree", "rests_on": ["pit@20", "pit@40"]}
    assert office.post(f"/sites/{site.code}/rock/", sent).url == f"/sites/{site.code}/"
    line = survey.rock_lines.get()
    assert [one["level_m"] for one in line.points] == [one["level_m"] for one in estimated]
    assert line.rests_on == ["pit@20", "pit@40"]


@pytest.mark.parametrize(
    ("depth_m", "asked"), [(2.0, "Try another wall"), (9.0, "Settle the rock line")]
)
def test_the_next_step_is_the_line_where_a_probe_went_below_it(
    office, site, engineer, depth_m, asked
):
    """Example A brings a settled line; at 40 m it lies less than 9 m below ground."""
    probe = {"offset_m": 40.0, "depth_m": depth_m, "refused": False}
    read(make.a_survey(site, engineer, probes=[probe]))
    page = words(office.get(f"/sites/{site.code}/"))
    button = re.search(r'<a class="act" href="[^"]+">([^<]+)</a>', page)
    assert button[1] == asked


def test_a_rock_page_opened_before_a_newer_line_or_survey_settles_nothing(office, site, engineer):
    survey = make.a_survey(site, engineer)
    path = f"/sites/{site.code}/rock/"
    sent = {"reason": "the pits agree", "offset_0": "0", "level_0": "98", "offset_1": "80"}
    sent |= {"level_1": "98", "line": "points", "seen_survey": "1", "seen_line": "0"}
    page = words(office.get(path))
    for field, value in (("seen_survey", 1), ("seen_line", 0)):
        assert f'name="{field}" value="{value}"' in page
    assert office.post(path, sent).status_code == 302
    late = office.post(path, sent)
    assert late.status_code == 422
    assert "Line 1 was settled by" in words(late)
    assert 'name="seen_line" value="0"' in words(late)
    make.a_survey(site, engineer, wall={"key_m": 0.2})
    late = office.post(path, sent | {"seen_line": "1"})
    assert late.status_code == 422
    assert "Survey 2 came in from" in words(late)
    assert survey.rock_lines.count() == 1
    assert office.post(path, sent | {"seen_survey": "9"}).status_code == 404


def test_points_are_moved_and_a_blank_row_is_left_out(office, site, engineer):
    survey = estimated_survey(site, engineer)
    read(survey)
    sent = {"line": "points", "reason": "outcrop seen", "rests_on": ["pit@20"]}
    for place, (offset, level) in enumerate([("0", "103,5"), ("40", "95.9"), ("80", "103.5")]):
        sent |= {f"offset_{place}": offset, f"level_{place}": level}
    answer = office.post(f"/sites/{site.code}/rock/", sent)
    assert answer.status_code == 302, words(answer)
    points = survey.rock_lines.get().points
    assert [(one["offset_m"], one["level_m"]) for one in points] == [
        (0.0, 103.5),
        (40.0, 95.9),
        (80.0, 103.5),
    ]


def test_a_line_without_a_reason_or_with_half_a_point_is_told_at_the_field(office, site, engineer):
    survey = estimated_survey(site, engineer)
    read(survey)
    page = office.post(f"/sites/{site.code}/rock/", {"line": "estimated", "rests_on": ["pit@20"]})
    assert page.status_code == 422
    assert 'href="#id_reason"' in words(page)
    page = office.post(f"/sites/{site.code}/rock/", {"line": "points", "offset_0": "5"})
    assert page.status_code == 422
    assert "A point has an offset and a level" in words(page)
    assert not survey.rock_lines.exists()


def test_field_and_auditor_see_the_line_and_settle_none(client, site, engineer):
    survey = estimated_survey(site, engineer)
    read(survey)
    for role in (Role.FIELD, Role.AUDITOR):
        client.force_login(make.a_user(role, site.watershed.district))
        page = client.get(f"/sites/{site.code}/rock/")
        assert page.status_code == 200
        assert "Settle as estimated" not in words(page)
        sent = {"line": "estimated", "reason": "so", "rests_on": ["pit@20"]}
        assert client.post(f"/sites/{site.code}/rock/", sent).status_code == 422
    assert not survey.rock_lines.exists()


def test_another_wall_stands_beside_the_drawn_one(office, site, engineer):
    """Oracle: handbook example A, clay 139.80 m3 at 0.90 m; 0.60 m thick holds two thirds of it."""
    read(make.a_survey(site, engineer))
    page = office.get(f"/sites/{site.code}/try/?thickness_m=0,6")
    assert page.status_code == 200
    for printed in ("139.80", "93.20", "-46.60"):
        assert printed in words(page)
    assert words(page).count('class="dw dw-narrow"') == 2


def test_a_setting_out_of_its_range_is_told_and_nothing_is_drawn(office, site, engineer):
    read(make.a_survey(site, engineer))
    page = office.get(f"/sites/{site.code}/try/?thickness_m=9")
    assert page.status_code == 422
    assert 'href="#id_thickness_m"' in words(page)
    swapped = office.get(f"/sites/{site.code}/try/?thickness_m=9", HTTP_HX_REQUEST="true")
    assert swapped.status_code == 200


def test_a_tried_wall_waits_for_the_reading(office, site, engineer):
    make.a_survey(site, engineer)
    assert "Waiting for a worker" in words(office.get(f"/sites/{site.code}/try/"))
