"""Packs that must be refused, in all forms: what is handed in and what the refusal must name.

`WRONG_PACKS` is shared: the reader's tests and those of the commands run over the same table.
"""

import io
import json
import struct
import zipfile
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from tests.structures.intake.packs import (
    GOOD,
    GOOD_TABLES,
    good,
    with_row,
    workbook_bytes,
    write_folder,
    write_workbook,
    write_zip,
)

PNG = b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR"
FIFTY_MB = 50_000_000


@dataclass(frozen=True)
class WrongPack:
    """How to write it under a folder, and the place and field that a blocking finding names."""

    name: str
    build: Any
    where: str
    field: str

    def write(self, folder: Path) -> Path:
        return self.build(folder)


def document(name, pack, where, field):
    """A wrong JSON pack, from a document or from text."""
    text = pack if isinstance(pack, str | bytes) else json.dumps(pack)

    def build(folder):
        path = folder / "pack.json"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        return path

    return WrongPack(name, build, f"pack.json {where}".strip(), field)


def row(name, part, place, changes, field, at=None):
    """A wrong JSON pack in which one row of a list is changed."""
    where = at or f"$.{part}[{place}]"
    return document(name, with_row(part, place, **changes), where, f"{part}.{field}")


def tables(name, changes, where, field):
    """A wrong folder of CSV files."""
    return WrongPack(name, lambda folder: write_folder(folder / "survey", **changes), where, field)


def reading(name, changes, field, sounding=0, place=3):
    """A wrong reading of a sounding of the JSON pack."""
    soundings = json.loads(json.dumps(GOOD["soundings"]))
    soundings[sounding]["readings"][place] |= changes
    where = f"$.soundings[{sounding}].readings[{place}]"
    return document(name, good(soundings=soundings), where, f"soundings.readings.{field}")


def archive(name, entries, where):
    """A wrong zip."""
    return WrongPack(name, lambda folder: write_zip(folder / "p.zip", entries), where, "")


def sheet(name, changes, where, field):
    """A wrong workbook."""
    return WrongPack(name, lambda f: write_workbook(f / "s.xlsx", **changes), where, field)


def raw(name, file, content, where):
    """A file of given bytes."""

    def build(folder):
        (folder / file).write_bytes(content)
        return folder / file

    return WrongPack(name, build, where, "")


def _large_file(folder):
    path = folder / "large.json"
    with path.open("wb") as stream:
        stream.truncate(FIFTY_MB)
    return path


def _large_table(folder):
    write_folder(folder / "survey")
    with (folder / "survey" / "ground.csv").open("wb") as stream:
        stream.truncate(FIFTY_MB)
    return folder / "survey"


def _locked(folder):
    """A zip whose list says that its entry is encrypted (flag bit 0 of the zip specification)."""
    path = write_zip(folder / "p.zip", {"site.csv": GOOD_TABLES["site.csv"]})
    content = bytearray(path.read_bytes())
    listed = content.index(b"PK\x01\x02")
    struct.pack_into("<H", content, listed + 8, 1)
    path.write_bytes(content)
    return path


def _nested_zip():
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as inner:
        inner.writestr("site.csv", GOOD_TABLES["site.csv"])
    return stream.getvalue()


def _unordered(text):
    lines = text.splitlines()
    lines[3], lines[4] = lines[4], lines[3]
    return "\n".join(lines) + "\n"


TWICE = json.dumps(GOOD)[:-1] + ', "toes": {"left_m": 20, "right_m": 58}}'
GROUND_CSV = GOOD_TABLES["ground.csv"]

