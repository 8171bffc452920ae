"""One meaning in all forms, what is doubted and kept, and that everything is told at once."""

import copy
import json
from pathlib import Path

import pytest

from structures.errors import Refused
from structures.intake.pack import (
    GroundPoint,
    GroundWater,
    Note,
    Probe,
    RefractionPick,
    RockTest,
    Site,
    SlopeStation,
    SoundingReading,
    SurveyPack,
    Toes,
    WallSettings,
    Works,
)
from structures.intake.survey_pack import read_pack, read_pack_bytes
from tests.structures.intake.packs import (
    GOOD,
    GOOD_TABLES,
    good,
    with_row,
    write_folder,
    write_workbook,
    write_zip,
)

PACKS = Path(__file__).parents[3] / "fixtures" / "packs"


def from_json(pack, name="pack.json"):
    return read_pack_bytes(name, json.dumps(pack).encode())


def test_the_smallest_pack_takes_every_default():
    """Oracle: the record written out by hand."""
    pack = from_json(
        {
            "pack": 1,
            "site": {"code": "KE-04"},
            "ground": [{"offset_m": 0, "level_m": 10}, {"offset_m": 9.5, "level_m": 11}],
            "toes": {"left_m": 0, "right_m": 9.5},
        }
    )
    assert pack == SurveyPack(
        site=Site("KE-04"),
        ground=(GroundPoint(0.0, 10.0), GroundPoint(9.5, 11.0)),
        toes=Toes(0.0, 9.5),
    )


def test_every_part_is_read_into_its_record():
    """Oracle: the good pack, read by eye; a Wenner reading has AB = 3 a and MN = a."""
    pack = from_json(GOOD)
    assert pack.site == Site("KE-04", "Keldun ford", "Keldun", 0.004)
    assert pack.ground[0] == GroundPoint(0.0, 103.2, "left bank")
    assert pack.rock[1] == RockTest(52.0, 6.0, "bore", met_rock=False)
    assert pack.probes[0] == Probe(36.0, 4.0, refused=True, why_stopped="rock-like")
    assert pack.soundings[0].readings[0] == SoundingReading(1.5, 0.5, 190.832362)
    assert (pack.soundings[1].label, pack.soundings[1].offset_m) == ("W1", 48.0)
    assert pack.soundings[1].readings[4] == SoundingReading(7.5, 2.5, 73.4, sd_percent=5.0)
    assert pack.refraction[0].picks[0] == RefractionPick(0.0, 5.0, 9.8)
    assert [point.level_m for point in pack.rock_line] == [101.0, 93.5, 95.0]
    assert pack.ground_water == GroundWater(40.0, 0.004, 0.18, 98.9)
    assert pack.wall == WallSettings(
        thickness_m=0.8,
        side_slope=(SlopeStation(0.0, 1.5),),
        changed=("side_slope", "thickness_m"),
    )
    assert pack.works == Works(pump_hours=480.0)
    assert pack.findings == ()


def test_folder_zip_and_workbook_mean_what_the_json_means(tmp_path):
    """Oracle: the JSON form."""
    pack = from_json(GOOD)
    assert read_pack(write_folder(tmp_path / "survey")) == pack
    assert read_pack(write_zip(tmp_path / "survey.zip")) == pack
    assert read_pack(write_workbook(tmp_path / "survey.xlsx")) == pack


def test_a_zip_may_hold_one_folder_or_one_json_file(tmp_path):
    inside = {f"KE-04/{name}": text for name, text in GOOD_TABLES.items()}
    assert read_pack(write_zip(tmp_path / "a.zip", inside)) == from_json(GOOD)
    document = {"KE-04/pack.json": json.dumps(GOOD)}
    assert read_pack(write_zip(tmp_path / "b.zip", document)) == from_json(GOOD)


def test_null_means_left_out():
    pack = good(rock=None, rock_line=None, wall={"thickness_m": None}, works=None)
    with_nulls = good(rock=None, rock_line=None, wall=None, works=None) | {
        "rock": None,
        "rock_line": None,
        "works": None,
    }
    assert from_json(pack) == from_json(with_nulls)


def test_side_slope_as_a_list_and_as_a_table(tmp_path):
    stations = [{"offset_m": 0, "slope": 1.5}, {"offset_m": 14, "slope": 2.0}]
    pack = from_json(good(wall={"thickness_m": 0.8, "side_slope": stations}))
    assert pack.wall.side_slope == (SlopeStation(0.0, 1.5), SlopeStation(14.0, 2.0))
    slopes = "offset_m,slope\n0,1.5\n14,2\n"
    folder = write_folder(tmp_path / "survey", wall="thickness_m\n0.8\n", side_slope=slopes)
    assert read_pack(folder) == pack
    alone = write_folder(tmp_path / "alone", wall=None, side_slope=slopes)
    assert read_pack(alone).wall.changed == ("side_slope",)


