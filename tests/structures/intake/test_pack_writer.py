"""What was written reads back to the same pack, in every form."""

import csv
import io
import json
import zipfile

import openpyxl
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.intake.pack import (
    GroundPoint,
    Probe,
    Site,
    SurveyPack,
    Toes,
    WallSettings,
    Works,
)
from structures.intake.pack_writer import pack_document, write_csv, write_json, write_xlsx
from structures.intake.survey_pack import read_pack_bytes
from tests.structures.intake.packs import GOOD, good


def zipped(files):
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        for name, content in files.items():
            archive.writestr(name, content)
    return stream.getvalue()


def readings_of_all_forms(pack):
    yield read_pack_bytes("p.json", write_json(pack))
    yield read_pack_bytes("p.zip", zipped(write_csv(pack)))
    yield read_pack_bytes("p.xlsx", write_xlsx(pack))


@pytest.mark.parametrize(
    "wall",
    [
        {"side_slope": 1.5},
        {"side_slope": [{"offset_m": 3, "slope": 2.5}]},
        {"film_faces": 1, "side_slope": [{"offset_m": 0, "slope": 2}, {"offset_m": 9, "slope": 3}]},
        {},
    ],
)
def test_a_pack_comes_back_from_every_form(wall):
    """Oracle: the pack that was written."""
    pack = read_pack_bytes("", json.dumps(good(wall=wall)).encode())
    assert list(readings_of_all_forms(pack)) == [pack, pack, pack]


def test_the_document_is_the_one_that_was_read():
    """Oracle: the good pack itself; numbers are floats, sheet rock is said."""
    pack = read_pack_bytes("", json.dumps(GOOD).encode())
    expected = json.loads(json.dumps(GOOD))
    for test in expected["rock"]:
        test["what"] = "sheet"
    assert pack_document(pack) == expected


TEXT = (
    st.text(st.sampled_from("=+-@'\",;\n\t aé१<&"), min_size=1, max_size=8)
    .map(str.strip)
    .filter(bool)
)


@settings(max_examples=30)
@given(TEXT, TEXT)
def test_text_of_any_signs_comes_back_as_text(name, note):
    """Oracle: the text that was written; no spreadsheet may run it, no reader may change it."""
    pack = SurveyPack(
        site=Site("KE-04", name=name),
        ground=(GroundPoint(0.0, 10.0, note), GroundPoint(9.0, 11.0)),
        toes=Toes(0.0, 9.0),
        probes=(Probe(4.0, 2.0, refused=True, why_stopped=note),),
        works=Works(support_design=name),
    )
    assert list(readings_of_all_forms(pack)) == [pack, pack, pack]


@pytest.mark.parametrize("sign", ["=", "+", "-", "@"])
def test_no_cell_of_a_table_begins_like_a_formula(sign):
    """Oracle: the csv module and openpyxl, which call a formula "f"."""
    pack = SurveyPack(
        site=Site("KE-04", name=f"{sign}1+1"),
        ground=(GroundPoint(0.0, 10.0), GroundPoint(9.0, 11.0)),
        toes=Toes(0.0, 9.0),
    )
    rows = list(csv.reader(io.StringIO(write_csv(pack)["site.csv"].decode())))
    assert rows[1][2] == f"'{sign}1+1"
    book = openpyxl.load_workbook(io.BytesIO(write_xlsx(pack)))
    assert (book["site"]["C2"].value, book["site"]["C2"].data_type) == (f"{sign}1+1", "s")


OFFSETS = st.lists(st.floats(-900, 4900), min_size=2, max_size=8, unique=True).map(sorted)


def surveyed(offsets, thickness_m):
    return SurveyPack(
        site=Site("KE-04"),
        ground=tuple(GroundPoint(offset, 100.0 + offset / 7) for offset in offsets),
        toes=Toes(offsets[0], offsets[-1]),
        wall=WallSettings(thickness_m=thickness_m, changed=("thickness_m",)),
    )


@given(OFFSETS, st.floats(0.6, 0.89))
def test_numbers_come_back_to_the_last_bit(offsets, thickness_m):
    """Oracle: the numbers that were written (shortest decimal that reads back)."""
    pack = surveyed(offsets, thickness_m)
    assert read_pack_bytes("p.json", write_json(pack)) == pack
    assert read_pack_bytes("p.zip", zipped(write_csv(pack))) == pack


def test_numbers_come_back_from_a_workbook_to_the_fifteen_digits_it_holds():
    """Oracle: the numbers that were written; a spreadsheet keeps 15 significant digits."""
    pack = surveyed([-1 / 3, 22 / 7, 1000 / 3], 0.7)
    back = read_pack_bytes("p.xlsx", write_xlsx(pack))
    for written, read in zip(pack.ground, back.ground, strict=True):
        assert read.level_m == pytest.approx(written.level_m, rel=1e-15)
        assert read.offset_m == pytest.approx(written.offset_m, rel=1e-15)
