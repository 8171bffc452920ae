"""The register: who may write to it, what it says of an altered row, who is shown what."""

from __future__ import annotations

import json
import subprocess
import sys
from datetime import date
from io import StringIO

import pytest
from django.core.management import call_command
from django.db import connection

from structures.actions.register import append
from structures.actions.settings import change_setting
from structures.errors import Refused
from structures.models import Chain, Entry, Role
from structures.queries.register import (
    check_registers,
    entries_of,
    entry_by_code,
    visible_entries,
)
from tests.factories import a_district, a_site, a_user, a_watershed, an_engineer

pytestmark = pytest.mark.django_db


@pytest.fixture
def district():
    return a_district()


@pytest.fixture
def site(district):
    return a_site(a_watershed(district))


@pytest.fixture
def engineer(district):
    return an_engineer(district)


def entered(district, by, number=1, **more):
    said = {"act": "moved", "subject": f"step {number}", "content": {"step": number}}
    return append(district=district, by=by, **{**said, **more})


def altered(statement, *values, table="structures_entry"):
    """Write past the program, as somebody with the database in hand could."""
    on = f" ON {table}" if connection.vendor == "postgresql" else ""
    with connection.cursor() as cursor:
        cursor.execute(f"DROP TRIGGER IF EXISTS {table}_unchanging{on}")
        cursor.execute(statement, values)


def misfits():
    return [(one.where, one.number, one.why) for one in check_registers() if not one.whole]


def test_entries_hang_on_one_another(district, engineer):
    first, second = (entered(district, engineer, number) for number in (1, 2))
    assert (first.number, first.previous_digest) == (1, "")
    assert (second.number, second.previous_digest) == (2, first.digest)
    end = Chain.objects.get(district=district)
    assert (end.length, end.digest) == (2, second.digest)
    assert misfits() == []


def test_the_digest_is_that_of_the_canonical_text(district, engineer):
    """Oracle: sha256sum of the text written out by hand, keys in order, numbers by their digits."""
    entry = entered(
        district, engineer, content={"to": "priced", "amount_m": 2.50, "all": [1, None]}
    )
    text = '{"all":[1,null],"amount_m":25e-1,"to":"priced"}'
    told = subprocess.run(
        [
            sys.executable,
            "-c",
            "import sys,hashlib;print(hashlib.sha256(sys.stdin.buffer.read()).hexdigest())",
        ],
        input=text.encode(),
        capture_output=True,
        check=True,
    )
    assert entry.content_digest == told.stdout.decode().strip()


def test_each_district_and_the_office_have_a_register_of_their_own(district, engineer):
    other = a_district("NX", name="Nexor")
    for where in (district, other, None, other, None):
        entered(where, engineer)
    ends = {one.district_id: one.length for one in Chain.objects.all()}
    assert ends == {district.pk: 1, other.pk: 2, None: 2}


def test_a_correction_points_at_the_old_entry_and_leaves_it(district, engineer):
    wrong = entered(district, engineer)
    right = entered(district, engineer, 2, corrects=wrong)
    assert right.corrects == wrong
    assert list(wrong.corrections.all()) == [right]
    assert misfits() == []
    with pytest.raises(Refused, match="another register"):
        entered(None, engineer, corrects=wrong)


@pytest.mark.parametrize(
    ("column", "value", "why"),
    [
        ("content", json.dumps({"step": 7}), "content is not what was signed"),
        ("by_name", "somebody", "time, person, act or subject"),
        ("subject", "another step", "time, person, act or subject"),
        ("act", "paid", "time, person, act or subject"),
        ("code", "AAAA-AAAA-AAAA", "short code"),
    ],
)
def test_an_altered_entry_is_named(district, engineer, column, value, why):
    rows = [entered(district, engineer, number) for number in (1, 2, 3)]
    statement = f"UPDATE structures_entry SET {column} = %s WHERE id = %s"  # noqa: S608 -- of the list above
    altered(statement, value, rows[1].pk)
    [(where, number, said)] = misfits()
    assert (where, number) == (district.code, 2)
    assert why in said


def test_a_head_that_disagrees_and_a_cut_off_end_are_named(district, engineer):
    rows = [entered(district, engineer, number) for number in (1, 2)]
    Chain.objects.update(digest=rows[0].digest)
    assert [one[:2] for one in misfits()] == [(district.code, 2)]
    Chain.objects.update(digest=rows[1].digest, length=3)
    assert [one[:2] for one in misfits()] == [(district.code, 3)]


def test_the_command_ends_with_one_and_names_the_entry(district, engineer):
    rows = [entered(district, engineer, number) for number in (1, 2)]
    out = StringIO()
    call_command("check_register", stdout=out)
    assert out.getvalue() == "QU: 2 entries, all fit.\n"
    altered("UPDATE structures_entry SET act = 'other' WHERE id = %s", rows[0].pk)
    err = StringIO()
    with pytest.raises(SystemExit) as ended:
        call_command("check_register", stdout=StringIO(), stderr=err)
    assert ended.value.code == 1
    assert "QU: entry 1 does not fit" in err.getvalue()


def test_what_is_no_json_is_not_entered(district, engineer):
    with pytest.raises(ValueError, match="not JSON"):
        entered(district, engineer, content={"at": object()})
    assert not Entry.objects.exists()


def test_money_is_shown_to_those_who_may_see_it(site, district, engineer):
    plain = entered(district, engineer, structure=site.structure)
    paid = entered(
        district,
        engineer,
        2,
        structure=site.structure,
        content={"currency": "INR", "total": "7.00"},
    )
    field, auditor = (a_user(role, district) for role in (Role.FIELD, Role.AUDITOR))
    assert list(entries_of(auditor, site.code)) == [plain, paid]
    assert list(entries_of(field, site.code)) == [plain]
    assert entry_by_code(field, paid.code) is None
    assert entry_by_code(auditor, paid.code.lower().replace("-", " ")) == paid


def test_nobody_is_shown_another_district(site, district, engineer):
    entered(district, engineer, structure=site.structure)
    entered(district, engineer, 2)
    far = a_district("NX", name="Nexor")
    assert list(visible_entries(a_user(Role.AUDITOR, far))) == []
    assert list(visible_entries(a_user())) == []


def test_an_administrator_is_shown_what_concerns_the_district_and_no_structure(site, engineer):
    district = site.watershed.district
    entered(district, engineer, structure=site.structure)
    whole = entered(district, engineer, 2)
    office = entered(None, engineer, 3)
    keeper = a_user(Role.ADMIN, None)
    assert set(visible_entries(keeper)) == {whole, office}


def test_a_changed_default_of_the_engineer_is_entered(district):
    keeper = a_user(Role.ADMIN, district)
    change_setting(
        key="key_m",
        value=0.3,
        district=district,
        reason="Weathered gneiss on this stream.",
        by=keeper,
        decided=("R. Olmar", "LE-114", date(2026, 3, 2)),
    )
    entry = Entry.objects.get()
    assert entry.content["value"] == 0.3
    assert entry.content["decided_by"] == ["R. Olmar", "LE-114", "2026-03-02"]
    assert misfits() == []
