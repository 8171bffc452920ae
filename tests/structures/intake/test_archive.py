"""Archives are judged by their list before anything is opened."""

import struct
import zipfile

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.archive import read_archive, too_large
from structures.intake.survey_pack import read_pack, read_pack_bytes
from structures.intake.tree import Ledger
from tests.structures.intake.packs import GOOD_TABLES, workbook_bytes, write_zip


def test_entries_are_opened_by_name(tmp_path):
    path = write_zip(tmp_path / "p.zip")
    ledger = Ledger()
    entries = read_archive("p.zip", path.read_bytes(), ledger)
    assert entries == {name: text.encode() for name, text in GOOD_TABLES.items()}
    assert ledger.findings == []


def test_nothing_is_opened_when_the_list_says_too_much(tmp_path, monkeypatch):
    """Oracle: the opening function itself, which must not be called."""
    path = write_zip(tmp_path / "p.zip", GOOD_TABLES | {"rock.csv": b"0" * 30_000_000})
    opened = []
    monkeypatch.setattr(zipfile.ZipFile, "open", lambda *_, **__: opened.append(1))
    with pytest.raises(Refused):
        read_pack(path)
    assert opened == []


def test_a_list_that_lies_about_a_size_gives_no_more_than_it_said(tmp_path):
    """An entry of 5 MB whose list says 10 bytes: damaged, not unpacked."""
    path = write_zip(tmp_path / "p.zip", {"ground.csv": b"0" * 5_000_000})
    content = bytearray(path.read_bytes())
    struct.pack_into("<I", content, content.index(b"PK\x01\x02") + 24, 10)
    with pytest.raises(Refused, match="damaged"):
        read_pack_bytes("p.zip", bytes(content))


def test_an_unusual_packing_is_refused(tmp_path):
    path = tmp_path / "p.zip"
    with zipfile.ZipFile(path, "w", zipfile.ZIP_LZMA) as archive:
        archive.writestr("site.csv", GOOD_TABLES["site.csv"])
    with pytest.raises(Refused, match="unusual way"):
        read_pack(path)


def test_two_entries_of_one_name_are_refused(tmp_path):
    path = write_zip(tmp_path / "p.zip")
    with (
        pytest.warns(UserWarning, match="Duplicate name"),
        zipfile.ZipFile(path, "a") as archive,
    ):
        archive.writestr("site.csv", "code\nKE-05\n")
    with pytest.raises(Refused, match=r"p\.zip site\.csv: Two entries"):
        read_pack(path)


def test_entries_that_open_to_too_much_together_are_refused(tmp_path):
    """Oracle: three entries of 18 MB, each under its own limit, against 50 MB in all."""
    entries = {f"{name}.csv": b"0" * 18_000_000 for name in ("ground", "rock", "probes")}
    with pytest.raises(Refused) as refused:
        read_pack(write_zip(tmp_path / "p.zip", entries))
    assert (
        refused.value.findings[0].what == "The archive opens to 54 MB, limit 50. Nothing was read."
    )


def test_what_is_no_table_is_left_with_the_archive(tmp_path):
    pack = read_pack(write_zip(tmp_path / "p.zip", GOOD_TABLES | {"photo.jpg": b"\xff\xd8\xff"}))
    assert [(f.where, f.level) for f in pack.findings] == [("p.zip photo.jpg", "note")]


def test_one_table_under_two_folders_is_refused(tmp_path):
    entries = GOOD_TABLES | {"old/site.csv": GOOD_TABLES["site.csv"]}
    with pytest.raises(Refused, match="second table site"):
        read_pack(write_zip(tmp_path / "p.zip", entries))


@given(st.integers(0, 10_000), st.integers(0, 255))
def test_any_byte_of_a_workbook_exchanged_gives_a_pack_or_a_refusal(place, byte):
    data = bytearray(BOOK)
    data[place % len(data)] = byte
    try:
        answer = read_pack_bytes("s.xlsx", bytes(data))
    except Refused as refused:
        answer = refused
    blocks = [finding for finding in answer.findings if finding.level == "block"]
    assert bool(blocks) == isinstance(answer, Refused)


BOOK = workbook_bytes()


def test_a_file_that_is_too_large_says_how_large_and_what_the_limit_is():
    """Oracle: 20 MB of a million bytes (FI-02)."""
    assert too_large(20_000_000) == ""
    assert too_large(25_000_000) == "The file has 25 MB, limit 20. Nothing was read."