def test_a_setting_that_repeats_the_default_is_not_called_changed():
    """Oracle: handbook 12, wall thickness 0.90 m, side slope 2.0."""
    pack = from_json(good(wall={"thickness_m": 0.9, "side_slope": 2.0}))
    assert pack.wall == WallSettings()


def test_the_version_may_stand_in_the_site_table(tmp_path):
    site = "pack,code\n{},KE-04\n"
    assert read_pack(write_folder(tmp_path / "one", site=site.format(1))).site == Site("KE-04")
    with pytest.raises(Refused, match='Pack "2" is not known'):
        read_pack(write_folder(tmp_path / "two", site=site.format(2)))


def test_yes_and_no_are_read_in_all_their_words(tmp_path):
    """Oracle: the words of the interface."""
    words = ("yes", "true", "1", "YES", "no", "false", "0", "No")
    rows = "".join(f"{24 + n},5.0,{word}\n" for n, word in enumerate(words))
    folder = write_folder(
        tmp_path / "s", probes=f"offset_m,depth_m,refused\n{rows}", rock_line=None
    )
    assert [probe.refused for probe in read_pack(folder).probes] == [True] * 4 + [False] * 4


def test_everything_wrong_is_told_at_once():
    pack = with_row("ground", 1, level_m="high")
    pack["probes"][0]["depth_m"] = -4
    pack["wall"] = {"thicknes_m": 0.9}
    del pack["toes"]
    with pytest.raises(Refused) as refused:
        from_json(pack)
    assert [(f.where, f.field) for f in refused.value.findings] == [
        ("pack.json $.ground[1]", "ground.level_m"),
        ("pack.json $", "toes.left_m"),
        ("pack.json $", "toes.right_m"),
        ("pack.json $.probes[0]", "probes.depth_m"),
        ("pack.json $.wall", "wall.thicknes_m"),
    ]
    assert str(refused.value).startswith("5 things are wrong")


def test_a_table_that_cannot_be_read_is_not_called_missing_as_well(tmp_path):
    folder = write_folder(
        tmp_path / "s", toes=b"\xff\xff", ground=GOOD_TABLES["ground.csv"] + "x,y,\n"
    )
    with pytest.raises(Refused) as refused:
        read_pack(folder)
    assert [(f.where, f.field) for f in refused.value.findings] == [
        ("toes.csv line 1", ""),
        ("ground.csv line 10", "ground.offset_m"),
        ("ground.csv line 10", "ground.level_m"),
    ]


def test_a_single_fault_is_the_refusal_itself():
    with pytest.raises(Refused) as refused:
        from_json(good(site={}), name="")
    assert str(refused.value) == "$.site, site.code: This is missing. Give the code of the site."


def test_unknown_keys_are_kept_as_notes_and_told_once_each():
    pack = copy.deepcopy(GOOD) | {"weather": {"sky": "clear"}}
    pack["ground"][0]["leve_m"] = 1
    pack["ground"][1]["leve_m"] = "2"
    read = from_json(pack)
    assert read.notes == (
        Note("pack.json $.weather", "weather", '{"sky": "clear"}'),
        Note("pack.json $.ground[0]", "ground.leve_m", "1"),
        Note("pack.json $.ground[1]", "ground.leve_m", "2"),
    )
    assert [(f.field, f.level, f.remedy) for f in read.findings] == [
        ("weather", "note", "Nothing to do if it is only a remark."),
        ("ground.leve_m", "warn", "Was level_m meant?"),
    ]


def test_unknown_files_and_sheets_are_told(tmp_path):
    folder = write_folder(tmp_path / "s", grund="a\n1\n")
    (folder / "photo.jpg").write_bytes(b"\xff\xd8\xff")
    (folder / ".hidden").write_bytes(b"")
    told = [(f.where, f.level, f.rule) for f in read_pack(folder).findings]
    assert told == [("photo.jpg", "note", "FI-03"), ("grund.csv", "warn", "FI-03")]
    book = write_workbook(tmp_path / "s.xlsx", Sheet1={})
    assert [(f.where, f.level) for f in read_pack(book).findings] == [("s.xlsx Sheet1", "note")]


def test_an_object_of_very_many_fields_is_refused_as_one():
    with pytest.raises(Refused, match=r"\$\.site, site: 201 fields are more than 200"):
        from_json(good(site={"code": "KE-04"} | {f"k{n}": n for n in range(200)}), name="")