WRONG_PACKS = [
    # the document
    document("no JSON", '{"pack": 1,\n "site": }', "line 2 column 10", ""),
    document("JSON cut off", '{"pack": 1,\n"site"', "line 2 column 7", ""),
    document("top level is a list", [GOOD], "$", ""),
    document("key twice", TWICE, "$", "toes"),
    document("not UTF-8", json.dumps(GOOD).encode().replace(b"ford", b"f\xf6rd"), "line 1", ""),
    document("nests too deep", '{"pack": ' + "[" * 40 + "]" * 40 + "}", "", ""),
    document("bottomless", "[" * 100_000, "", ""),
    document("empty document", b" \n", "", ""),
    # required parts
    document("no version", good(pack=None), "$", "pack"),
    document("version as text", good(pack="1"), "$", "pack"),
    document("version 2", good(pack=2), "$", "pack"),
    document("version true", good(pack=True), "$", "pack"),
    document("no site", good(site=None), "$", "site.code"),
    document("no code", good(site={"name": "Keldun ford"}), "$.site", "site.code"),
    document("code is a path", good(site={"code": "../KE-04"}), "$.site", "site.code"),
    document("site is text", good(site="KE-04"), "$", "site"),
    document("no ground", good(ground=None), "$", "ground"),
    document("one ground point", good(ground=GOOD["ground"][:1]), "$.ground", "ground"),
    document("ground is an object", good(ground={}), "$.ground", "ground"),
    document("no toes", good(toes=None), "$", "toes.left_m"),
    document("one toe", good(toes={"left_m": 24.0}), "$.toes", "toes.right_m"),
    # offsets
    document("ground point is a number", good(ground=[1, 2]), "$.ground[1]", "ground"),
    row("offset missing", "ground", 2, {"offset_m": None}, "offset_m"),
    row("offset twice", "ground", 2, {"offset_m": 12.0}, "offset_m"),
    row("offsets out of order", "ground", 3, {"offset_m": 14.0}, "offset_m"),
    document(
        "measured from the right bank",
        good(ground=GOOD["ground"][::-1]),
        "$.ground[1]",
        "ground.offset_m",
    ),
    row("offset without end", "ground", 7, {"offset_m": 1e9}, "offset_m"),
    document("toe outside", good(toes={"left_m": -2, "right_m": 58}), "$.toes", "toes.left_m"),
    document("toes exchanged", good(toes={"left_m": 58, "right_m": 24}), "$.toes", "toes.left_m"),
    row("bore outside", "rock", 0, {"offset_m": 75.0}, "offset_m"),
    row("probe outside", "probes", 0, {"offset_m": -1.0}, "offset_m"),
    row("sounding outside", "soundings", 0, {"offset_m": 71.0}, "offset_m"),
    row("spread outside", "refraction", 0, {"offset_m": 99.0}, "offset_m"),
    # numbers
    row("text in a number", "ground", 1, {"level_m": "about 101"}, "level_m"),
    row("number in quotes", "ground", 1, {"level_m": "101.6"}, "level_m"),
    row("decimal comma", "ground", 1, {"level_m": "101,6"}, "level_m"),
    row("unit in a number", "probes", 0, {"depth_m": "4 m"}, "depth_m"),
    row("letter for a digit", "probes", 0, {"depth_m": "O.5"}, "depth_m"),
    row("yes in a number", "ground", 1, {"level_m": True}, "level_m"),
    row("not a number", "ground", 1, {"level_m": float("nan")}, "level_m"),
    row("without end", "probes", 1, {"depth_m": float("inf")}, "depth_m"),
    row("huge number", "ground", 1, {"level_m": 10**400}, "level_m"),
    row("list in a number", "ground", 1, {"level_m": [101.6]}, "level_m", "$.ground[1].level_m"),
    # levels and depths
    row("level typed as depth", "probes", 0, {"depth_m": 96.2}, "depth_m"),
    row("level typed as rock depth", "rock", 0, {"depth_m": 94.0}, "depth_m"),
    row("negative depth", "probes", 0, {"depth_m": -4.0}, "depth_m"),
    row("depth typed as level", "rock_line", 1, {"level_m": 6.6}, "level_m"),
    row("rock above ground", "rock_line", 0, {"level_m": 103.5}, "level_m"),
    document(
        "rock above ground between its points",
        good(rock_line=[{"offset_m": 0, "level_m": 103.2}, {"offset_m": 70, "level_m": 102.9}]),
        "$.rock_line[1]",
        "rock_line",
    ),
    document(
        "rock line of one point", good(rock_line=GOOD["rock_line"][:1]), "$.rock_line", "rock_line"
    ),
    row("rock line goes back", "rock_line", 2, {"offset_m": 20.0}, "offset_m"),
    row("rock line past the ground", "rock_line", 2, {"offset_m": 80.0}, "offset_m"),
    document(
        "water depth typed as level",
        good(ground_water={"water_level_m": 1.2}),
        "$.ground_water",
        "ground_water.water_level_m",
    ),
    # tests
    row("refused not answered", "probes", 0, {"refused": None}, "refused"),
    row("refused as text", "probes", 0, {"refused": "maybe"}, "refused"),
    row("met_rock not answered", "rock", 0, {"met_rock": None}, "met_rock"),
    row("unknown method", "rock", 0, {"method": "guess"}, "method"),
    row("outcrop with a depth", "rock", 0, {"method": "outcrop"}, "depth_m"),
    row("outcrop that is no rock", "rock", 0, {"method": "outcrop", "met_rock": False}, "met_rock"),
    # soundings and refraction
    reading("resistivity of zero", {"apparent_resistivity_ohm_m": 0}, "apparent_resistivity_ohm_m"),
    reading(
        "negative resistivity", {"apparent_resistivity_ohm_m": -9}, "apparent_resistivity_ohm_m"
    ),
    reading("AB/2 of zero", {"ab2_m": 0}, "ab2_m"),
    reading("MN wider than AB", {"mn2_m": 6.0}, "mn2_m"),
    reading("sd as a share", {"sd_percent": 0.03}, "sd_percent"),
    reading("Wenner without a", {"a_m": None, "ab2_m": 3.0, "mn2_m": 1.0}, "a_m", sounding=1),
    row("unknown array", "soundings", 0, {"array": "dipole"}, "array"),
    row(
        "sounding without readings",
        "soundings",
        0,
        {"readings": []},
        "readings",
        "$.soundings[0].readings",
    ),
    row("spread without picks", "refraction", 0, {"picks": None}, "picks"),
    document(
        "arrival before the shot",
        good(
            refraction=[{"offset_m": 44, "picks": [{"shot_m": 0, "geophone_m": 5, "time_ms": -1}]}]
        ),
        "$.refraction[0].picks[0]",
        "refraction.picks.time_ms",
    ),
    # settings
    document("misspelt setting", good(wall={"thicknes_m": 0.9}), "$.wall", "wall.thicknes_m"),
    document("unknown works", good(works={"pumphours": 4}), "$.works", "works.pumphours"),
    document("unknown water", good(ground_water={"k": 4}), "$.ground_water", "ground_water.k"),
    document("wall too thin", good(wall={"thickness_m": 0.2}), "$.wall", "wall.thickness_m"),
    document("sides too steep", good(wall={"side_slope": 0.8}), "$.wall", "wall.side_slope"),
    document(
        "sides too steep at a station",
        good(wall={"side_slope": [{"offset_m": 0, "slope": 1.5}, {"offset_m": 9, "slope": 0.5}]}),
        "$.wall.side_slope[1]",
        "wall.side_slope.slope",
    ),
    document(
        "stations out of order",
        good(wall={"side_slope": [{"offset_m": 9, "slope": 1.5}, {"offset_m": 0, "slope": 1.5}]}),
        "$.wall.side_slope[1]",
        "wall.side_slope.offset_m",
    ),
    document("half a film face", good(wall={"film_faces": 1.5}), "$.wall", "wall.film_faces"),
    document("negative pump time", good(works={"pump_hours": -1}), "$.works", "works.pump_hours"),
    # folders of CSV
    tables("no toes table", {"toes": None}, "survey", "toes.left_m"),
    tables(
        "unordered table",
        {"ground": _unordered(GROUND_CSV)},
        "ground.csv line 5",
        "ground.offset_m",
    ),
    tables(
        "text in a cell",
        {"ground": GROUND_CSV.replace("101.6", "high")},
        "ground.csv line 3",
        "ground.level_m",
    ),
    tables(
        "formula in a cell",
        {"ground": GROUND_CSV.replace("101.6", "=B2-1.6")},
        "ground.csv line 3",
        "ground.level_m",
    ),
    tables(
        "NaN in a cell",
        {"ground": GROUND_CSV.replace("101.6", "NaN")},
        "ground.csv line 3",
        "ground.level_m",
    ),
    tables(
        "blank level",
        {"ground": GROUND_CSV.replace("101.6", "")},
        "ground.csv line 3",
        "ground.level_m",
    ),
    tables(
        "limit in a depth",
        {"probes": "offset_m,depth_m,refused\n36,>4.5,yes\n"},
        "probes.csv line 2",
        "probes.depth_m",
    ),
    tables(
        "refused left blank",
        {"probes": "offset_m,depth_m,refused\n36,4.0,\n"},
        "probes.csv line 2",
        "probes.refused",
    ),
    tables(
        "unquoted decimal comma", {"toes": "left_m,right_m\n24,0,58,0\n"}, "toes.csv line 2", ""
    ),
    tables("heading missing", {"toes": "left,right_m\n24,58\n"}, "toes.csv line 2", "toes.left_m"),
    tables(
        "column missing",
        {"probes": "offset_m,deep_m,refused\n36,4.0,yes\n44,4.4,no\n"},
        "probes.csv",
        "probes.depth_m",
    ),
    tables("heading twice", {"toes": "left_m,left_m\n24,58\n"}, "toes.csv line 1", "left_m"),
    tables("headings only", {"probes": "offset_m,depth_m,refused\n"}, "probes.csv", ""),
    tables("empty table", {"ground": ""}, "ground.csv", ""),
    tables("picture named .csv", {"ground": PNG}, "ground.csv", ""),
    tables(
        "Latin-1 text",
        {"ground": GROUND_CSV.encode().replace(b"left bank", b"temp 27\xb0")},
        "ground.csv line 2",
        "",
    ),
    tables(
        "UTF-16 without its mark",
        {"ground": GROUND_CSV.encode("utf-16-le")},
        "ground.csv line 1",
        "",
    ),
    tables(
        "quote not closed",
        {"ground": GROUND_CSV.replace("left bank", '"left')},
        "ground.csv line 2",
        "",
    ),
    tables(
        "comma that may be a thousands mark",
        {"toes": "left_m;right_m\n24;1,058\n"},
        "toes.csv line 2",
        "",
    ),
    tables(
        "two rows of toes", {"toes": "left_m,right_m\n24,58\n25,58\n"}, "toes.csv line 3", "toes"
    ),
    tables(
        "sounding at two offsets",
        {
            "soundings": GOOD_TABLES["soundings.csv"].replace(
                "S1,40,schlumberger,3.0", "S1,41,schlumberger,3.0"
            )
        },
        "soundings.csv line 4",
        "soundings.offset_m",
    ),
    tables(
        "reading without a label",
        {
            "soundings": GOOD_TABLES["soundings.csv"].replace(
                "S1,40,schlumberger,3.0", ",40,schlumberger,3.0"
            )
        },
        "soundings.csv line 4",
        "soundings.sounding",
    ),
    tables(
        "side slope twice",
        {"side_slope": "offset_m,slope\n0,1.5\n"},
        "wall.csv line 2",
        "wall.side_slope",
    ),
    WrongPack("50 MB file", _large_file, "large.json", ""),
    WrongPack("50 MB table", _large_table, "ground.csv", ""),
    WrongPack("no such file", lambda folder: folder / "gone.json", "gone.json", ""),
    WrongPack("folder without tables", lambda folder: folder, "{folder}", ""),
    # archives
    archive("zip in zip", GOOD_TABLES | {"level4.zip": _nested_zip()}, "p.zip level4.zip"),
    archive("zip in zip under another name", {"ground.csv": _nested_zip()}, "p.zip ground.csv"),
    archive(
        "climbing name", GOOD_TABLES | {"../../outside.csv": "a\n1\n"}, "p.zip ../../outside.csv"
    ),
    archive("absolute name", GOOD_TABLES | {"/absolute.csv": "a\n1\n"}, "p.zip /absolute.csv"),
    archive("drive in a name", GOOD_TABLES | {"C:\\ground.csv": "a\n1\n"}, "p.zip C:\\ground.csv"),
    archive("opens to 30 MB", {"ground.csv": b"0" * 30_000_000}, "p.zip ground.csv"),
    archive("opens to a thousand times", {"ground.csv": b"0" * 5_000_000}, "p.zip ground.csv"),
    archive("thousand entries", {f"{n}.csv": "a\n" for n in range(1000)}, "p.zip"),
    archive("empty zip", {}, "p.zip"),
    WrongPack("locked zip", _locked, "p.zip site.csv", ""),
    raw("damaged zip", "p.zip", b"PK\x03\x04" + bytes(60), "p.zip"),
    raw("picture", "survey.json", PNG, "survey.json"),
    raw("picture named .csv alone", "ground.csv", PNG, "ground.csv"),
    raw("table alone", "ground.csv", GROUND_CSV.encode(), "ground.csv"),
    raw("empty file", "survey.json", b"", "survey.json"),
    raw("damaged workbook", "s.xlsx", workbook_bytes()[:3000], "s.xlsx"),
    # workbooks
    sheet(
        "text in a cell of a sheet",
        {"ground": {"B3": "high"}},
        "s.xlsx ground!B3",
        "ground.level_m",
    ),
    sheet("formula without a value", {"ground": {"B4": "=B3-1"}}, "s.xlsx ground!B4", ""),
    sheet("yes in a number cell", {"ground": {"B4": True}}, "s.xlsx ground!B4", "ground.level_m"),
    sheet("unordered sheet", {"ground": {"A4": 5}}, "s.xlsx ground!A4", "ground.offset_m"),
    sheet("level in a depth cell", {"probes": {"B2": 96.2}}, "s.xlsx probes!B2", "probes.depth_m"),
    sheet(
        "zero resistivity cell",
        {"soundings": {"G5": 0}},
        "s.xlsx soundings!G5",
        "soundings.readings.apparent_resistivity_ohm_m",
    ),
    sheet(
        "unknown setting in a sheet",
        {"wall": {"C1": "lifts_m", "C2": 1.5}},
        "s.xlsx wall!C2",
        "wall.lifts_m",
    ),
    sheet(
        "value far from the table", {"ground": {"XFD90000": 1}}, "s.xlsx sheet2.xml!XFD90000", ""
    ),
]
