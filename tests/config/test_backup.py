"""The whole state out and in again: the same rows, files and register, or nothing at all."""

from __future__ import annotations

import json
import shutil
import zipfile
from pathlib import Path

import pytest
from django.conf import settings
from django.core.management import call_command
from django.db import connection

from config.backup import _kept, read_backup, write_backup
from structures.errors import Refused
from structures.models import Entry, RestoreTrial
from structures.queries.register import check_registers
from structures.runs.files import keep_bytes
from tests.structures.web.whole_office import whole_office

pytestmark = pytest.mark.django_db(transaction=True)


@pytest.fixture
def media(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path / "files"
    settings.MEDIA_ROOT.mkdir()
    return settings.MEDIA_ROOT


def state():
    """Oracle: every value that the database itself gives, and every byte of every file."""
    rows = {
        model._meta.label_lower: list(model._base_manager.order_by("pk").values_list())
        for model in _kept()
    }
    root = Path(settings.MEDIA_ROOT)
    files = {path.name: path.read_bytes() for path in root.rglob("*") if path.is_file()}
    return rows, files


def emptied():
    call_command("flush", interactive=False, verbosity=0)
    shutil.rmtree(settings.MEDIA_ROOT)
    Path(settings.MEDIA_ROOT).mkdir()


def altered(source, to, name, change):
    """A copy of a zip in which one part is another, or (None) is missing."""
    with zipfile.ZipFile(source) as old, zipfile.ZipFile(to, "w") as new:
        for part in old.namelist():
            data = old.read(part)
            data = change(data) if part == name else data
            if data is not None:
                new.writestr(part, data)
    return to


def test_a_whole_office_goes_out_and_comes_back(media, tmp_path):
    whole_office("Alderbrook", "7713.53")
    before = state()
    copy = tmp_path / "office.zip"
    told = write_backup(copy)
    assert copy.stat().st_mode & 0o777 == 0o600
    assert told.rows == sum(len(rows) for rows in before[0].values())
    assert told.files == len(before[1]) > 0
    with pytest.raises(Refused, match="not empty"):
        read_backup(copy)
    emptied()
    again = read_backup(copy)
    assert (again.rows, again.files, again.digest) == (told.rows, told.files, told.digest)
    after = state()
    for label, rows in before[0].items():
        assert after[0][label] == rows, label
    assert after[1] == before[1]
    assert all(one.whole for one in check_registers())
    # Numbers go on after those that came back.
    newest = max(Entry.objects.values_list("pk", flat=True))
    trial = RestoreTrial.objects.create(whole=True, told="again", digest="")
    assert trial.pk
    if connection.vendor == "postgresql":
        with connection.cursor() as cursor:
            cursor.execute("SELECT nextval(pg_get_serial_sequence('structures_entry', 'id'))")
            assert cursor.fetchone()[0] == newest + 1


def test_what_was_altered_or_lost_brings_nothing_in(media, tmp_path):
    digest = keep_bytes(b"a sheet")
    whole = tmp_path / "whole.zip"
    write_backup(whole)
    emptied()
    file = f"files/{digest[:2]}/{digest}"

    def more_rows(data):
        manifest = json.loads(data)
        manifest["tables"]["structures.user"]["rows"] = 5
        return json.dumps(manifest)

    def newer(data):
        manifest = json.loads(data)
        manifest["migrations"].append(["structures", "9999_later"])
        return json.dumps(manifest)

    for name, change, sentence in (
        (file, lambda data: data + b".", "was altered"),
        (file, lambda _: None, "is missing"),
        ("rows/structures.user.jsonl", lambda _: b"[]", "was altered"),
        ("manifest.json", lambda _: b"{}", "no backup of Underbund"),
        ("manifest.json", more_rows, "0 rows, and the backup says 5"),
        ("manifest.json", newer, "only the backup knows structures.9999_later"),
    ):
        wrong = altered(whole, tmp_path / "wrong.zip", name, change)
        with pytest.raises(Refused, match=sentence):
            read_backup(wrong)
        assert list(media.rglob("*")) == [] or not any(p.is_file() for p in media.rglob("*"))
    (tmp_path / "no.zip").write_bytes(b"PK no")
    with pytest.raises(Refused, match="no readable backup"):
        read_backup(tmp_path / "no.zip")
    read_backup(whole)
    assert (media / digest[:2] / digest).read_bytes() == b"a sheet"


def test_a_file_that_is_there_is_never_overwritten(media, tmp_path):
    there = tmp_path / "there.zip"
    there.write_bytes(b"yesterday")
    with pytest.raises(Refused, match="there already"):
        write_backup(there)
    with pytest.raises(Refused, match="cannot be written"):
        write_backup(tmp_path / "nowhere" / "x.zip")
    assert there.read_bytes() == b"yesterday"
    assert sorted(one.name for one in tmp_path.iterdir()) == ["files", "there.zip"]


def test_a_trial_keeps_nothing_but_the_word_that_it_was_tried(media, tmp_path, capsys):
    keep_bytes(b"a sheet")
    copy = tmp_path / "office.zip"
    call_command("backup", str(copy))
    call_command("restore", str(copy), "--trial")
    assert "1 files; the register fits" in capsys.readouterr().out
    trial = RestoreTrial.objects.get()
    assert trial.whole
    copy.write_bytes(copy.read_bytes()[:-40])
    with pytest.raises(SystemExit):
        call_command("restore", str(copy), "--trial")
    assert [one.whole for one in RestoreTrial.objects.all()] == [False, True]