SHORT = [{"ab2_m": n, "mn2_m": 0.3, "apparent_resistivity_ohm_m": 100} for n in (1, 2, 3)]
CURVE = GOOD["soundings"][0]["readings"]


def curve(changes):
    """The good sounding alone, with readings exchanged by their place."""
    readings = [reading | changes.get(n, {}) for n, reading in enumerate(CURVE)]
    return good(soundings=[{"offset_m": 40.0, "array": "schlumberger", "readings": readings}])


def rods(*depths, refused=False):
    """Probes every 10 m from 24 m on; the settled line is left out."""
    probes = [
        {"offset_m": 24.0 + 8 * n, "depth_m": depth, "refused": refused}
        for n, depth in enumerate(depths)
    ]
    return good(probes=probes, rock_line=None, rock=None)


def spread(*picks):
    keys = ("shot_m", "geophone_m", "time_ms")
    return good(
        refraction=[{"offset_m": 44, "picks": [dict(zip(keys, p, strict=True)) for p in picks]}]
    )


READING = "soundings.readings."
# Four points, close enough in the bed, with both banks, and nothing tested.
SMALL = {
    "pack": 1,
    "site": {"code": "KE-04"},
    "ground": GOOD["ground"][1:5],
    "toes": {"left_m": 24, "right_m": 33},
}
# Probe feet stand at 96.13 and 95.82 m: the line is 0.07 m above the first, under the second.
HIGH_LINE = [
    {"offset_m": 0, "level_m": 101.0},
    {"offset_m": 36, "level_m": 96.2},
    {"offset_m": 44, "level_m": 95.8},
    {"offset_m": 70, "level_m": 95.0},
]
DOUBTS = [
    (
        "ground jumps",
        with_row("ground", 7, level_m=103.6),
        "XS-03",
        "warn",
        "$.ground[7]",
        "ground.level_m",
    ),
    (
        "four points",
        SMALL,
        "XS-01",
        "warn",
        "$.ground[0]",
        "ground",
    ),
    (
        "no left bank",
        good(ground=GOOD["ground"][2:], rock_line=None),
        "XS-01",
        "warn",
        "$.ground[0]",
        "ground",
    ),
    (
        "gap in the bed",
        good(ground=GOOD["ground"][:3] + GOOD["ground"][4:]),
        "XS-01",
        "warn",
        "$.ground[3]",
        "ground",
    ),
    (
        "toe without a point",
        good(toes={"left_m": 25, "right_m": 58}),
        "XS-01",
        "warn",
        "$.toes",
        "toes.left_m",
    ),
    (
        "lone refusal",
        rods(5.0, 2.0, 5.0, refused=True),
        "PR-05",
        "warn",
        "$.probes[1]",
        "probes.depth_m",
    ),
    ("rod length", rods(4.5, 4.5, 4.5, 4.5), "PR-07", "warn", "$.probes[0]", "probes.depth_m"),
    (
        "line above a probe",
        good(rock=None, rock_line=HIGH_LINE),
        "RK-03",
        "hold",
        "$.probes[0]",
        "probes.depth_m",
    ),
    (
        "water above the ground",
        good(ground_water={"water_level_m": 103.3}),
        "LV-09",
        "hold",
        "$.ground_water",
        "ground_water.water_level_m",
    ),
    (
        "AB/2 falls",
        curve({3: {"ab2_m": 2.5}}),
        "SO-01",
        "hold",
        "$.soundings[0].readings[3]",
        READING + "ab2_m",
    ),
    (
        "MN too wide",
        curve({5: {"mn2_m": 3.0}}),
        "SO-02",
        "hold",
        "$.soundings[0].readings[5]",
        READING + "mn2_m",
    ),
    (
        "no repeat",
        curve({7: {"ab2_m": 11}}),
        "SO-03",
        "warn",
        "$.soundings[0].readings[7]",
        READING + "mn2_m",
    ),
    (
        "repeat differs",
        curve({7: {"apparent_resistivity_ohm_m": 81.0}}),
        "SO-04",
        "warn",
        "$.soundings[0].readings[7]",
        READING + "apparent_resistivity_ohm_m",
    ),
    (
        "decimal point slipped",
        curve({4: {"apparent_resistivity_ohm_m": 8.336}}),
        "SO-05",
        "hold",
        "$.soundings[0].readings[4]",
        READING + "apparent_resistivity_ohm_m",
    ),
    (
        "climbs too steeply",
        curve({9: {"apparent_resistivity_ohm_m": 140.0}}),
        "SO-06",
        "hold",
        "$.soundings[0].readings[9]",
        READING + "apparent_resistivity_ohm_m",
    ),
    (
        "few readings",
        good(soundings=[{"offset_m": 40, "array": "schlumberger", "readings": SHORT}]),
        "SO-08",
        "hold",
        "$.soundings[0].readings",
        READING[:-1],
    ),
    (
        "arrival earlier",
        spread((0, 5, 9), (0, 10, 8), (10, 5, 9)),
        "RF-01",
        "hold",
        "$.refraction[0].picks[1]",
        "refraction.picks.time_ms",
    ),
    (
        "one direction",
        spread((0, 5, 9), (0, 10, 15)),
        "RF-02",
        "warn",
        "$.refraction[0]",
        "refraction",
    ),
    (
        "late trigger",
        spread((0, 10, 15), (10, 0, 15.9)),
        "RF-03",
        "warn",
        "$.refraction[0].picks[1]",
        "refraction.picks.time_ms",
    ),
]


