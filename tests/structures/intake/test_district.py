"""The district's tables as packs, and the example packs that were made from them."""

import csv
import shutil
from pathlib import Path

import pytest

from structures.errors import Refused
from structures.intake.district import read_district
from structures.intake.pack import GroundWater, RockTest, SlopeStation, Toes
from structures.intake.pack_writer import write_csv, write_json, write_xlsx
from structures.intake.survey_pack import read_pack, read_pack_bytes

FIXTURES = Path(__file__).parents[3] / "fixtures"
DEMO = FIXTURES / "demo"
PACKS = FIXTURES / "packs"


@pytest.fixture(scope="module")
def district():
    return read_district(DEMO)


def rows(name, code):
    with (DEMO / f"{name}.csv").open(newline="") as stream:
        return [row for row in csv.DictReader(stream) if row["site_id"] == code]


def test_every_site_with_toes_has_a_pack(district):
    """Oracle: sites.csv read by the csv module."""
    with (DEMO / "sites.csv").open(newline="") as stream:
        sites = [row["site_id"] for row in csv.DictReader(stream) if row["left_toe_m"]]
    assert list(district) == sites
    assert len(sites) == 11


def test_a_pack_holds_the_rows_of_its_site(district):
    """Oracle: the tables read by the csv module, column by column."""
    for code, pack in district.items():
        ground = rows("cross_sections", code)
        assert [(p.offset_m, p.level_m, p.note) for p in pack.ground] == [
            (float(r["offset_m"]), float(r["ground_level_m"]), r["feature"]) for r in ground
        ]
        assert pack.rock == tuple(
            RockTest(float(r["offset_m"]), 0.0, "outcrop", met_rock=True)
            for r in ground
            if r["feature"] == "outcrop"
        )
        assert [(p.offset_m, p.depth_m, p.refused, p.why_stopped) for p in pack.probes] == [
            (float(r["offset_m"]), float(r["depth_m"]), r["refused"] == "yes", r["why_stopped"])
            for r in rows("probes", code)
        ]
        drawn = rows("drawings", code)
        assert [(p.offset_m, p.level_m) for p in pack.rock_line] == [
            (float(r["offset_m"]), float(r["rock_likely_m"])) for r in drawn
        ]
        picks = [pick for line in pack.refraction for pick in line.picks]
        assert [(p.shot_m, p.geophone_m, p.time_ms) for p in picks] == [
            (float(r["shot_m"]), float(r["geophone_m"]), float(r["time_ms"]))
            for r in rows("refraction", code)
        ]


def test_settings_water_and_works_of_one_site(district):
    """Oracle: read by eye: settings.json, underflow.csv, sites.csv; (67.00 - 8.88) / 6 is 9.7, so ten strips of 24 h."""
    pack = district["OD-01"]
    assert pack.toes == Toes(14.0, 62.0)
    assert pack.ground_water == GroundWater(18.0, 0.0042, None, 421.8)
    assert pack.wall.side_slope == (SlopeStation(0.0, 1.5),)
    assert pack.wall.changed == ("side_slope",)
    assert pack.works.pump_hours == 240.0


def test_strips_agree_with_those_that_were_dug(district):
    """Oracle: strip numbers of the finished wall TA-05, whose last strip ends at 61.10 m."""
    assert district["TA-05"].works.pump_hours == 9 * 24


def test_slips_of_the_sheets_are_found(district):
    """Oracle: the sheets read by eye; each slip stands at its line of the district's table."""
    told = {(f.rule, f.where) for pack in district.values() for f in pack.findings}
    assert told == {
        ("SO-05", "soundings.csv line 57"),  # 1491.0 among 209 and 150
        ("SO-06", "soundings.csv line 57"),
        ("SO-03", "soundings.csv line 145"),  # MN/2 from 0.25 to 2 without a repeat
        ("SO-02", "soundings.csv line 218"),  # MN/2 20 at AB/2 40
        ("SO-02", "soundings.csv line 219"),
        ("SO-03", "soundings.csv line 220"),  # the repeat was one of those
        ("SO-01", "soundings.csv line 277"),  # AB/2 4 after 6
        ("SO-06", "soundings.csv line 334"),  # 25 m against 20 m, a dry electrode
        ("PR-05", "probes.csv line 18"),  # refused 2 m above its neighbours
        ("PR-07", "probes.csv line 82"),  # 4.5 m five times
        ("RF-01", "refraction.csv line 79"),  # 24 m before 27 m
        ("RK-03", "probes.csv line 131"),  # rods that went below the drawn rock
        ("RK-03", "probes.csv line 132"),
        ("RK-03", "probes.csv line 133"),
    }


def test_the_line_is_left_out_when_it_is_to_be_estimated(district):
    estimated = read_district(DEMO, settled_line=False)
    assert {pack.rock_line for pack in estimated.values()} == {None}
    assert estimated["OD-01"].probes == district["OD-01"].probes


def test_the_example_packs_are_those_of_the_district(district):
    """Oracle: the packs made anew; a workbook is compared by what it reads to."""
    assert (PACKS / "OD-01.json").read_bytes() == write_json(district["OD-01"])
    folder = {path.name: path.read_bytes() for path in (PACKS / "TA-02").iterdir()}
    assert folder == write_csv(district["TA-02"])
    assert read_pack(PACKS / "OD-01.json") == district["OD-01"]
    assert read_pack(PACKS / "TA-02") == district["TA-02"]
    written = read_pack_bytes("BI-03.xlsx", write_xlsx(district["BI-03"]))
    assert read_pack(PACKS / "BI-03.xlsx") == written == district["BI-03"]


@pytest.mark.parametrize("name", ["drawings.csv", "settings.json"])
def test_a_missing_table_is_named(tmp_path, name):
    folder = shutil.copytree(DEMO, tmp_path / "demo")
    (folder / name).unlink()
    with pytest.raises(Refused, match=name):
        read_district(folder)


def test_a_wrong_cell_is_refused_at_its_line(tmp_path):
    folder = shutil.copytree(DEMO, tmp_path / "demo")
    table = folder / "drawings.csv"
    table.write_text(
        table.read_text().replace("OD-01,1,2022-12-22,0.0", "OD-01,x,2022-12-22,0.0", 1)
    )
    with pytest.raises(Refused) as refused:
        read_district(folder)
    assert ("drawings.csv line 2", "drawings.version") in {
        (f.where, f.field) for f in refused.value.findings
    }
