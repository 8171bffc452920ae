"""What the database itself refuses, whoever writes to it."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from django.apps import apps
from django.db import DatabaseError, IntegrityError, connection, transaction
from django.db.models.deletion import ProtectedError
from django.utils import timezone

from structures.models import (
    Design,
    District,
    GaugeWeight,
    GroundPoint,
    LongProfilePoint,
    Posting,
    RockLine,
    Setting,
    SignInWord,
    Site,
    Stream,
    Structure,
    Survey,
    Upload,
    Watershed,
)
from structures.models.unchanging import Unchanging
from tests.factories import a_district, a_site, a_survey, a_user, a_watershed, an_engineer

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return a_site()


def refused(model, **values):
    with pytest.raises(IntegrityError), transaction.atomic():
        model.objects.create(**values)


@pytest.mark.parametrize(
    "wrong",
    [
        {"lat": 90.01},
        {"lat": -91.0},
        {"lon": 180.5},
        {"accuracy_m": 0.0},
        {"bed_slope": 0.0},
        {"bed_slope": 0.6},
        {"catchment_km2": -1.0},
        {"code": "EX-A"},
    ],
)
def test_a_site_that_cannot_be(site, wrong):
    values = {"code": "NEW", "lat": 15.0, "lon": 77.0, **wrong}
    refused(Site, watershed=site.watershed, changed_by=site.changed_by, **values)


def test_a_site_is_never_deleted_with_what_hangs_on_it(site):
    with pytest.raises(ProtectedError):
        site.delete()


@pytest.mark.parametrize(
    "wrong",
    [
        {"as_of": date(2026, 4, 10)},
        {"water_year_month": 13},
        {"water_year_day": 0},
        {"code": "QU"},
    ],
)
def test_a_district_that_cannot_be(site, wrong):
    refused(District, **{"code": "NEW", "name": "New", "currency": "INR", **wrong})


@pytest.mark.parametrize(
    "wrong", [{"area_km2": 0.0, "outline": {}}, {"area_km2": 3.0}, {"outline": {}}, {"code": "OD"}]
)
def test_a_watershed_that_cannot_be(site, wrong):
    values = {"code": "NEW", "name": "New", **wrong}
    refused(Watershed, district=site.watershed.district, **values)


@pytest.mark.parametrize("weight", [0.0, -0.1, 1.1])
def test_a_gauge_weight_is_a_share(site, weight):
    refused(GaugeWeight, watershed=site.watershed, gauge="R1", weight=weight)


def test_streams_gauges_and_profile_points_stand_once(site):
    for model, values in (
        (Stream, {"watershed": site.watershed, "name": "Odre"}),
        (GaugeWeight, {"watershed": site.watershed, "gauge": "R1"}),
        (LongProfilePoint, {"site": site, "distance_upstream_m": 50.0, "bed_level_m": 100.0}),
        (Structure, {"site": a_site(site.watershed, "B"), "since": date(2026, 1, 1)}),
    ):
        if model is not Structure:
            model.objects.create(**values)
        refused(model, **values)


@pytest.mark.parametrize(
    "wrong",
    [
        {"role": "king"},
        {"role": "engineer", "district": None},
        {"valid_from": date(2026, 2, 1), "valid_to": date(2026, 1, 31)},
    ],
)
def test_a_posting_that_cannot_be(site, wrong):
    values = {"role": "field", "district": site.watershed.district, "valid_from": date(2026, 1, 1)}
    refused(Posting, user=site.changed_by, **{**values, **wrong})


def test_a_word_ends_after_it_begins(site):
    now = timezone.now()
    refused(SignInWord, user=site.changed_by, word_hash="x", made_at=now, expires_at=now)


@pytest.mark.parametrize(
    "wrong",
    [
        {"outcome": "kept"},
        {"rows_in": 3, "rows_kept": 1, "rows_held": 1, "rows_refused": 0},
        {"outcome": "kept", "rows_in": 3, "rows_kept": 2},
    ],
)
def test_a_file_whose_rows_do_not_add_up(site, wrong):
    values = {"kind": "survey", "name": "x", "size": 1, "sha256": "0" * 64, **wrong}
    refused(Upload, district=site.watershed.district, by=site.changed_by, **values)


def test_the_same_bytes_are_kept_once_a_district(site):
    counted = {"rows_in": 0, "rows_kept": 0, "rows_held": 0, "rows_refused": 0}
    values = {"kind": "survey", "name": "x", "size": 1, "sha256": "0" * 64, **counted}
    here = {"district": site.watershed.district, "by": site.changed_by}
    Upload.objects.create(**values, **here, outcome="refused")
    Upload.objects.create(**values, **here, outcome="kept")
    refused(Upload, **values, **here, outcome="kept")
    elsewhere = {"district": a_district("ZZ"), "by": site.changed_by}
    assert Upload.objects.create(**values, **elsewhere, outcome="kept").pk


@pytest.mark.parametrize(
    "wrong", [{"reason": ""}, {"owner": "E"}, {"owner": "E", "decided_by": "N. N."}]
)
def test_a_setting_without_reason_or_signature(site, wrong):
    values = {"key": "lift_m", "value": 1.5, "source": "C", "owner": "D", "reason": "why", **wrong}
    refused(Setting, changed_by=site.changed_by, **values)


def test_a_setting_stands_once_a_district_and_once_everywhere(site):
    values = {"key": "lift_m", "value": 1.5, "source": "C", "owner": "D", "reason": "why"}
    values["changed_by"] = site.changed_by
    for district in (None, site.watershed.district):
        Setting.objects.create(**values, district=district)
        refused(Setting, **values, district=district)


def test_a_structure_has_a_stage_of_the_list(site):
    with pytest.raises(IntegrityError), transaction.atomic():
        Structure.objects.filter(site=site).update(stage="finished")


class TestSurvey:
    @pytest.fixture
    def survey(self, site):
        return a_survey(site, an_engineer(site.watershed.district))

    @pytest.mark.parametrize(
        "wrong",
        [{"version": 1}, {"version": 0}, {"left_toe_m": 50.0}, {"left_toe_m": 51.0}],
    )
    def test_one_that_cannot_be(self, survey, wrong):
        upload = Upload.objects.create(
            district=survey.upload.district,
            kind="survey",
            name="x",
            size=1,
            sha256="0" * 64,
            by=survey.by,
        )
        values = {"version": 2, "left_toe_m": 30.0, "right_toe_m": 50.0, "pack": {}, "digest": "x"}
        refused(Survey, site=survey.site, upload=upload, by=survey.by, **{**values, **wrong})

    @pytest.mark.parametrize("wrong", [{"version": 1}, {"version": 0}, {"reason": ""}])
    def test_a_rock_line_that_cannot_be(self, survey, wrong):
        values = {"survey": survey, "points": [], "digest": "x", "reason": "why", "by": survey.by}
        RockLine.objects.create(version=1, **values)
        refused(RockLine, **{"version": 2, **values, **wrong})

    def test_a_design_is_drawn_once(self, survey):
        values = {
            "structure": survey.site.structure,
            "survey": survey,
            "digest": "x",
            "by": survey.by,
        }
        Design.objects.create(version=1, **values)
        refused(Design, version=2, **values)
        refused(Design, version=1, **{**values, "digest": "y"})

    def test_it_is_written_once(self, survey):
        survey.version = 9
        for change in (
            survey.save,
            survey.delete,
            lambda: Survey.objects.update(version=9),
            lambda: GroundPoint.objects.all().delete(),
        ):
            with pytest.raises(TypeError, match=r"written once|kept for good"):
                change()


WRITTEN_ONCE = (
    "structures_survey",
    "structures_groundpoint",
    "structures_rocktest",
    "structures_probe",
    "structures_sounding",
    "structures_soundingreading",
    "structures_refractionline",
    "structures_refractionpick",
    "structures_rockline",
    "structures_entry",
    "structures_photo",
    "structures_paper",
    "structures_question",
    "structures_answer",
    "structures_move",
    "structures_foundlevel",
    "structures_trenchlook",
    "structures_daysheet",
    "structures_incident",
    "structures_claytest",
    "structures_verdict",
    "structures_complaint",
    "structures_complaintanswer",
)


@pytest.mark.parametrize("table", WRITTEN_ONCE)
def test_every_table_written_once_carries_its_trigger(table):
    """A later migration that rebuilds a table on SQLite drops its triggers unasked."""
    assert triggers(table) == [f"{table}_unchanging"]


def test_the_list_of_such_tables_is_complete():
    ours = apps.get_app_config("structures").get_models()
    assert {one._meta.db_table for one in ours if issubclass(one, Unchanging)} == {*WRITTEN_ONCE}


def test_the_database_refuses_a_change_past_the_program(site):
    a_survey(site, an_engineer(site.watershed.district))
    with pytest.raises(DatabaseError, match="is written once"), transaction.atomic():
        raw("UPDATE structures_survey SET version = 9")


@pytest.mark.postgres
def test_postgresql_refuses_deletion_as_well(site):
    a_survey(site, an_engineer(site.watershed.district))
    with pytest.raises(DatabaseError, match="is written once"), transaction.atomic():
        raw("DELETE FROM structures_groundpoint")


def raw(statement, *values):
    with connection.cursor() as cursor:
        cursor.execute(statement, values)
        return cursor.fetchall() if cursor.description else None


def triggers(table):
    source = {
        "sqlite": "SELECT name FROM sqlite_master WHERE type = 'trigger' AND tbl_name = %s",
        "postgresql": "SELECT tgname FROM pg_trigger WHERE NOT tgisinternal "
        "AND tgrelid = (%s)::regclass",
    }
    return [name for (name,) in raw(source[connection.vendor], table)]


def test_history_keeps_who_changed_a_row(site):
    by = a_user()
    site.name = "another name"
    site._history_user = by
    site.save()
    newest, first = site.history.all()
    assert (newest.name, newest.history_user, first.name) == ("another name", by, "the ford")
    assert newest.history_date - first.history_date < timedelta(minutes=1)


def test_a_watershed_keeps_its_history():
    watershed = a_watershed()
    watershed.name = "Odremma east"
    watershed.save()
    assert [row.name for row in watershed.history.all()] == ["Odremma east", "Odremma"]