@pytest.mark.parametrize("case", DOUBTS, ids=lambda case: case[0])
def test_a_doubt_is_told_and_the_pack_kept(case):
    """Oracle: the office's list of checks, whose id stands in the table."""
    _, pack, rule, level, where, field = case
    told = [(f.rule, f.level, f.where, f.field) for f in from_json(pack, name="").findings]
    expected = [(rule, level, where, field)] if rule else []
    assert [each for each in told if each[0] == rule or not rule] == expected


def test_the_limits_of_doubts_themselves_pass():
    """Oracle: the figures of the list of checks: 3 m, 12 m, three rods, 15 %, factor 2, 5 %."""
    assert from_json(rods(4.5, 4.5, 4.5)).findings == ()
    assert from_json(spread((0, 10, 15), (10, 0, 15.75))).findings == ()
    within = curve({7: {"apparent_resistivity_ohm_m": 69.386256 * 1.1499}})
    assert from_json(within).findings == ()


def test_a_gap_between_tests_across_the_bed_is_held():
    """Oracle: PR-06, 12 m; the gap of 16 m is called, the one of 12 m is not."""
    probes = [{"offset_m": offset, "depth_m": 5, "refused": True} for offset in (20, 32, 48, 58)]
    pack = from_json(good(probes=probes, rock=None, rock_line=None))
    assert [(f.rule, f.level, f.what) for f in pack.findings] == [
        ("PR-06", "hold", "No probe between 32 and 48 m.")
    ]


def test_a_depth_among_the_levels_is_held():
    """Oracle: LV-09; ground lies at 40 to 43 m on its datum, 41 m is a level."""
    ground = [point | {"level_m": point["level_m"] - 60} for point in GOOD["ground"]]
    probes = [{"offset_m": 36, "depth_m": 41.0, "refused": True}]
    water = {"water_level_m": 39.0}
    pack = good(ground=ground, probes=probes, rock=None, rock_line=None, ground_water=water)
    assert [(f.rule, f.field) for f in from_json(pack).findings] == [("LV-09", "probes.depth_m")]


def test_a_reading_with_too_wide_mn_is_left_out_and_the_rest_kept():
    """Oracle: SO-02 held: nine of the ten readings stay, in their order."""
    readings = from_json(curve({5: {"mn2_m": 3.0}})).soundings[0].readings
    assert [reading.ab2_m for reading in readings] == [1.5, 2, 3, 4, 6, 10, 10, 15, 20]


def test_rock_touching_the_ground_is_allowed():
    """Oracle: an outcrop; rock and ground at one level."""
    line = [{"offset_m": 0, "level_m": 103.2}, {"offset_m": 24, "level_m": 95}]
    assert from_json(good(rock_line=line)).rock_line[0].level_m == 103.2


@pytest.mark.parametrize("name", ["example-a.json", "example-b.json", "example-c.json"])
def test_the_worked_examples_are_packs(name):
    """Oracle: bed levels of handbook 13, the lowest ground between the toes (1.6)."""
    pack = read_pack(PACKS / name)
    bed_level_m = {"example-a.json": 100.0, "example-b.json": 249.7, "example-c.json": 75.0}
    inside = [
        point.level_m
        for point in pack.ground
        if pack.toes.left_m <= point.offset_m <= pack.toes.right_m
    ]
    assert min(inside) == bed_level_m[name]
    assert pack.wall.changed == ("side_slope",)


def test_the_folder_one_stands_in_is_named_too(tmp_path, monkeypatch):
    folder = write_folder(tmp_path / "KE-04", toes=None)
    monkeypatch.chdir(folder)
    with pytest.raises(Refused) as refused:
        read_pack(Path())
    assert {f.where for f in refused.value.findings} == {"KE-04"}
