"""Taking a history over: by whom, and not a row of it where one cannot be read."""

from __future__ import annotations

from pathlib import Path

import pytest

from structures.actions.history import take_over
from structures.errors import Refused
from structures.models import Move, Role, Strip, Well
from tests.factories import a_district, a_site, a_user, a_watershed

pytestmark = pytest.mark.django_db
FOLDER = Path("fixtures/demo")


def demo_files(**changes):
    return {path.name: path.read_bytes() for path in FOLDER.glob("*.csv")} | changes


def test_only_who_keeps_the_district_takes_it_over():
    district = a_district()
    for role in (Role.ENGINEER, Role.PROGRAMME, Role.FIELD):
        with pytest.raises(Refused, match="You may not manage a district here"):
            take_over(district_id=district.pk, files={}, by=a_user(role, district))


def test_what_names_nobody_here_keeps_nothing():
    district = a_district()
    a_site(a_watershed(district), "OD-01")
    with pytest.raises(Refused) as told:
        take_over(district_id=district.pk, files=demo_files(), by=a_user(Role.ADMIN))
    assert told.value.what.endswith("things are wrong in this history.")
    first = told.value.findings[0]
    assert (first.where, first.field) == ("sites.csv line 3", "site_id")
    assert first.what == '"OD-02" is not among the sites known here.'
    assert not any(model.objects.exists() for model in (Move, Strip, Well))


def test_an_empty_folder_is_told_table_by_table():
    with pytest.raises(Refused) as told:
        take_over(district_id=a_district().pk, files={}, by=a_user(Role.ADMIN))
    assert told.value.findings[0].sentence() == (
        "sites.csv: The table is missing. Put it into the folder."
    )
