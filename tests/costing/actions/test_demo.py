"""The demo: every table through the doors of the office, whole or not at all."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest
from django.core.management import call_command

from costing.actions import demo
from costing.models import RateSchedule
from structures.errors import Refused
from structures.models import District, Site, Structure, Survey, Upload, User, Watershed

pytestmark = pytest.mark.django_db
FOLDER = Path("fixtures/demo")
WORD = "quenharra-sand-and-clay"


def rows(name):
    with (FOLDER / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


def test_the_district_stands_as_its_tables_say():
    """Oracle: the tables themselves."""
    loaded = demo.load_demo(folder=FOLDER, password=WORD)
    assert (loaded.district.name, str(loaded.district.as_of)) == ("Quenharra", "2026-04-10")
    assert set(Site.objects.values_list("code", flat=True)) == {
        r["site_id"] for r in rows("sites.csv")
    }
    assert Watershed.objects.count() == 3
    stages = {(one.site.code, one.stage) for one in Structure.objects.select_related("site")}
    assert stages == {(r["site_id"], r["state"]) for r in rows("structures.csv")}
    drawn = {r["site_id"] for r in rows("sites.csv") if r["left_toe_m"]}
    assert set(Survey.objects.values_list("site__code", flat=True)) == drawn
    assert RateSchedule.objects.get().rates.count() == 10
    assert Upload.objects.exclude(outcome="kept").count() == 0
    for login in ("engineer-1", "av-district", "admin-1"):
        assert User.objects.get(username=login).check_password(WORD)
    assert not District.objects.get(code="AV").watersheds.exists()
    assert list(demo.visible_sites(User.objects.get(username="av-engineer"))) == []


def test_a_load_that_stops_in_the_middle_leaves_nothing(monkeypatch):
    def stop(**_):
        raise KeyboardInterrupt

    monkeypatch.setattr(demo, "take_over_all", stop)
    with pytest.raises(KeyboardInterrupt):
        demo.load_demo(folder=FOLDER, password=WORD)
    assert (User.objects.count(), Site.objects.count(), District.objects.count()) == (0, 0, 0)


def test_only_an_empty_database_takes_it(django_user_model):
    django_user_model.objects.create_user("somebody")
    with pytest.raises(Refused, match="There are accounts here already"):
        demo.load_demo(folder=FOLDER, password=WORD)


def test_a_weak_password_is_refused_and_nothing_kept(capsys):
    with pytest.raises(SystemExit) as ended:
        call_command("demo", "--password", "short")
    assert ended.value.code == 1
    assert "password" in capsys.readouterr().err
    assert User.objects.count() == 0
